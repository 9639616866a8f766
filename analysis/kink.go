package analysis

import (
	"slices"
	"strings"

	"halfplane/analysis/plant"
	"halfplane/analysis/spread"
)

// kinks looks at the boundary of the conduction modes at each input voltage, around nominal parts and around the worst corners there:
// the margin has a kink at it, so neither light nor full load need be the worst (theory sheet section 10). From the worst
// boundary points on it goes downhill along the boundary.
func (h *hunt) kinks(corners []*tally, moving []int) ([]*tally, error) {
	p := h.plan
	if p.design.Nominal.Circuit.Synchronous {
		return nil, nil
	}
	inputs := p.inputs()
	return h.run(len(inputs), func(s *search, unit int) error {
		candidates := p.candidates(corners, inputs[unit])
		if p.wide(p.load) {
			axes := p.kinkAxes(moving)
			for _, x := range candidates {
				p.box.Vertices(x, axes, func(x []float64) bool {
					s.kink(x, p.load)
					return s.ended == nil
				})
			}
			s.alongKink(moving)
		}
		for _, axis := range append([]int{p.input}, p.inductances(moving)...) {
			for _, x := range candidates {
				s.kink(x, axis)
			}
		}
		s.keep()
		return nil
	})
}

// quickKinks is what quick depth sees of it: the boundary over load and over input voltage through the corners with the lowest margins.
func (h *hunt) quickKinks(corners []*tally) error {
	p := h.plan
	if p.design.Nominal.Circuit.Synchronous {
		return nil
	}
	_, err := h.run(len(corners), func(s *search, unit int) error {
		for _, f := range [...]figure{phaseMargin, gainMargin} {
			if x := corners[unit].at[f]; x != nil {
				s.kink(x, p.load)
				s.kink(x, p.input)
			}
		}
		s.keep()
		return nil
	})
	return err
}

// inputs lists the input voltages of the operating corners, each once.
func (p *plan) inputs() []float64 {
	var list []float64
	for _, o := range p.points {
		if !slices.Contains(list, o.input) {
			list = append(list, o.input)
		}
	}
	return list
}

// candidates are the assignments around which things are looked at, at one input voltage: nominal parts and the worst of each figure
// at the operating corners of that input.
func (p *plan) candidates(corners []*tally, input float64) [][]float64 {
	list := [][]float64{p.at(operatingPoint{input, p.nominalOf(p.load, 0)})}
	for f := range figures {
		here := newTally()
		for i, c := range corners {
			if p.points[i].input == input {
				here.merge(c)
			}
		}
		if x := here.at[f]; x != nil {
			list = append(list, slices.Clone(x))
		}
	}
	return list
}

// kinkAxes gives the axes whose vertices are visited at the conduction boundary: those of what stores energy, or, where that
// were too many, the inductances, which move the boundary.
func (p *plan) kinkAxes(moving []int) []int {
	const most = 5
	var list []int
	for _, axis := range moving {
		if storesEnergy(p.design.Axes[axis].Path) {
			list = append(list, axis)
		}
	}
	if len(list) > most {
		return p.inductances(list)
	}
	return list
}

// inductances picks the axes that are inductances of the power stage.
func (p *plan) inductances(axes []int) []int {
	var list []int
	for _, axis := range axes {
		if path := p.design.Axes[axis].Path; storesEnergy(path) && strings.HasSuffix(path, ".inductance") {
			list = append(list, axis)
		}
	}
	return list
}

// kink evaluates both sides of the boundary on an axis through x, whose value there stays, and gives the worse figures of the two. NaN
// throughout where the axis is not wide or its ends are in the same mode.
func (s *search) kink(x []float64, axis int) reading {
	both := newTally()
	if !s.plan.wide(axis) || s.ended != nil {
		return both.worst
	}
	before := x[axis]
	defer func() { x[axis] = before }()
	for _, v := range s.sides(x, axis) {
		x[axis] = v
		r := s.probe(x)
		both.enter(x, &r)
	}
	return both.worst
}

// sides gives the values of an axis next to the boundary of the conduction modes on either side of it, nil: no boundary. x is left
// anyhow.
func (s *search) sides(x []float64, axis int) []float64 {
	mode := func(v float64) plant.Mode {
		x[axis] = v
		return s.worker.mode(x)
	}
	low, high := s.plan.box.Min[axis], s.plan.box.Max[axis]
	at := mode(low)
	if other := mode(high); at == 0 || other == 0 || other == at { // 0: not reached
		return nil
	}
	if axis == s.plan.load {
		const beside = 1e-8
		critical := plant.CriticalCurrent(&s.worker.point.Circuit)
		below, above := critical*(1-beside), critical*(1+beside)
		if low < below && above < high && mode(below) == at && mode(above) != at {
			return []float64{below, above}
		}
	}
	rounds := 26
	if !s.plan.full {
		rounds = 10
	}
	inside, outside := spread.Boundary(low, high, rounds, func(v float64) bool { return mode(v) == at })
	return []float64{inside, outside}
}

// alongKink goes downhill along the boundary from the worst boundary point of each margin.
func (s *search) alongKink(moving []int) {
	p := s.plan
	axes := slices.Clone(moving)
	if p.wide(p.input) {
		axes = append([]int{p.input}, axes...)
	}
	for _, f := range [...]figure{phaseMargin, gainMargin, modulusMargin} {
		if s.tally.at[f] == nil {
			continue
		}
		x := slices.Clone(s.tally.at[f])
		s.downhill(x, s.tally.worst[f], moving, axes, func(x []float64) float64 {
			r := s.kink(x, p.load)
			return r[f]
		})
	}
}
