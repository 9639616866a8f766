package analysis

import (
	"math"

	"halfplane/analysis/interval"
	"halfplane/analysis/network"
)

// networkForms is a compensator over a cell: numerators/denominators, polynomials in s, and poles at the origin beside them.
type networkForms struct {
	numerators, denominators []enclosedPolynomial
	integrators              int
	amplifier                *amplifierForms
}

// amplifierForms splits the denominator of a network around a finite amplifier, D + M, into the ideal network's D = s·Df·Dy and what the
// amplifier adds, M = Na·(D + Nf·Ny + Nf·Dy/RL): where M is small beside D, ln(D + M) = ln Df + ln Dy + ln s + ln(1 + M/D) keeps the
// dependence on the parts better than the expanded sum does.
type amplifierForms struct{ df, dy, added enclosedPolynomial }

// networkOver forms the compensator over a cell (theory sheet section 7; the closed forms of package network); false where a part that
// divides may be zero.
func (e *enclosed) networkOver(c *cell) (out networkForms, ok bool) {
	s, kind := e.space, e.point.Network.Kind
	at := func(name string) interval.Form { return e.value(c, "compensator."+name) }
	given := func(name string) bool { return e.given("compensator." + name) }
	one := interval.Const(1)
	product := func(a, b *interval.Form) (p interval.Form) { s.Mul(&p, a, b); return p }
	sum := func(a, b interval.Form) (p interval.Form) { s.Add(&p, &a, &b); return p }

	r1, c1 := at("upper-resistor"), at("integrator-capacitor")
	// Nf = 1 + s·R2·C1, Df = s·(C1 + C2 + s·R2·C1·C2)
	nf, df := polynomial(one), polynomial(c1)
	if kind != network.Type1 {
		r2 := at("feedback-resistor")
		tau := product(&r2, &c1)
		nf = polynomial(one, tau)
		if given("rolloff-capacitor") {
			c2 := at("rolloff-capacitor")
			df = polynomial(sum(c1, c2), product(&tau, &c2))
		}
	}
	// Ny = 1 + s·(R1+R3)·C3, Dy = R1·(1 + s·R3·C3)
	ny, dy := polynomial(one), polynomial(r1)
	if kind != network.Type1 && kind != network.Type2 && given("lead-capacitor") {
		c3, r3 := at("lead-capacitor"), interval.Const(0)
		if given("lead-resistor") {
			r3 = at("lead-resistor")
		}
		both := sum(r1, r3)
		ny = polynomial(one, product(&both, &c3))
		if given("lead-resistor") {
			tau := product(&r3, &c3)
			dy = polynomial(r1, product(&r1, &tau))
		}
	}
	out.numerators = []enclosedPolynomial{nf, ny}
	zero := interval.Const(0)
	switch {
	case kind == network.Transconductance:
		// gm·RL·Nf·Ny / ((s·Df + Nf/ro)·(Dy + RL·Ny))
		gm, rl := at("transconductance"), at("lower-resistor")
		gain := product(&gm, &rl)
		out.numerators[0] = nf.scaled(s, &gain)
		loaded := ny.scaled(s, &rl)
		loaded = dy.plus(s, &loaded)
		out.denominators = append(out.denominators, loaded)
		if given("output-resistance") {
			ro := at("output-resistance")
			var g interval.Form
			if !s.Inverse(&g, &ro) {
				return out, false
			}
			leak := nf.scaled(s, &g)
			shifted := shifted(&df, &zero)
			out.denominators = append(out.denominators, shifted.plus(s, &leak))
		} else {
			out.denominators = append(out.denominators, df)
			out.integrators = 1
		}
	case given("amplifier.gain-bandwidth") || given("amplifier.open-loop-gain"):
		// s·Df·Dy + Na·(s·Df·Dy + Nf·Ny + Nf·Dy/RL), Na = 1/A0 + s/ωgb
		forward := df.times(s, &dy)
		forward = shifted(&forward, &zero)
		noise := nf.times(s, &ny)
		noise = noise.plus(s, &forward)
		if given("lower-resistor") {
			rl := at("lower-resistor")
			var g interval.Form
			if !s.Inverse(&g, &rl) {
				return out, false
			}
			divided := nf.times(s, &dy)
			divided = divided.scaled(s, &g)
			noise = noise.plus(s, &divided)
		}
		a0, slope := interval.Const(1e6), zero
		if given("amplifier.open-loop-gain") {
			a0 = at("amplifier.open-loop-gain")
		}
		if !s.Inverse(&a0, &a0) {
			return out, false
		}
		na := polynomial(a0)
		if given("amplifier.gain-bandwidth") {
			gb := at("amplifier.gain-bandwidth")
			s.Scale(&slope, &gb, 2*math.Pi)
			if !s.Inverse(&slope, &slope) {
				return out, false
			}
			na = polynomial(a0, slope)
		}
		noise = noise.times(s, &na)
		out.amplifier = &amplifierForms{df, dy, noise}
		out.denominators = append(out.denominators, forward.plus(s, &noise))
	default:
		out.denominators = append(out.denominators, df, dy)
		out.integrators = 1
	}
	return out, true
}

// shifted is s·p.
func shifted(p *enclosedPolynomial, zero *interval.Form) (r enclosedPolynomial) {
	r.n = p.n + 1
	r.c[0] = *zero
	copy(r.c[1:], p.c[:p.n])
	return r
}
