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

// leftOut is what full depth did not combine: axes that stood by the sign of their sensitivity, and what they do together to the
// phase margin to first order, at the operating corner where that is most.
type leftOut struct {
	axes   int
	degree float64
}

// extremes visits at each operating corner every extreme of the moving axes, mostVertices at most, and from the worst of each figure goes on
// by single moves. It gives each corner's tally.
func (h *hunt) extremes(quick []*tally, moving []int) (found []*tally, left leftOut, err error) {
	p := h.plan
	points := len(p.points)
	bases := make([]combination, points)
	if _, err := h.run(points, func(s *search, unit int) error {
		bases[unit] = s.combination(p.points[unit], quick[unit], moving)
		return s.ctx.Err()
	}); err != nil {
		return nil, left, err
	}
	split := min(3, len(moving)) // eight units for each operating corner
	parts := 1 << split
	pieces, err := h.run(points*parts, func(s *search, unit int) error {
		list, x := bases[unit/parts].axes, slices.Clone(bases[unit/parts].x)
		for i, axis := range list[:split] {
			x[axis] = p.box.Min[axis]
			if unit%parts>>i&1 == 1 {
				x[axis] = p.box.Max[axis]
			}
		}
		p.box.Vertices(x, list[split:], func(x []float64) bool {
			s.probe(x)
			return s.ended == nil
		})
		return nil
	})
	if err != nil {
		return nil, left, err
	}
	left.axes = max(0, len(moving)-mostExtreme)
	for i := range points {
		all := newTally()
		all.merge(quick[i])
		for _, piece := range pieces[i*parts : (i+1)*parts] {
			all.merge(piece)
		}
		pieces[i] = all
		left.degree = max(left.degree, bases[i].left)
	}
	found, err = h.run(points, func(s *search, unit int) error {
		s.descend(pieces[unit], moving)
		s.keep()
		return nil
	})
	return found, left, err
}

// combination is what is visited at one operating corner: every extreme of axes, the rest as in x.
type combination struct {
	axes []int
	x    []float64
	left float64 // degrees of phase margin that the rest moves, to first order
}

// combination picks the axes whose extremes are all combined at an operating corner. Where not all can be, the others stand by the sign of
// their sensitivity at the quick pass's lowest phase margin.
func (s *search) combination(o operatingPoint, quick *tally, moving []int) combination {
	p := s.plan
	c := combination{axes: moving, x: p.at(o)}
	if len(moving) <= mostExtreme {
		return c
	}
	effect := make(map[int]float64, len(moving))
	for _, f := range [...]figure{phaseMargin, gainMargin} {
		if at := quick.at[f]; at != nil {
			for i, change := range s.changes(f, at, moving) {
				effect[moving[i]] = max(effect[moving[i]], math.Abs(change))
			}
		}
	}
	ranked := slices.Clone(moving)
	slices.SortStableFunc(ranked, func(a, b int) int { return cmp.Compare(effect[b], effect[a]) })
	rest := ranked[mostExtreme:]
	if worst := quick.at[phaseMargin]; worst != nil {
		copy(c.x, worst)
	}
	for i, change := range s.changes(phaseMargin, c.x, rest) {
		c.x[rest[i]] = worseEnd(p, rest[i], change, c.x[rest[i]])
		c.left += math.Abs(change) * 180 / math.Pi
	}
	c.axes = nil
	for _, axis := range moving {
		if !slices.Contains(rest, axis) {
			c.axes = append(c.axes, axis)
		}
	}
	return c
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
