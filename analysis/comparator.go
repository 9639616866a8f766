package analysis

import (
	"slices"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// comparator looks for the lowest phase margin with the comparator's ripple counted, among points whose averaged loop is stable: the
// corners that are worst for the averaged loop need not be worst for the ripple (the highest ESR usually is). It starts at the worst
// extremes of each operating corner, in quick depth at the worst of all, and goes on by single moves where the ripple
// costs something.
func (h *hunt) comparator(corners []*tally, axes []int) error {
	p := h.plan
	c, n := &p.design.Nominal.Circuit, &p.design.Nominal.Network
	if c.Modulator.Scheme != plant.VoltageMode || n.Kind == network.Digital {
		return nil
	}
	rounds := 3
	if !p.full {
		all := newTally()
		for _, t := range corners {
			all.merge(t)
		}
		corners, rounds = []*tally{all}, 1
	}
	_, err := h.run(len(corners), func(s *search, unit int) error {
		s.ripplePoint(corners[unit], axes, rounds)
		return nil
	})
	return err
}

// ripplePoint keeps the worst point it finds from the worst ones of a tally.
func (s *search) ripplePoint(from *tally, axes []int, rounds int) {
	const costs = 2.5 // degrees that the ripple takes before it is worth a search
	var x []float64
	worst, lost := nan, 0.0
	for _, f := range [...]figure{phaseMargin, gainMargin, modulusMargin, highCrossover} {
		at := from.at[f]
		if at == nil || s.ended != nil {
			continue
		}
		if v, less := s.withRipple(at); v < worst || x == nil && v == v {
			x, worst, lost = slices.Clone(at), v, less
		}
	}
	if x == nil {
		return
	}
	if lost > costs {
		s.plan.box.Descend(x, worst, axes, rounds, func(x []float64) float64 {
			v, _ := s.withRipple(x)
			return v
		})
	}
	s.keepRipple(x)
}

// withRipple judges a point by its phase margin with ripple (degrees), an unstable one by that less 1000; less is what the ripple takes from
// the averaged margin. NaN where the averaged loop is not stable or the correction does not apply.
func (s *search) withRipple(x []float64) (margin, less float64) {
	if s.ended == nil {
		s.ended = s.ctx.Err()
	}
	if s.ended != nil {
		return nan, nan
	}
	w := s.worker
	w.set(x)
	var r reading
	w.read(&r)
	s.tally.enter(x, &r)
	if !(r[modulusMargin] >= 0) || !w.figures.Stable {
		return nan, nan
	}
	f := w.ripple()
	if f == nil {
		return nan, nan
	}
	less = r[phaseMargin] - f.PhaseMargin
	if !f.Stable {
		return f.PhaseMargin - 1000, less
	}
	return f.PhaseMargin, less
}

// keepRipple visits a point and adds the figures with ripple.
func (s *search) keepRipple(x []float64) {
	i, _ := s.visit(x)
	s.worker.set(x)
	if c := &s.corners[i]; c.Loop != nil {
		c.Ripple = s.worker.ripple()
	}
}
