package analysis

import (
	"context"
	"math"
	"strings"

	"halfplane/analysis/plant"
	"halfplane/analysis/spread"
)

// refine is what full depth adds to the operating corners: the boundary of the conduction modes, the inside of the operating
// range and of the tolerances around the worst corners, and the edge of stability where there is one.
func (p *plan) refine(ctx context.Context, t *team, r *Result) error {
	inputs := p.inputs()
	found := make([][]Corner, len(inputs))
	err := t.run(len(inputs), func(w *worker, unit int) error {
		s := newSearch(ctx, p, w)
		s.boundary(inputs[unit], p.candidates(r, inputs[unit]))
		found[unit] = s.corners
		return s.ended
	})
	if err != nil {
		return err
	}
	r.append(p, found)

	found = make([][]Corner, figures+2)
	err = t.run(len(found), func(w *worker, unit int) error {
		s := newSearch(ctx, p, w)
		switch f := figure(unit); f {
		default:
			s.inside(f, r)
		case figures:
			s.edge(r, modulusMargin, 40, func(c *Corner) bool { return c.Loop.Stable })
		case figures + 1:
			s.edge(r, gainMargin, 12, func(c *Corner) bool { return c.Loop.UnstablePlantPoles == 0 })
		}
		found[unit] = s.corners
		return s.ended
	})
	if err != nil {
		return err
	}
	r.append(p, found)
	return nil
}

// inputs lists the input voltages of the operating corners, each once.
func (p *plan) inputs() []float64 {
	var list []float64
	for _, o := range p.points {
		known := false
		for _, v := range list {
			known = known || v == o.input
		}
		if !known {
			list = append(list, o.input)
		}
	}
	return list
}

// candidates are the assignments from which the conduction boundary at one input voltage is looked at: nominal parts and the worst
// of each figure so far at that input.
func (p *plan) candidates(r *Result, input float64) [][]float64 {
	list := [][]float64{p.at(operatingPoint{input, p.nominalOf(p.load, 0)})}
	var here []Corner
	for i := range r.Corners {
		if p.input < 0 || r.Corners[i].At[p.input].Value == input {
			here = append(here, r.Corners[i])
		}
	}
	for f := range figures {
		if at := worstOf(f, here); at >= 0 {
			list = append(list, valuesOf(&here[at], make([]float64, len(p.nominal))))
		}
	}
	return list
}

// boundary evaluates both sides of the load at which the conduction mode changes, for every vertex of what stores energy
// around each candidate: the margin has a kink there, so neither light nor full load need be the worst (theory sheet
// section 10).
func (s *search) boundary(input float64, candidates [][]float64) {
	p := s.plan
	if p.load < 0 || p.design.Nominal.Circuit.Synchronous || p.box.Min[p.load] == p.box.Max[p.load] {
		return
	}
	axes := p.boundaryAxes()
	for _, x := range candidates {
		p.box.Vertices(x, axes, func(x []float64) bool {
			s.kink(x)
			s.ended = s.ctx.Err()
			return s.ended == nil
		})
	}
}

// boundaryAxes gives the axes whose vertices are visited at the conduction boundary: those of what stores energy, or, where that
// were too many, the inductances, which move the boundary.
func (p *plan) boundaryAxes() []int {
	const most = 5
	if len(p.store) <= most {
		return p.store
	}
	var list []int
	for _, axis := range p.store {
		if strings.HasSuffix(p.design.Axes[axis].Path, ".inductance") {
			list = append(list, axis)
		}
	}
	return list
}

// kink bisects the load of x between the modes and evaluates both sides.
func (s *search) kink(x []float64) {
	p, before := s.plan, x[s.plan.load]
	defer func() { x[p.load] = before }()
	mode := func(load float64) plant.Mode {
		x[p.load] = load
		s.worker.set(x)
		return s.worker.solution.Mode
	}
	light, full := p.box.Min[p.load], p.box.Max[p.load]
	at := mode(light)
	if other := mode(full); at == 0 || other == 0 || other == at { // 0: not reached
		return
	}
	inside, outside := spread.Boundary(light, full, 26, func(load float64) bool { return mode(load) == at })
	for _, load := range [2]float64{inside, outside} {
		x[p.load] = load
		_, _ = s.visit(x)
	}
}

