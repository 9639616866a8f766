package plant

import (
	"math"
	"math/cmplx"

	"halfplane/analysis/transfer"
)

const comparatorHarmonics = 400 // as in theory sheet section 11; the terms fall with the square of the harmonic

// ripple is the output ripple that the compensator passes to the comparator, at the turn-off instant, as a function of operating point:
// at = r(X, D) in volts, and the sensitivities r_x (V per state unit) and r_d (V per unit duty).
type ripple struct {
	at, byDuty float64
	byState    [maxOrder]float64
}

// WithRipple counts the output ripple at the comparator (theory sheet section 11, derived there; the reason why averaged margins of boost, buck-boost
// and flyback stages can mislead: A. R. Brown and R. D. Middlebrook, "Sampled-data modeling of switching regulators", IEEE PESC 1981). It returns the
// control-to-output function whose use in the loop gain in place of s.Control gives the loop gain with ripple:
//
//	d = Fm (v + r_x x + r_d d)  →  Gvd/(1 − Fm (r_x (sI−A)⁻¹ Bd + r_d))
//
// and factor = 1/(1 − Fm r_d), its gain at high frequency over that of s.Control. compensator is C(s) at s = jω, without control ratio. It applies to
// voltage mode in continuous conduction with an analogue compensator; ok is false elsewhere and where the result is not finite.
func WithRipple(c *Circuit, s *Solution, compensator func(complex128) complex128) (control transfer.Function, factor float64, ok bool) {
	if !s.HasModel || s.Mode != Continuous || c.Modulator.Scheme != VoltageMode || check(c) != nil {
		return control, math.NaN(), false
	}
	g := Reflect(c)
	x := g.steady(s.Duty)
	m := g.average(&x)
	r := g.comparatorRipple(c, &x, m, compensator)
	k := m.control()
	if err := k.prepare(); err != nil {
		return control, math.NaN(), false
	}
	ramp := c.Modulator.ControlRatio / s.ModulatorGain
	var f [maxOrder]float64
	for j := range m.order {
		f[j] = r.byState[j] / ramp
	}
	h := 1 - r.byDuty/ramp
	factor = 1 / h
	h += g.feedForward(c, &x, m, &f)
	poles, gain, err := k.closedRoots(&f, h)
	if err != nil || math.IsNaN(gain) || math.IsInf(gain, 0) || math.IsNaN(factor) || math.IsInf(factor, 0) {
		return control, math.NaN(), false
	}
	store(&control, gain, poles, s.Control.Zeros)
	return control, factor, true
}

// comparatorRipple sums the harmonics of the duty's rectangle through the averaged plant and the compensator:
//
//	s_k = (1 − e^(−j2πkD))/(j2πk) · e^(j2πkD),  ρ = −2 Re Σ s_k C(jωk) cv (jωk − A)⁻¹,  φ = −2 Re Σ s_k C(jωk),  ωk = 2πk ff
//	r = ρ (ΔA X + ΔB U) + φ (ΔC X + ΔE U),  r_x = ρ ΔA + φ ΔC,  r_d = ∂r/∂D with X held (central difference)
func (s *Stage) comparatorRipple(c *Circuit, x *steady, m *linear, compensator func(complex128) complex128) (r ripple) {
	var passed [comparatorHarmonics]complex128
	for k := range passed {
		passed[k] = compensator(complex(0, 2*math.Pi*float64(k+1)*s.FilterFrequency)) * complex(c.Modulator.ControlRatio, 0)
	}
	row, through := s.rippleRow(m, x.duty, &passed)
	l := s.layout()
	on, off := s.interval(&l, onPart), s.interval(&l, offPart)
	for j := range m.order {
		r.byState[j] = through * (on.vo[j] - off.vo[j])
		for i := range m.order {
			r.byState[j] += row[i] * (on.dx[i][j] - off.dx[i][j])
		}
	}
	r.at = m.rippleAt(&row, through)
	step := 1e-5 * min(x.duty, 1-x.duty)
	var side [2]float64
	for i, d := range [2]float64{x.duty - step, x.duty + step} {
		y := *x
		y.duty = d
		shifted := s.average(&y)
		row, through := s.rippleRow(shifted, d, &passed)
		side[i] = shifted.rippleAt(&row, through)
	}
	r.byDuty = (side[1] - side[0]) / (2 * step)
	return r
}

// rippleAt is ρ·(duty column) + φ·(duty feed-through), V.
func (m *linear) rippleAt(row *[maxOrder]float64, through float64) float64 {
	sum := through * m.vo.duty
	for i := range m.order {
		sum += row[i] * m.duty[i]
	}
	return sum
}

// rippleRow returns ρ and φ at a duty.
func (s *Stage) rippleRow(m *linear, d float64, passed *[comparatorHarmonics]complex128) (rho [maxOrder]float64, phi float64) {
	n := m.order
	var transposed square
	for i := range n {
		for j := range n {
			transposed[i][j] = m.a[j][i]
		}
	}
	for k := range passed {
		turn := 2 * math.Pi * float64(k+1)
		sin, cos := math.Sincos(turn * d)
		back := complex(cos, sin)
		weight := (back - 1) / complex(0, turn) * passed[k]
		phi -= 2 * real(weight)
		var x [maxOrder]complex128
		for j := range n {
			x[j] = complex(m.vo.row[j], 0)
		}
		if !transposed.solveComplex(n, complex(0, turn*s.FilterFrequency), &x) || cmplx.IsNaN(x[0]) {
			return rho, math.NaN()
		}
		for j := range n {
			rho[j] -= 2 * real(weight*x[j])
		}
	}
	return rho, phi
}
