package analysis

import "halfplane/analysis/interval"

// stageForms is the control-to-output function of a power stage over a cell, modulator included: numerator/denominator, each a
// product of polynomials in s.
type stageForms struct {
	numerators  []enclosedPolynomial
	denominator enclosedPolynomial
	delay       interval.Form
}

// stageOver forms the power stage over a cell, or says what is not certain there: a duty exists, and conduction is continuous.
//
// With Y(s) the admittance of load and capacitors, b̄ the mean of the on and off interval's b, Δ their differences, and i = I/b̄
// (theory sheet sections 2 and 3, written with the load as one admittance):
//
//	re = r̄ + ρ·var b          ρ = 1/(G + Σ 1/rk), what the node's voltage steps by per ampere
//	F  = Δ(a·m·Vg − b·(V + ρ(b·i − I)) − r·i − c·VF) + b̄·ρ·Δb·i
//	vo/d = (Δb·i·(re + s·L) + b̄·F) / ((re + s·L)·Y(s) + b̄²)
//
// Both sides are multiplied by Π(1 + s·rk·Ck), so that everything is a polynomial.
func (e *enclosed) stageOver(c *cell) (out stageForms, why string) {
	s := e.space
	op, why := e.operate(c)
	if why != "" {
		return out, why
	}
	branches := e.branchesOver(c)
	var t, rho, re, l interval.Form
	if !e.parallel(branches, &op.conductance, &rho) {
		return out, notCertain
	}
	s.Mul(&re, &rho, &op.varB)
	s.Add(&re, &re, &op.meanR)
	inductance := e.value(c, "inductor.inductance")
	s.Scale(&l, &inductance, e.weights.inductance)
	e.onPrimary(&l, &op)
	series := polynomial(re, l)

	y, product := e.admittance(branches, &op.conductance)
	out.denominator = series.times(s, &y)
	var b2 interval.Form
	s.Sqr(&b2, &op.meanB)
	loaded := product.scaled(s, &b2)
	out.denominator = out.denominator.plus(s, &loaded)
	out.denominator = out.denominator.trimmed()

	numerator, ok := e.numerator(c, &op, &rho, &series)
	if !ok {
		return out, notCertain
	}
	out.numerators = append(out.numerators, numerator.trimmed())
	for i := range branches {
		b := &branches[i]
		if !isZero(&b.r) {
			s.Mul(&t, &b.r, &b.c)
			out.numerators = append(out.numerators, polynomial(interval.Const(1), t))
		}
	}
	out.delay = e.value(c, "modulator.delay")
	return out, ""
}

// numerator is Δb·i·(re + s·L) + b̄·F, modulator included: control-ratio/ramp. With feed-forward the ramp is in proportion to the input, and
// every term is divided by the input apart, so that the volts driven, which are in proportion to it too, do not depend on it.
func (e *enclosed) numerator(c *cell, op *operatingForms, rho *interval.Form, series *enclosedPolynomial) (p enclosedPolynomial, ok bool) {
	s, on, off := e.space, e.stage.On, e.stage.Off
	gain, ramp := e.value(c, "modulator.control-ratio"), e.value(c, "modulator.ramp-amplitude")
	if !s.Div(&gain, &gain, &ramp) {
		return p, false
	}
	f, driven := e.undriven(op, rho), op.driven
	var slope interval.Form
	s.Scale(&slope, &op.current, on.B-off.B)
	if e.point.Circuit.Modulator.FeedForward {
		var inverse interval.Form
		if !s.Inverse(&inverse, &op.input) {
			return p, false
		}
		s.Mul(&f, &f, &inverse)
		s.Mul(&slope, &slope, &inverse)
		s.Scale(&gain, &gain, e.point.Circuit.Modulator.NominalInput)
		driven = op.perVolt
	}
	s.Scale(&driven, &driven, on.A-off.A)
	s.Add(&f, &f, &driven)
	s.Mul(&f, &f, &op.meanB)
	if on.B == off.B {
		p = polynomial(f)
	} else {
		p = series.scaled(s, &slope)
		s.Add(&p.c[0], &p.c[0], &f)
	}
	return p.scaled(s, &gain), true
}

// undriven is F but for Δa·m·Vg, with vo of each interval.
func (e *enclosed) undriven(op *operatingForms, rho *interval.Form) (f interval.Form) {
	s, on, off := e.space, e.stage.On, e.stage.Off
	var t, step interval.Form // step: Σ over intervals of b·(b·i − I)
	s.Scale(&f, &op.output, off.B-on.B)
	s.Affine(&step, &op.current, on.B*on.B-off.B*off.B, 0, 0)
	s.Scale(&t, &op.load, on.B-off.B)
	s.Sub(&step, &step, &t)
	s.Mul(&step, &step, rho)
	s.Sub(&f, &f, &step)
	s.Sub(&t, &op.onR, &op.offR)
	s.Mul(&t, &t, &op.current)
	s.Sub(&f, &f, &t)
	s.Scale(&t, &op.drop, on.C-off.C)
	s.Sub(&f, &f, &t)
	if on.B != off.B { // the mean output voltage already has the step that Δb·i makes at the node
		s.Mul(&t, rho, &op.current)
		s.Mul(&t, &t, &op.meanB)
		s.Scale(&t, &t, on.B-off.B)
		s.Add(&f, &f, &t)
	}
	return f
}

const notCertain = "some figure's range could not be bounded"

// branchForms is one capacitor with its series resistance over a cell.
type branchForms struct{ c, r interval.Form }

func (e *enclosed) branchesOver(c *cell) []branchForms {
	list := make([]branchForms, len(e.branches))
	for i, b := range e.branches {
		capacitance, esr := e.value(c, b.capacitance), e.value(c, b.esr)
		e.space.Scale(&list[i].c, &capacitance, b.c)
		if !isZero(&esr) {
			e.space.Scale(&list[i].r, &esr, b.r)
		}
	}
	return list
}

// parallel sets rho = 1/(g + Σ 1/rk), written without dividing by a resistance that may be zero: Πr/(g·Πr + Σ Π of the others).
func (e *enclosed) parallel(branches []branchForms, g, rho *interval.Form) bool {
	s := e.space
	all, sum := interval.Const(1), interval.Const(0)
	for i := range branches {
		r := &branches[i].r
		if isZero(r) {
			*rho = interval.Form{}
			return true
		}
		// Σ Π of the others: (sum)·r + all
		s.Mul(&sum, &sum, r)
		s.Add(&sum, &sum, &all)
		s.Mul(&all, &all, r)
	}
	var den interval.Form
	s.Mul(&den, g, &all)
	s.Add(&den, &den, &sum)
	return s.Div(rho, &all, &den)
}

// admittance gives Y(s)·Π(1 + s·rk·Ck) and Π(1 + s·rk·Ck).
func (e *enclosed) admittance(branches []branchForms, g *interval.Form) (y, product enclosedPolynomial) {
	s := e.space
	y, product = polynomial(*g), polynomial(interval.Const(1))
	for i := range branches {
		b := &branches[i]
		factor := polynomial(interval.Const(1))
		if !isZero(&b.r) {
			var rc interval.Form
			s.Mul(&rc, &b.r, &b.c)
			factor = polynomial(interval.Const(1), rc)
		}
		charge := polynomial(interval.Const(0), b.c)
		charge = charge.times(s, &product)
		y = y.times(s, &factor)
		y = y.plus(s, &charge)
		product = product.times(s, &factor)
	}
	return y, product
}
