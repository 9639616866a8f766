package analysis

import (
	"halfplane/analysis/interval"
	"halfplane/analysis/plant"
)

// operatingForms is the operating point over a cell, of the equivalent phase on the output side.
type operatingForms struct {
	input, output, load, drop, conductance interval.Form
	driven, perVolt                        interval.Form // m·Vg and m
	squared                                interval.Form // n² over that of nominal turns, and whether it moves
	turnsMove                              bool
	duty, meanB, varB                      interval.Form
	onR, offR, meanR, current              interval.Form
}

// operate solves the operating point over a cell: the lowest root of the quadratic p0 + p1·d + p2·d² of package plant (conversion), in the
// form −2·p0/(p1 + √(p1² − 4·p2·p0)), which is that root whenever p0 < 0 and the denominator is positive. It demands 0 < d < 1 and continuous
// conduction throughout.
func (e *enclosed) operate(c *cell) (op operatingForms, why string) {
	s, w := e.space, &e.weights
	on, off := e.stage.On, e.stage.Off
	if !e.terminals(c, &op) {
		return op, notCertain
	}
	winding, onR, diode := e.value(c, "inductor.resistance"), e.value(c, "switch.on-resistance"), e.value(c, "rectifier.resistance")
	e.onPrimary(&winding, &op)
	if op.turnsMove {
		s.Mul(&onR, &onR, &op.squared)
	}
	e.resistance(&op.onR, &winding, &onR, &diode, w.onWinding, w.onSwitch, w.onDiode)
	e.resistance(&op.offR, &winding, &onR, &diode, w.offWinding, w.offSwitch, w.offDiode)

	// static ρ: the capacitors alone
	var rho interval.Form
	none := interval.Const(0)
	if !e.parallel(e.branchesOver(c), &none, &rho) {
		return op, notCertain
	}
	// Three coefficients each: of 1, d and d².
	var volts, loss [3]interval.Form
	s.Scale(&volts[0], &op.driven, off.A)
	s.Scale(&volts[1], &op.driven, on.A-off.A)
	var t interval.Form
	s.Scale(&t, &op.drop, off.C)
	s.Sub(&volts[0], &volts[0], &t)
	s.Scale(&t, &op.drop, on.C-off.C)
	s.Sub(&volts[1], &volts[1], &t)
	b0, b1 := off.B, on.B-off.B
	loss[0] = op.offR
	s.Sub(&loss[1], &op.onR, &op.offR)
	// ρ·var b, var b = (Δb)²·(d − d²)
	s.Scale(&t, &rho, b1*b1)
	s.Add(&loss[1], &loss[1], &t)
	s.Sub(&loss[2], &loss[2], &t)
	// p = b̄·volts − I·loss − V·b̄²
	var p [3]interval.Form
	s.Scale(&p[0], &volts[0], b0)
	s.Scale(&p[1], &volts[1], b0)
	s.Scale(&t, &volts[0], b1)
	s.Add(&p[1], &p[1], &t)
	s.Scale(&p[2], &volts[1], b1)
	bb := [3]float64{b0 * b0, 2 * b0 * b1, b1 * b1}
	for k := range p {
		if !isZero(&loss[k]) {
			s.Mul(&t, &loss[k], &op.load)
			s.Sub(&p[k], &p[k], &t)
		}
		if bb[k] != 0 {
			s.Scale(&t, &op.output, bb[k])
			s.Sub(&p[k], &p[k], &t)
		}
	}
	if why := e.duty(&p, &op.duty); why != "" {
		return op, why
	}
	s.Affine(&op.meanB, &op.duty, b1, b0, 0)
	var d2 interval.Form
	s.Sqr(&d2, &op.duty)
	s.Sub(&op.varB, &op.duty, &d2)
	s.Scale(&op.varB, &op.varB, b1*b1)
	s.Sub(&t, &op.onR, &op.offR)
	s.Mul(&t, &t, &op.duty)
	s.Add(&op.meanR, &op.offR, &t)
	if b1 == 0 {
		s.Scale(&op.current, &op.load, 1/b0)
	} else if !s.Div(&op.current, &op.load, &op.meanB) {
		return op, notCertain
	}
	if !e.point.Circuit.Synchronous {
		return op, e.continuous(c, &op, &rho)
	}
	return op, ""
}

