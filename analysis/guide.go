package analysis

import (
	"errors"
	"math"
	"slices"

	"halfplane/analysis/plant"
)

// guess is where a figure may be at its worst: the worst vertex of one operating corner with the other tolerances moved by the sign of their
// sensitivity, and what the figure should come to there, to first order.
type guess struct {
	point     int // operating corner
	f         figure
	x         []float64
	predicted float64
	moved     float64 // how far from the vertex's own value
}

// guesses looks for them at the worst vertex of each figure of one operating corner.
func (s *search) guesses(point int, corners []Corner) (list []guess) {
	for f := range figures {
		at := worstOf(f, corners)
		if at < 0 {
			continue
		}
		x := valuesOf(&corners[at], make([]float64, len(s.plan.nominal)))
		changes := s.changesAt(f, x, corners[at].Loop, s.plan.other)
		if changes == nil {
			continue
		}
		g := guess{point: point, f: f, x: x}
		for i, change := range changes {
			axis := s.plan.other[i]
			g.x[axis] = worseEnd(s.plan, axis, change, x[axis])
			if !math.IsNaN(change) {
				g.moved += math.Abs(change) / 2 // from nominal to one end
			}
		}
		g.moved *= f.unit(&corners[at])
		g.predicted = f.badness(&corners[at]) - g.moved
		list = append(list, g)
	}
	return list
}

// unit is what a change of one, as changesAt gives it, is in the figure's own badness.
func (f figure) unit(c *Corner) float64 {
	switch f {
	case phaseMargin:
		return 180 / math.Pi
	case gainMargin:
		return 20 / math.Ln10
	case crossoverOverZero, highCrossover, lowCrossover:
		return math.Abs(f.badness(c))
	}
	return 1
}

// promising keeps of each figure's guesses the one with the worst prediction and those that come so near it that first order cannot tell
// them apart.
func promising(all []guess) []guess {
	const doubt = 0.4 // of what the tolerances move
	var list []guess
	for f := range figures {
		least := math.Inf(1)
		for _, g := range all {
			if g.f == f {
				least = math.Min(least, g.predicted)
			}
		}
		for _, g := range all {
			if g.f == f && !(g.predicted-doubt*g.moved > least+1e-9*math.Abs(least)) && !slices.ContainsFunc(list, func(have guess) bool { return slices.Equal(have.x, g.x) }) {
				list = append(list, g)
			}
		}
	}
	return list
}

// operating works through nominal and the operating corners as quick depth does: nominal parts and all vertices of what stores energy at
// each, then for every figure the other tolerances by the sign of their sensitivity, where that can be the worst. It gives each
// corner's tally.
func (h *hunt) operating() ([]*tally, error) {
	p := h.plan
	found, err := h.run(len(p.points)+1, func(s *search, unit int) error {
		if unit == len(p.points) {
			_, err := s.visit(p.nominal)
			return err
		}
		return s.vertices(p.points[unit])
	})
	if err != nil {
		return nil, err
	}
	if err := h.plainStages(found[:len(p.points)]); err != nil || len(p.other) == 0 {
		return found[:len(p.points)], err
	}
	lists := make([][]guess, len(p.points))
	if err := h.team.run(len(p.points), func(w *worker, unit int) error {
		lists[unit] = newSearch(h.ctx, p, w).guesses(unit, h.kept[unit])
		return h.ctx.Err()
	}); err != nil {
		return nil, err
	}
	best := promising(slices.Concat(lists...))
	worse, err := h.run(len(best), func(s *search, unit int) error {
		_, _ = s.visit(best[unit].x)
		return s.ctx.Err()
	})
	if err != nil {
		return nil, err
	}
	for i, t := range worse {
		found[best[i].point].merge(t)
	}
	return found[:len(p.points)], nil
}

// plainStages visits the worst point of each figure of the power stage once more with every part nominal that changes nothing there, so that a
// finding about it names what matters and no more.
func (h *hunt) plainStages(found []*tally) error {
	all := newTally()
	for _, t := range found {
		all.merge(t)
	}
	p := h.plan
	_, err := h.run(1, func(s *search, _ int) error {
		for f := highDuty; f < figures; f++ {
			if all.at[f] == nil || math.IsNaN(all.worst[f]) {
				continue
			}
			x := slices.Clone(all.at[f])
			for _, axis := range p.tolerant {
				before := x[axis]
				x[axis] = p.nominal[axis]
				s.worker.set(x)
				reached := !errors.Is(s.worker.solveErr, plant.ErrUnreachable)
				if v := f.ofPlant(&s.worker.solution, reached); !(math.Abs(v-all.worst[f]) <= 1e-12*math.Abs(v)) {
					x[axis] = before
				}
			}
			_, _ = s.visit(x)
		}
		return s.ctx.Err()
	})
	return err
}

// changes measures the point x and gives the first-order changes of the figure's badness there.
func (s *search) changes(f figure, x []float64, axes []int) []float64 {
	w := s.worker
	if f.ofStage() {
		return s.stageChanges(f, x, axes)
	}
	w.set(x)
	if !w.hasLoop() || w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures) != nil {
		return nil
	}
	figures := w.figures
	return s.changesAt(f, x, &figures, axes)
}
