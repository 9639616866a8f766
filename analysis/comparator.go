package analysis

import (
	"slices"
	"strings"

	"halfplane/analysis/loop"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// comparator looks for the lowest phase margin with the comparator's ripple counted, among points whose averaged loop is stable: the
// corners that are worst for the averaged loop need not be worst for the ripple (the highest ESR usually is). It starts at the worst
// extremes of each operating corner and goes on by single moves where the ripple costs something.
func (h *hunt) comparator(corners []*tally, axes []int) error {
	if !h.plan.hasComparator() {
		return nil
	}
	_, err := h.run(len(corners), func(s *search, unit int) error {
		var starts [][]float64
		for _, f := range [...]figure{phaseMargin, gainMargin, modulusMargin, highCrossover} {
			if at := corners[unit].at[f]; at != nil {
				starts = append(starts, at)
			}
		}
		s.ripplePoint(starts, axes, 3)
		return nil
	})
	return err
}

// hasComparator says whether the design has a ramp that an analogue compensator's output is compared with.
func (p *plan) hasComparator() bool {
	return p.design.Nominal.Circuit.Modulator.Scheme == plant.VoltageMode && p.design.Nominal.Network.Kind != network.Digital
}

// quickComparator is what quick depth does of it: from the worst of the corners that were explained on, with each ESR at its highest.
func (h *hunt) quickComparator(r *Result) error {
	if !h.plan.hasComparator() {
		return nil
	}
	var worst *Corner
	for i := range r.Corners {
		c := &r.Corners[i]
		if c.Ripple != nil && c.Loop.Stable && (worst == nil || rippleBadness(c.Ripple) < rippleBadness(worst.Ripple)) {
			worst = c
		}
	}
	if worst == nil || !(worst.Loop.PhaseMargin-worst.Ripple.PhaseMargin > rippleCosts) {
		return nil
	}
	w, x := h.team.workers[0], valuesOf(worst, make([]float64, len(h.plan.nominal)))
	return h.team.run(1, func(*worker, int) error {
		s := newSearch(h.ctx, h.plan, w)
		least := rippleBadness(worst.Ripple)
		for _, axis := range h.plan.resistances() {
			before := x[axis]
			if x[axis] = h.plan.box.Max[axis]; before == x[axis] {
				continue
			}
			if v, _ := s.withRipple(x); v < least {
				least = v
				continue
			}
			x[axis] = before
		}
		if at := valuesOf(worst, make([]float64, len(x))); slices.Equal(x, at) || s.ended != nil {
			return s.ended
		}
		s.keepRipple(x)
		c := s.corners[0]
		w.explain(&c, true)
		r.Corners = append(r.Corners, c)
		return nil
	})
}

// resistances picks the axes that are ESRs.
func (p *plan) resistances() []int {
	var list []int
	for _, axis := range p.store {
		if strings.HasSuffix(p.design.Axes[axis].Path, ".esr") {
			list = append(list, axis)
		}
	}
	return list
}

// rippleCosts is how many degrees the ripple takes before a search for its worst is worth it.
const rippleCosts = 2.5

// rippleBadness ranks figures with ripple: an unstable loop is worse than any margin.
func rippleBadness(l *loop.Figures) float64 {
	if !l.Stable {
		return l.PhaseMargin - 1000
	}
	return l.PhaseMargin
}

// ripplePoint keeps the worst point it finds from the starts.
func (s *search) ripplePoint(starts [][]float64, axes []int, rounds int) {
	var x []float64
	worst, lost := nan, 0.0
	for _, at := range starts {
		if v, less := s.withRipple(at); v < worst || x == nil && v == v {
			x, worst, lost = slices.Clone(at), v, less
		}
	}
	if x == nil {
		return
	}
	if lost > rippleCosts {
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
	return rippleBadness(f), r[phaseMargin] - f.PhaseMargin
}

// keepRipple visits a point and adds the figures with ripple.
func (s *search) keepRipple(x []float64) {
	i, _ := s.visit(x)
	s.worker.set(x)
	if c := &s.corners[i]; c.Loop != nil {
		c.Ripple = s.worker.ripple()
	}
}