// terminals fills what is seen at input and output: voltages, load and turns.
func (e *enclosed) terminals(c *cell, op *operatingForms) bool {
	s := e.space
	op.input, op.output = e.value(c, "input-voltage"), e.value(c, "output-voltage")
	op.load, op.drop = e.value(c, "load.current"), e.value(c, "rectifier.forward-drop")
	op.perVolt = interval.Const(e.stage.Drive)
	s.Scale(&op.driven, &op.input, e.stage.Drive)
	_, primary := e.symbol["turns.primary"]
	_, secondary := e.symbol["turns.secondary"]
	if op.turnsMove = primary || secondary; op.turnsMove {
		p, ratio := e.value(c, "turns.primary"), e.value(c, "turns.secondary")
		if !s.Div(&ratio, &ratio, &p) {
			return false
		}
		s.Scale(&ratio, &ratio, 1/e.stage.Turns)
		s.Mul(&op.driven, &op.driven, &ratio)
		s.Scale(&op.perVolt, &ratio, e.stage.Drive)
		s.Sqr(&op.squared, &ratio)
	}
	switch e.point.Circuit.Behaviour {
	case plant.Resistive:
		return s.Div(&op.conductance, &op.load, &op.output)
	case plant.ConstantPower:
		if !s.Div(&op.conductance, &op.load, &op.output) {
			return false
		}
		s.Scale(&op.conductance, &op.conductance, -1)
	}
	return true
}

// onPrimary carries a winding's value to the output side where the turns move; nominal turns are in the weights already.
func (e *enclosed) onPrimary(f *interval.Form, op *operatingForms) {
	if op.turnsMove && e.point.Circuit.InductorOnPrimary {
		e.space.Mul(f, f, &op.squared)
	}
}

func (e *enclosed) resistance(d, winding, onR, diode *interval.Form, a, b, c float64) {
	s := e.space
	var t interval.Form
	s.Scale(d, winding, a)
	s.Scale(&t, onR, b)
	s.Add(d, d, &t)
	s.Scale(&t, diode, c)
	s.Add(d, d, &t)
}

// duty is the lowest root of the quadratic in (0, 1).
func (e *enclosed) duty(p *[3]interval.Form, d *interval.Form) string {
	const unreached = "a duty that gives the output voltage is not certain"
	s := e.space
	if _, high := s.Bounds(&p[0]); !(high < 0) {
		return unreached
	}
	var root, t interval.Form
	if isZero(&p[2]) {
		root = p[1] // the quadratic is a line: −p0/p1
		s.Scale(&root, &root, 2)
	} else {
		s.Sqr(&root, &p[1])
		s.Mul(&t, &p[2], &p[0])
		s.Scale(&t, &t, 4)
		s.Sub(&root, &root, &t)
		if !s.Sqrt(&root, &root) {
			return unreached
		}
		s.Add(&root, &root, &p[1])
	}
	if low, _ := s.Bounds(&root); !(low > 0) {
		return unreached
	}
	s.Scale(&t, &p[0], -2)
	if !s.Div(d, &t, &root) {
		return unreached
	}
	if low, high := s.Bounds(d); !(low > 0 && high < 1) {
		return unreached
	}
	return ""
}

// continuous demands that the inductor's mean current exceeds half its ripple: i > slope·d·T/2.
func (e *enclosed) continuous(c *cell, op *operatingForms, rho *interval.Form) string {
	s, on := e.space, e.stage.On
	var volts, t interval.Form
	s.Scale(&volts, &op.driven, on.A)
	s.Scale(&t, &op.output, on.B)
	s.Sub(&volts, &volts, &t)
	s.Affine(&t, &op.current, on.B*on.B, 0, 0)
	var load interval.Form
	s.Scale(&load, &op.load, on.B)
	s.Sub(&t, &t, &load)
	s.Mul(&t, &t, rho)
	s.Sub(&volts, &volts, &t)
	s.Mul(&t, &op.onR, &op.current)
	s.Sub(&volts, &volts, &t)
	s.Scale(&t, &op.drop, on.C)
	s.Sub(&volts, &volts, &t)
	s.Mul(&volts, &volts, &op.duty)
	inductance := e.value(c, "inductor.inductance")
	s.Scale(&inductance, &inductance, e.weights.inductance)
	e.onPrimary(&inductance, op)
	s.Mul(&inductance, &inductance, &op.current)
	if _, moves := e.symbol["switching-frequency"]; moves { // i·L·2/T instead of i·L against volts·d·T/2
		frequency := e.value(c, "switching-frequency")
		s.Scale(&frequency, &frequency, 2*e.point.Circuit.Topology.FilterMultiple())
		s.Mul(&inductance, &inductance, &frequency)
	} else {
		s.Scale(&volts, &volts, e.stage.Period/2)
	}
	s.Sub(&inductance, &inductance, &volts)
	if low, _ := s.Bounds(&inductance); !(low > 0) {
		return discontinuousPart
	}
	return ""
}

const discontinuousPart = "continuous conduction is not certain"
