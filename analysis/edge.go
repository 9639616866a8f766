package analysis

import (
	"math"

	"halfplane/analysis/spread"
)

// edges closes in on the edge of stability, where the modulus margin vanishes, and on the edge where the plant's own poles cross into the
// right half-plane (an inner loop that begins to oscillate), where the gain at a phase crossover grows without bound.
func (h *hunt) edges() error {
	kept := h.kept
	_, err := h.run(2, func(s *search, unit int) error {
		if unit == 0 {
			s.edge(kept, modulusMargin, 40, func(c *Corner) bool { return c.Loop.Stable })
		} else {
			s.edge(kept, gainMargin, 12, func(c *Corner) bool { return c.Loop.UnstablePlantPoles == 0 })
		}
		return nil
	})
	return err
}

// edge bisects between corners where something holds and corners where it does not, between the two of them with the worst figure.
func (s *search) edge(kept [][]Corner, f figure, rounds int, holds func(*Corner) bool) {
	var worst [2]*Corner
	for _, list := range kept {
		for i := range list {
			c := &list[i]
			if math.IsNaN(f.badness(c)) {
				continue
			}
			side := 0
			if !holds(c) {
				side = 1
			}
			if worst[side] == nil || f.badness(c) < f.badness(worst[side]) {
				worst[side] = c
			}
		}
	}
	if worst[0] == nil || worst[1] == nil {
		return
	}
	n := len(s.plan.nominal)
	from, to, x := valuesOf(worst[0], make([]float64, n)), valuesOf(worst[1], make([]float64, n)), make([]float64, n)
	spread.Boundary(0, 1, rounds, func(part float64) bool {
		for i := range x {
			x[i] = from[i] + part*(to[i]-from[i])
		}
		if s.ended == nil {
			s.ended = s.ctx.Err()
		}
		if s.ended != nil {
			return false
		}
		i, _ := s.visit(x)
		return s.corners[i].Loop != nil && holds(&s.corners[i])
	})
}
