package analysis

import (
	"math"

	"halfplane/analysis/interval"
)

// loopForms is the loop gain over a cell: numerators/denominators times s^(−integrators) times e^(−s·delay).
type loopForms struct {
	numerators, denominators []enclosedPolynomial
	integrators              int
	delay                    interval.Form
}

// loopOver forms the loop gain over a cell, or says what is not certain there.
func (e *enclosed) loopOver(c *cell) (l loopForms, why string) {
	stage, why := e.stageOver(c)
	if why != "" {
		return l, why
	}
	net, ok := e.networkOver(c)
	if !ok {
		return l, notCertain
	}
	l.numerators = append(stage.numerators, net.numerators...)
	l.denominators = append(net.denominators, stage.denominator)
	for _, list := range [][]enclosedPolynomial{l.numerators, l.denominators} {
		for i := range list {
			list[i] = list[i].trimmed()
		}
	}
	l.integrators, l.delay = net.integrators, stage.delay
	return l, ""
}

// between gives g = ln|T(jω)| and θ = arg(−T(jω)), up to whole turns, over ln ω from low to high; false where they cannot be bounded.
func (e *enclosed) between(l *loopForms, low, high float64, g, theta *interval.Form) bool {
	s := e.space
	var powers [6]interval.Form
	var u interval.Form
	if !e.exponentials(low, high, &u, &powers) {
		return false
	}
	*g, *theta = interval.Form{}, interval.Const(math.Pi)
	theta.Rest = 1e-15
	if !e.logarithms(l.numerators, 1, &powers, g, theta) || !e.logarithms(l.denominators, -1, &powers, g, theta) {
		return false
	}
	if l.integrators != 0 {
		var t interval.Form
		s.Scale(&t, &u, float64(l.integrators))
		s.Sub(g, g, &t)
		s.Shift(theta, theta, -math.Pi/2*float64(l.integrators))
	}
	if !isZero(&l.delay) {
		var t interval.Form
		s.Mul(&t, &l.delay, &powers[1])
		s.Sub(theta, theta, &t)
	}
	return true
}

func (e *enclosed) logarithms(list []enclosedPolynomial, sign float64, powers *[6]interval.Form, g, theta *interval.Form) bool {
	var z interval.Complex
	for i := range list {
		list[i].at(e.space, &z, powers)
		if !e.space.LogPolar(g, theta, &z, sign) {
			return false
		}
	}
	return true
}

// largeBelow is true when |T| > 1 at every frequency from 0 to e^u: with poles at the origin taken out, T·s^m there and ω^m ≤ e^(m·u).
func (e *enclosed) largeBelow(l *loopForms, u float64) bool {
	var powers [6]interval.Form
	e.powersTo(math.Exp(u)*(1+1e-12), &powers)
	var g, theta interval.Form
	if l.integrators < 0 || !e.logarithms(l.numerators, 1, &powers, &g, &theta) || !e.logarithms(l.denominators, -1, &powers, &g, &theta) {
		return false
	}
	low, _ := e.space.Bounds(&g)
	return low > u*float64(l.integrators)+1e-9*math.Abs(u)
}

// smallAbove is true when |T| < 1 at every frequency from e^u on: with the powers of s taken out, each polynomial is one in 1/s, from 0 to
// e^−u, and what is left falls with the relative degree.
func (e *enclosed) smallAbove(l *loopForms, u float64) bool {
	s := e.space
	var powers [6]interval.Form
	e.powersTo(math.Exp(-u)*(1+1e-12), &powers)
	var g, theta interval.Form
	falls := l.integrators
	upper := 0.0
	for i := range l.numerators {
		p := l.numerators[i].reversed()
		falls -= p.n - 1
		sum := 0.0
		for k := range p.n {
			_, most := s.Bounds(&powers[k])
			sum += s.Magnitude(&p.c[k]) * most
		}
		upper += math.Log(sum) + 1e-12
	}
	for i := range l.denominators {
		p := l.denominators[i].reversed()
		falls += p.n - 1
		var z interval.Complex
		p.at(s, &z, &powers)
		if !s.LogPolar(&g, &theta, &z, -1) {
			return false
		}
	}
	_, high := s.Bounds(&g)
	return falls >= 0 && upper+high-float64(falls)*u < -1e-9*math.Abs(u)
}
