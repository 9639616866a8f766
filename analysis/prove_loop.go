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
	amplifier                *amplifierForms           // another form of the first denominator, nil: none
	bend                     [interval.Symbols]float64 // square of the half width of each axis over its middle: what straight lines may leave out
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
	for i := range c.low {
		if half := (c.high[i] - c.low[i]) / (c.high[i] + c.low[i]); half >= 0 && half <= 1 {
			l.bend[i] = half * half
		}
	}
	l.integrators, l.delay, l.amplifier = net.integrators, stage.delay, net.amplifier
	return l, ""
}

// gainForms encloses T(jω) over a cell and a stretch of frequency. Factors whose logarithm could be taken are in g = ln|T| and
// θ = arg(−T), up to whole turns; of the others only the size is bounded: what they add to ln|T| lies between low and high.
type gainForms struct {
	g, theta  interval.Form
	whole     bool // no factor is left out of g and θ
	low, high float64
}

// between encloses the loop gain over ln ω from low to high; false where it cannot be.
func (e *enclosed) between(l *loopForms, low, high float64, t *gainForms) bool {
	s := e.space
	var powers [6]interval.Form
	var u, f interval.Form
	if !e.exponentials(low, high, &u, &powers) {
		return false
	}
	*t = gainForms{theta: interval.Const(math.Pi), whole: true}
	t.theta.Rest = 1e-15
	e.factors(l.numerators, 1, &powers, t)
	denominators := l.denominators
	if l.amplifier != nil && e.amplifierLogs(l.amplifier, &u, &powers, t) {
		denominators = denominators[1:]
	}
	e.factors(denominators, -1, &powers, t)
	if l.integrators != 0 {
		s.Scale(&f, &u, float64(l.integrators))
		s.Sub(&t.g, &t.g, &f)
		s.Shift(&t.theta, &t.theta, -math.Pi/2*float64(l.integrators))
	}
	if !isZero(&l.delay) {
		s.Mul(&f, &l.delay, &powers[1])
		s.Sub(&t.theta, &t.theta, &f)
	}
	return true
}

// amplifierLogs takes ln(D + M) off the loop gain as amplifierForms describes; false, and nothing is changed, where M is not small.
func (e *enclosed) amplifierLogs(a *amplifierForms, u *interval.Form, powers *[6]interval.Form, t *gainForms) bool {
	s := e.space
	g, theta := *u, interval.Const(math.Pi/2) // ln s
	theta.Rest = 1e-16
	if !e.logarithms([]enclosedPolynomial{a.df, a.dy}, 1, powers, &g, &theta) {
		return false
	}
	var ratio, phase interval.Form
	if !e.logarithms([]enclosedPolynomial{a.added}, 1, powers, &ratio, &phase) {
		return false
	}
	s.Sub(&ratio, &ratio, &g)
	s.Sub(&phase, &phase, &theta)
	if _, high := s.Bounds(&ratio); high > -0.5 {
		return false
	}
	var one interval.Complex
	if !s.ExpPolar(&one, &ratio, &phase) {
		return false
	}
	s.Shift(&one.Re, &one.Re, 1)
	if !s.LogPolar(&g, &theta, &one, 1) {
		return false
	}
	s.Sub(&t.g, &t.g, &g)
	s.Sub(&t.theta, &t.theta, &theta)
	return true
}

// size bounds ln|T|.
func (e *enclosed) size(t *gainForms) (low, high float64) {
	low, high = e.space.Bounds(&t.g)
	return low + t.low, high + t.high
}

func (e *enclosed) factors(list []enclosedPolynomial, sign float64, powers *[6]interval.Form, t *gainForms) {
	var z interval.Complex
	for i := range list {
		list[i].at(e.space, &z, powers)
		if e.space.LogPolar(&t.g, &t.theta, &z, sign) {
			continue
		}
		t.whole = false
		least, most := e.space.Size(&z)
		low, high := math.Log(least)-1e-12, math.Log(most)+1e-12
		if sign < 0 {
			low, high = -high, -low
		}
		t.low, t.high = t.low+low, t.high+high
	}
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
	powersTo(math.Exp(u)*(1+1e-12), &powers)
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
	powersTo(math.Exp(-u)*(1+1e-12), &powers)
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
