package plant

import (
	"math"

	"halfplane/analysis/transfer"
)

// secondOrder fills the small-signal model of a single-inductor stage with one bank and no input filter under voltage mode in closed
// form: state-space averaging (Middlebrook & Ćuk, "A general unified approach to modelling switching-converter power stages", IEEE PESC 1976; coefficients in section
// 2 of the theory sheet), states inductor current i and capacitor voltage v:
//
//	A = [−(r̄+α rc b̄)/L, −α b̄/L; α b̄/C, −α G/C],  vo = α rc b̄ i + α v + …,  α = 1/(1 + G rc)
//
// Poles from trace and determinant, zeros from the numerator e s² + (c·b − e tr A) s + (c adj(−A) b + e det A). It allocates nothing once
// the slices of out have grown.
func (s *Stage) secondOrder(x *steady, out *Solution) {
	d := x.duty
	bank := s.branches[0]
	alpha := 1 / (1 + s.Conductance*bank.R)
	l, c, rc := s.Inductance, bank.C, alpha*bank.R
	a, b, r := between(s.On.A, s.Off.A).at(d), between(s.On.B, s.Off.B).at(d), between(s.On.R, s.Off.R).at(d)
	a11, a12 := -(r+rc*b)/l, -alpha*b/l
	a21, a22 := alpha*b/c, -alpha*s.Conductance/c
	c1, c2 := rc*b, alpha

	// The duty column: on minus off interval at the operating point, where interval k's output voltage is V + α rc (b_k i − I).
	step := s.On.B - s.Off.B
	feed := rc * step * x.current
	onVolts := s.On.A*s.Drive*s.Input - s.On.B*(s.Output+rc*(s.On.B*x.current-s.Load)) - s.On.R*x.current - s.On.C*s.Drop
	offVolts := s.Off.A*s.Drive*s.Input - s.Off.B*(s.Output+rc*(s.Off.B*x.current-s.Load)) - s.Off.R*x.current - s.Off.C*s.Drop
	b1, b2 := (onVolts-offVolts)/l, alpha*step*x.current/c

	trace := a11 + a22
	det := a11*a22 - a12*a21
	n0 := c1*(a12*b2-a22*b1) + c2*(a21*b1-a11*b2) + feed*det
	n1 := c1*b1 + c2*b2 - feed*trace
	out.Control.Reset()
	out.Control.Gain = n0 / det
	p, q := transfer.Quadratic(1, -trace, det)
	out.Resonance, out.Quality = resonance(p, q)
	out.Control.Poles = append(out.Control.Poles, p, q)
	switch {
	case feed != 0:
		p, q := transfer.Quadratic(feed, n1, n0)
		out.Control.Zeros = append(out.Control.Zeros, p, q)
	case n1 != 0:
		out.Control.Zeros = append(out.Control.Zeros, complex(-n0/n1, 0))
	}

	// Input voltage: column [ā m/L, 0]; load current: column [α rc b̄/L, −α/C] and the feed-through −α rc.
	out.LineGain = math.Abs((c2*a21 - c1*a22) * a * s.Drive / l / det)
	o1, o2 := rc*b/l, -alpha/c
	out.OutputResistance = -((c1*(a12*o2-a22*o1)+c2*(a21*o1-a11*o2))/det - rc)
}

// resonance returns frequency (Hz) and quality of two poles (rad/s): |p|/2π and |p|/(−2 Re p) of a conjugate pair, √(p1 p2)/2π and
// √(p1 p2)/|p1+p2| of two real ones. A quality without bound (no damping) is NaN.
func resonance(p, q complex128) (frequency, quality float64) {
	if imag(p) == 0 && (real(p) < 0) != (real(q) < 0) {
		return math.NaN(), math.NaN() // a saddle (constant-power load): nothing oscillates
	}
	m := math.Sqrt(math.Hypot(real(p), imag(p))) * math.Sqrt(math.Hypot(real(q), imag(q)))
	quality = m / -(real(p) + real(q))
	if imag(p) == 0 {
		quality = math.Abs(quality)
	}
	if math.IsInf(quality, 0) {
		quality = math.NaN()
	}
	return m / (2 * math.Pi), quality
}

// isSecondOrder reports whether the closed form applies in continuous conduction.
func (s *Stage) isSecondOrder() bool {
	return s.branchCount == 1 && !s.HasFilter && s.Second.Inductance == 0
}
