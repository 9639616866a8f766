package analysis

import (
	"cmp"
	"math"
	"slices"
)

// mostVertices bounds the extremes visited at one operating corner: all combinations of twelve tolerances. Where more move the
// loop, the twelve that move it most are combined and the rest stands by the sign of its sensitivity.
const mostVertices = 1 << mostExtreme

const mostExtreme = 12

// extremes visits at each operating corner every extreme of the moving axes, mostVertices at most, and from the worst of each figure goes on
// by single moves. It gives each corner's tally; complete: no extreme was left out.
func (h *hunt) extremes(quick []*tally, moving []int) (found []*tally, complete bool, err error) {
	p := h.plan
	points := len(p.points)
	axes, base := make([][]int, points), make([][]float64, points)
	if _, err := h.run(points, func(s *search, unit int) error {
		axes[unit], base[unit] = s.combined(p.points[unit], quick[unit], moving)
		return s.ctx.Err()
	}); err != nil {
		return nil, false, err
	}
	split := min(3, len(moving)) // eight units for each operating corner
	parts := 1 << split
	pieces, err := h.run(points*parts, func(s *search, unit int) error {
		list, x := axes[unit/parts], slices.Clone(base[unit/parts])
		for i, axis := range list[:min(split, len(list))] {
			x[axis] = p.box.Min[axis]
			if unit%parts>>i&1 == 1 {
				x[axis] = p.box.Max[axis]
			}
		}
		p.box.Vertices(x, list[min(split, len(list)):], func(x []float64) bool {
			s.probe(x)
			return s.ended == nil
		})
		return nil
	})
	if err != nil {
		return nil, false, err
	}
	for i := range points {
		all := newTally()
		all.merge(quick[i])
		for _, piece := range pieces[i*parts : (i+1)*parts] {
			all.merge(piece)
		}
		pieces[i] = all
	}
	found, err = h.run(points, func(s *search, unit int) error {
		s.descend(pieces[unit], moving)
		s.keep()
		return nil
	})
	return found, len(moving) <= mostExtreme, err
}

// combined gives the axes whose extremes are all combined at an operating corner, and the assignment of the rest: where not all can
// be, by the sign of their sensitivity at the quick pass's lowest phase margin.
func (s *search) combined(o operatingPoint, quick *tally, moving []int) (axes []int, base []float64) {
	p := s.plan
	x := p.at(o)
	worst := quick.at[phaseMargin]
	if len(moving) <= mostExtreme || worst == nil {
		return moving[:min(len(moving), mostExtreme)], x
	}
	copy(x, worst)
	effect := make(map[int]float64, len(moving))
	for _, f := range [...]figure{phaseMargin, gainMargin} {
		at := quick.at[f]
		if at == nil {
			continue
		}
		for i, change := range s.changes(f, at, moving) {
			effect[moving[i]] = max(effect[moving[i]], math.Abs(change))
		}
	}
	ranked := slices.Clone(moving)
	slices.SortStableFunc(ranked, func(a, b int) int { return cmp.Compare(effect[b], effect[a]) })
	rest := ranked[mostExtreme:]
	for i, change := range s.changes(phaseMargin, x, rest) {
		x[rest[i]] = worseEnd(p, rest[i], change, x[rest[i]])
	}
	for _, axis := range moving {
		if !slices.Contains(rest, axis) {
			axes = append(axes, axis)
		}
	}
	return axes, x
}

// descend goes from the worst extreme of each figure on by single moves to other extremes, until none is worse.
func (s *search) descend(from *tally, axes []int) {
	const rounds = 6 // a round that finds nothing ends it
	s.tally.merge(from)
	s.tally.points -= from.points
	for f := range figures {
		if at := from.at[f]; at != nil {
			s.plan.box.Descend(slices.Clone(at), from.worst[f], axes, rounds, s.valueOf(f))
		}
	}
}
