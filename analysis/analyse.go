package analysis

import (
	"context"
	"fmt"
	"math"

	"halfplane/analysis/spread"
)

// Depth says how thoroughly the box of tolerances is searched.
type Depth int

const (
	Quick Depth = iota + 1 // all extremes of inductance, capacitance and ESR; the rest by the sign of its sensitivity
	Full                   // and a search over all extremes, the conduction boundary and the inside
)

// String gives the command line's name of the depth.
func (d Depth) String() string {
	switch d {
	case Quick:
		return "quick"
	case Full:
		return "full"
	}
	return "unknown depth"
}

// Options of an analysis. A Depth of 0 is Full; Jobs below 1 means one for each processor.
type Options struct {
	Depth Depth
	Jobs  int
}

// plan is what an analysis goes through, made once from the design.
type plan struct {
	design   *Design
	box      spread.Box
	nominal  []float64
	input    int   // axis of the input voltage, −1: none
	load     int   // axis of the load current, −1: none
	store    []int // axes whose vertices are all visited: what stores energy, and ESR
	other    []int // the other tolerances
	tolerant []int // store and other
	points   []operatingPoint
	full     bool
}

// operatingPoint is an assignment of the operating axes; all else is nominal.
type operatingPoint struct{ input, load float64 }

// Analyse walks the design's corners: nominal, every operating corner, at each of them the extremes of the tolerances as
// Options.Depth asks, and finds the worst figures. The result does not depend on Jobs. Errors: an axis that is no field,
// numbers outside the models' domain at nominal, or ctx ended. A corner that cannot be modelled is a corner without a loop.
func Analyse(ctx context.Context, d *Design, o Options) (*Result, error) {
	p, err := newPlan(d, o)
	if err != nil {
		return nil, err
	}
	team, err := newTeam(ctx, d, o.Jobs)
	if err != nil {
		return nil, err
	}
	found := make([][]Corner, len(p.points)+1)
	err = team.run(len(found), func(w *worker, unit int) error {
		s := newSearch(ctx, p, w)
		if unit == len(p.points) {
			_, err := s.visit(p.nominal)
			found[unit] = s.corners
			return err
		}
		err := s.operating(p.points[unit])
		found[unit] = s.corners
		return err
	})
	if err != nil {
		return nil, fmt.Errorf("analysing the design: %w", err)
	}
	r := &Result{}
	r.gather(p, found)
	if p.full {
		if err := p.refine(ctx, team, r); err != nil {
			return nil, fmt.Errorf("analysing the design: %w", err)
		}
	}
	r.Worst = worsts(r.Corners)
	if err := r.explain(p, team); err != nil {
		return nil, fmt.Errorf("analysing the design: %w", err)
	}
	r.Method = fmt.Sprintf("extreme-value, %d corners, by sensitivity", len(r.Corners))
	if p.full {
		r.Method = fmt.Sprintf("extreme-value, %d corners, refined", len(r.Corners))
	}
	return r, nil
}

// newPlan sorts the axes and lists the operating points: {min, max} input × {min, max} load, then nominal input at full load,
// without repeats.
func newPlan(d *Design, o Options) (*plan, error) {
	p := &plan{design: d, input: -1, load: -1, full: o.Depth != Quick}
	for i, a := range d.Axes {
		if !(a.Min <= a.Nominal && a.Nominal <= a.Max) || math.IsInf(a.Min, 0) || math.IsInf(a.Max, 0) {
			return nil, fmt.Errorf("analysing the design: %s from %v over %v to %v", a.Path, a.Min, a.Nominal, a.Max)
		}
		p.box.Min, p.box.Max = append(p.box.Min, a.Min), append(p.box.Max, a.Max)
		p.nominal = append(p.nominal, a.Nominal)
		switch {
		case a.Path == "input-voltage":
			p.input = i
		case a.Path == "load.current":
			p.load = i
		case a.Min == a.Max:
		case storesEnergy(a.Path):
			p.store = append(p.store, i)
		default:
			p.other = append(p.other, i)
		}
	}
	p.limitStore(mostVertices)
	p.tolerant = append(append([]int{}, p.store...), p.other...)
	inputs, loads := p.range2(p.input, d.Nominal.Circuit.InputVoltage), p.range2(p.load, d.Nominal.Circuit.LoadCurrent)
	for _, v := range inputs {
		for _, i := range loads {
			p.addPoint(v, i)
		}
	}
	p.addPoint(p.nominalOf(p.input, d.Nominal.Circuit.InputVoltage), loads[1])
	return p, nil
}

// range2 gives the ends of an operating axis, both the value itself without an axis.
func (p *plan) range2(axis int, value float64) [2]float64 {
	if axis < 0 {
		return [2]float64{value, value}
	}
	return [2]float64{p.box.Min[axis], p.box.Max[axis]}
}

func (p *plan) nominalOf(axis int, value float64) float64 {
	if axis < 0 {
		return value
	}
	return p.nominal[axis]
}

func (p *plan) addPoint(input, load float64) {
	for _, have := range p.points {
		if have.input == input && have.load == load {
			return
		}
	}
	p.points = append(p.points, operatingPoint{input, load})
}

// at gives the assignment of an operating point with nominal parts.
func (p *plan) at(o operatingPoint) []float64 {
	x := append([]float64(nil), p.nominal...)
	if p.input >= 0 {
		x[p.input] = o.input
	}
	if p.load >= 0 {
		x[p.load] = o.load
	}
	return x
}