// inside looks between the extremes from the figure's worst corner: a grid over input and load, then every axis on its own.
func (s *search) inside(f figure, r *Result) {
	const grid, passes, scatter = 5, 3, 200
	at := worstOf(f, r.Corners)
	if at < 0 {
		return
	}
	p := s.plan
	worst := f.badness(&r.Corners[at])
	x := valuesOf(&r.Corners[at], make([]float64, len(p.nominal)))
	best := append([]float64(nil), x...)
	for _, input := range p.grid(p.input, grid) {
		for _, load := range p.grid(p.load, grid) {
			if p.input >= 0 {
				x[p.input] = input
			}
			if p.load >= 0 {
				x[p.load] = load
			}
			if v := s.value(f, x); v < worst {
				worst = v
				copy(best, x)
			}
		}
	}
	axes := p.axesOf(f)
	for _, axis := range [2]int{p.load, p.input} {
		if axis >= 0 {
			axes = append([]int{axis}, axes...)
		}
	}
	value := func(x []float64) float64 { return s.value(f, x) }
	for range passes {
		before := worst
		worst = p.box.Inside(best, worst, axes, grid, value)
		if math.Abs(worst-before) <= 1e-4*math.Abs(before) {
			break
		}
	}
	if f == rhpZero || f == crossoverOverZero && p.design.Nominal.Circuit.Topology.TwoInductor() {
		// a complex pair of zeros leaves the right half-plane somewhere inside: the border is curved
		p.box.Scatter(best, worst, axes, scatter, 1, value)
	}
}

// axesOf gives the tolerances that a figure depends on.
func (p *plan) axesOf(f figure) []int {
	if f != rhpZero {
		return p.tolerant
	}
	var list []int
	for _, axis := range p.tolerant {
		if belongsToCircuit(p.design.Axes[axis].Path) {
			list = append(list, axis)
		}
	}
	return list
}

// grid gives n values over an operating axis, a single one without an axis.
func (p *plan) grid(axis, n int) []float64 {
	if axis < 0 || p.box.Min[axis] == p.box.Max[axis] {
		return []float64{p.nominalOf(axis, 0)}
	}
	list := make([]float64, n)
	for i := range list {
		list[i] = p.box.Min[axis] + (p.box.Max[axis]-p.box.Min[axis])*float64(i)/float64(n-1)
	}
	return list
}

// edge closes in on the edge between corners where something holds and corners where it does not, between the two of them with
// the worst figure. At the edge of stability the modulus margin vanishes; where the plant's own poles cross (an inner loop
// that begins to oscillate) the gain at a phase crossover grows without bound.
func (s *search) edge(r *Result, f figure, rounds int, holds func(*Corner) bool) {
	worst := [2]int{-1, -1}
	for i := range r.Corners {
		c := &r.Corners[i]
		if math.IsNaN(f.badness(c)) {
			continue
		}
		side := 0
		if !holds(c) {
			side = 1
		}
		if worst[side] < 0 || f.badness(c) < f.badness(&r.Corners[worst[side]]) {
			worst[side] = i
		}
	}
	if worst[0] < 0 || worst[1] < 0 {
		return
	}
	n := len(s.plan.nominal)
	from, x := valuesOf(&r.Corners[worst[0]], make([]float64, n)), make([]float64, n)
	to := valuesOf(&r.Corners[worst[1]], make([]float64, n))
	spread.Boundary(0, 1, rounds, func(part float64) bool {
		for i := range x {
			x[i] = from[i] + part*(to[i]-from[i])
		}
		i, _ := s.visit(x)
		s.ended = s.ctx.Err()
		return s.corners[i].Loop != nil && holds(&s.corners[i])
	})
}
