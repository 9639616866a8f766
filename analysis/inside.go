package analysis

import (
	"math"
	"math/rand/v2"
	"slices"
)

// insides looks between the extremes: the worst assignments of the operating corners over a grid of input and load, and points
// scattered over the whole box.
func (h *hunt) insides(corners []*tally, moving []int) ([]*tally, error) {
	const pieces, each = 12, 200
	worst := h.plan.distinctWorst(corners)
	inputs, loads := h.plan.grid(h.plan.input), h.plan.grid(h.plan.load)
	return h.run(len(inputs)+pieces, func(s *search, unit int) error {
		if unit < len(inputs) {
			for _, load := range loads {
				s.gridPoint(operatingPoint{inputs[unit], load}, worst)
			}
			return nil
		}
		s.scatter(moving, each, uint64(unit-len(inputs)))
		return nil
	})
}

// distinctWorst lists the worst assignments of all figures at all operating corners, parts only, each once.
func (p *plan) distinctWorst(corners []*tally) [][]float64 {
	var list [][]float64
	known := make(map[string]bool)
	for _, c := range corners {
		for f := range figures {
			if c.at[f] == nil {
				continue
			}
			x := slices.Clone(c.at[f])
			p.operate(x, p.points[0])
			if key := string(appendKey(nil, x)); !known[key] {
				known[key] = true
				list = append(list, x)
			}
		}
	}
	return list
}

// grid gives values over an operating axis, its ends included: even steps, and even ratios too where the range is wide; a single
// one without a range.
func (p *plan) grid(axis int) []float64 {
	const n, wide = 5, 4
	if !p.wide(axis) {
		return []float64{p.nominalOf(axis, 0)}
	}
	low, high := p.box.Min[axis], p.box.Max[axis]
	var list []float64
	for i := range n {
		part := float64(i) / (n - 1)
		list = append(list, low+(high-low)*part)
		if low > 0 && high > wide*low && i > 0 && i < n-1 {
			list = append(list, low*math.Pow(high/low, part))
		}
	}
	slices.Sort(list)
	return list
}

// gridPoint evaluates the assignments at one operating point, then for each margin the worst of them with its parts moved by the sign of their
// sensitivity there.
func (s *search) gridPoint(o operatingPoint, assignments [][]float64) {
	if slices.Contains(s.plan.points, o) {
		return
	}
	here := newTally()
	for _, parts := range assignments {
		x := slices.Clone(parts)
		s.plan.operate(x, o)
		r := s.probe(x)
		here.enter(x, &r)
	}
	for _, f := range [...]figure{phaseMargin, gainMargin, modulusMargin} {
		if here.at[f] == nil || s.ended != nil {
			continue
		}
		x := slices.Clone(here.at[f])
		for i, change := range s.changes(f, x, s.plan.tolerant) {
			x[s.plan.tolerant[i]] = worseEnd(s.plan, s.plan.tolerant[i], change, x[s.plan.tolerant[i]])
		}
		s.probe(x)
	}
}

// scatter evaluates n random points of the box: input and load anywhere or at their ends, each tolerance at an extreme or anywhere. The
// points depend on seed alone.
func (s *search) scatter(moving []int, n int, seed uint64) {
	p := s.plan
	r := rand.New(rand.NewPCG(seed, 0x68616c66))
	axes := slices.Clone(moving)
	for _, axis := range [2]int{p.input, p.load} {
		if p.wide(axis) {
			axes = append(axes, axis)
		}
	}
	for i := 0; i < n && s.ended == nil; i++ {
		x := slices.Clone(p.nominal)
		between := r.Float64() // this share of the axes lies between its extremes
		for _, axis := range axes {
			low, high := p.box.Min[axis], p.box.Max[axis]
			switch at := r.Float64(); {
			case r.Float64() > between:
				x[axis] = low
				if at < 0.5 {
					x[axis] = high
				}
			case low > 0 && high > 4*low && r.IntN(2) == 0:
				x[axis] = low * math.Pow(high/low, at)
			default:
				x[axis] = low + (high-low)*at
			}
		}
		s.probe(x)
	}
}
