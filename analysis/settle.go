package analysis

import (
	"cmp"
	"math"
	"slices"

	"halfplane/analysis/spread"
)

// settle goes downhill within the box from the worst points of each figure that the earlier stages found, several distinct ones for the
// margins, and keeps where it ends.
func (h *hunt) settle(found []*tally, moving []int) error {
	type start struct {
		f     figure
		x     []float64
		worst float64
	}
	var starts []start
	for f := range manyCrossovers {
		most := 2
		if f <= modulusMargin {
			most = 8
		}
		for _, t := range h.plan.distinctStarts(found, f, most) {
			starts = append(starts, start{f, slices.Clone(t.at[f]), t.worst[f]})
		}
	}
	p := h.plan
	_, err := h.run(len(starts), func(s *search, unit int) error {
		at := starts[unit]
		axes := slices.Clone(moving)
		for _, axis := range [2]int{p.load, p.input} {
			if p.wide(axis) {
				axes = append([]int{axis}, axes...)
			}
		}
		value := s.valueOf(at.f)
		worst := s.downhill(at.x, at.worst, moving, axes, value)
		if at.f == rhpZero || at.f == crossoverOverZero && p.design.Nominal.Circuit.Topology.TwoInductor() {
			// a complex pair of zeros leaves the right half-plane somewhere inside: the border is curved
			p.box.Scatter(at.x, worst, axes, 200, 1, value)
		} else if at.f <= modulusMargin && len(p.box.Between(at.x, axes)) > 0 {
			p.box.Scatter(at.x, worst, axes, 150, 1, value) // it lies against a border within the box: of modes, of stability, of a further crossover
		}
		s.keep()
		return nil
	})
	return err
}

// distinctStarts picks the tallies with the worst values of a figure, points that nearly coincide counting once.
func (p *plan) distinctStarts(found []*tally, f figure, most int) []*tally {
	var list, picked []*tally
	for _, t := range found {
		if t.at[f] != nil {
			list = append(list, t)
		}
	}
	slices.SortStableFunc(list, func(a, b *tally) int { return cmp.Compare(a.worst[f], b.worst[f]) })
	for _, t := range list {
		if len(picked) == most {
			break
		}
		if !slices.ContainsFunc(picked, func(have *tally) bool { return p.near(have.at[f], t.at[f]) }) {
			picked = append(picked, t)
		}
	}
	return picked
}

// near says whether two points differ by less than a twentieth of every axis's width.
func (p *plan) near(a, b []float64) bool {
	for i := range a {
		if math.Abs(a[i]-b[i]) > 0.05*(p.box.Max[i]-p.box.Min[i]) {
			return false
		}
	}
	return true
}

// downhill makes x worse until nothing near is worse: single moves of the tolerances to their extremes, every axis over its width, then
// all axes together that ended between their extremes. It returns the value at x, which it changes.
func (s *search) downhill(x []float64, worst float64, tolerances, axes []int, value spread.Value) float64 {
	const passes, rounds, points, evaluations = 6, 4, 5, 160
	for range passes {
		before := worst
		worst = s.plan.box.Descend(x, worst, tolerances, rounds, value)
		worst = s.plan.box.Inside(x, worst, axes, points, value)
		if free := s.plan.box.Between(x, axes); len(free) > 1 {
			worst = s.plan.box.Simplex(x, worst, free, evaluations, value)
		}
		if s.ended != nil || !(before-worst > 1e-4*math.Max(math.Abs(worst), 1e-3)) {
			break
		}
	}
	return worst
}
