package analysis

import (
	"fmt"
	"math"

	"halfplane/analysis/spread"
)

// plan is what an analysis goes through, made once from the design.
type plan struct {
	design   *Design
	box      spread.Box
	nominal  []float64
	input    int   // axis of the input voltage, −1: none
	load     int   // axis of the load current, −1: none
	store    []int // axes whose vertices quick depth visits all: what stores energy, and ESR
	other    []int // the other tolerances
	tolerant []int // store and other
	points   []operatingPoint
	full     bool
	keepAll  bool
}

// operatingPoint is an assignment of the operating axes; all else is nominal.
type operatingPoint struct{ input, load float64 }

// newPlan sorts the axes and lists the operating points: {min, max} input × {min, max} load, then nominal input at full load,
// without repeats.
func newPlan(d *Design, o Options) (*plan, error) {
	p := &plan{design: d, input: -1, load: -1, full: o.Depth != Quick, keepAll: o.KeepAll}
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
	p.limitStore(mostStore)
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
	p.operate(x, o)
	return x
}

// operate moves x to an operating point, its parts stay.
func (p *plan) operate(x []float64, o operatingPoint) {
	if p.input >= 0 {
		x[p.input] = o.input
	}
	if p.load >= 0 {
		x[p.load] = o.load
	}
}

// wide says whether an axis exists and has a range.
func (p *plan) wide(axis int) bool { return axis >= 0 && p.box.Min[axis] < p.box.Max[axis] }
