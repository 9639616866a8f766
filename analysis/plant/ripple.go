package plant

import (
	"math"

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
//	r = ρ (ΔA X + ΔB U) + φ (ΔC X + ΔE U),  r_x = ρ ΔA + φ ΔC,  r_d = ∂r/∂D with X held
//
// A and cv are averages over the period, so dA/dD = ΔA and dcv/dD = ΔC; ds_k/dD = e^(j2πkD).
func (s *Stage) comparatorRipple(c *Circuit, x *steady, m *linear, compensator func(complex128) complex128) (r ripple) {
	l := s.layout()
	on, off := s.interval(&l, onPart), s.interval(&l, offPart)
	var h harmonics
	h.n, h.duty, h.frequency = m.order, x.duty, s.FilterFrequency
	for j := range m.order {
		h.row[j], h.rowStep[j] = m.vo.row[j], on.vo[j]-off.vo[j]
		for i := range m.order {
			h.transposed[j][i], h.step[i][j] = m.a[i][j], on.dx[i][j]-off.dx[i][j]
		}
	}
	h.sum(c.Modulator.ControlRatio, compensator)
	for j := range m.order {
		r.byState[j] = h.through * h.rowStep[j]
		for i := range m.order {
			r.byState[j] += h.rho[i] * h.step[i][j]
		}
	}
	r.at = m.rippleAt(&h.rho, h.through)
	r.byDuty = m.rippleAt(&h.rhoByDuty, h.throughByDuty)
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

// harmonics sums ρ and φ with their changes by duty. transposed is Aᵀ, row cv, step and rowStep their changes by duty.
type harmonics struct {
	n                int
	duty, frequency  float64
	transposed, step square
	row, rowStep     [maxOrder]float64
	rho, rhoByDuty   [maxOrder]float64
	through          float64 // φ
	throughByDuty    float64
}

// sum goes through the harmonics. e^(j2πkD) is turned on from one to the next and set right every sixteen.
func (h *harmonics) sum(ratio float64, compensator func(complex128) complex128) {
	sin, cos := math.Sincos(2 * math.Pi * h.duty)
	turn, back := complex(cos, sin), complex(1, 0)
	for k := 1; k <= comparatorHarmonics; k++ {
		angle := 2 * math.Pi * float64(k)
		if back *= turn; k%16 == 0 {
			sin, cos := math.Sincos(angle * h.duty)
			back = complex(cos, sin)
		}
		omega := angle * h.frequency
		passed := compensator(complex(0, omega))
		passed = complex(real(passed)*ratio, imag(passed)*ratio)
		by := back * passed
		// (back − 1)/(j·angle)·passed
		weight := (by - passed) * complex(0, -1/angle)
		h.through -= 2 * real(weight)
		h.throughByDuty -= 2 * real(by)
		if h.n == 2 {
			h.pair(omega, weight, by)
			continue
		}
		h.several(omega, weight, by)
	}
}

// pair adds one harmonic's part of ρ = weight·x, x = cv (jω − A)⁻¹, and of its change by duty, by·x + weight·(ΔC + x·ΔA)(jω − A)⁻¹, for
// two states by determinants: the commonest stage.
func (h *harmonics) pair(omega float64, weight, by complex128) {
	a, b, c, d := h.transposed[0][0], h.transposed[0][1], h.transposed[1][0], h.transposed[1][1]
	// (jω − a)(jω − d) − b·c
	re, im := a*d-omega*omega-b*c, -omega*(a+d)
	size := 1 / (re*re + im*im)
	inverse := complex(re*size, -im*size)
	p, q := complex(-a, omega), complex(-d, omega)
	u, v := complex(h.row[0], 0), complex(h.row[1], 0)
	x, y := (q*u+complex(b, 0)*v)*inverse, (complex(c, 0)*u+p*v)*inverse
	u = complex(h.rowStep[0]+real(x)*h.step[0][0]+real(y)*h.step[1][0], imag(x)*h.step[0][0]+imag(y)*h.step[1][0])
	v = complex(h.rowStep[1]+real(x)*h.step[0][1]+real(y)*h.step[1][1], imag(x)*h.step[0][1]+imag(y)*h.step[1][1])
	dx, dy := (q*u+complex(b, 0)*v)*inverse, (complex(c, 0)*u+p*v)*inverse
	h.rho[0] -= 2 * real(weight*x)
	h.rho[1] -= 2 * real(weight*y)
	h.rhoByDuty[0] -= 2 * real(by*x+weight*dx)
	h.rhoByDuty[1] -= 2 * real(by*y+weight*dy)
}

// several is pair for any number of states.
func (h *harmonics) several(omega float64, weight, by complex128) {
	var x, dx [maxOrder]complex128
	for j := range h.n {
		x[j] = complex(h.row[j], 0)
	}
	if !h.transposed.solveComplex(h.n, complex(0, omega), &x) {
		x[0] = complex(math.NaN(), 0)
	}
	for j := range h.n {
		dx[j] = complex(h.rowStep[j], 0)
		for i := range h.n {
			dx[j] += complex(real(x[i])*h.step[i][j], imag(x[i])*h.step[i][j])
		}
	}
	if !h.transposed.solveComplex(h.n, complex(0, omega), &dx) {
		dx[0] = complex(math.NaN(), 0)
	}
	for j := range h.n {
		h.rho[j] -= 2 * real(weight*x[j])
		h.rhoByDuty[j] -= 2 * real(by*x[j]+weight*dx[j])
	}
}
