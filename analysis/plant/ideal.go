package plant

import "math"

// IdealOf returns the loss-free closed forms (theory sheet section 4): with M = V/(m Vg), R = V/I, the total capacitance C and the inductance
// L of the equivalent phase on the output side,
//
//	buck        D = M          |vo/d| = V/D        ω0 = 1/√(LC)   Q = R√(C/L)
//	boost       D = 1 − 1/M    |vo/d| = V/D'       ω0 = D'/√(LC)  Q = D'R√(C/L)   RHP zero D'²R/L
//	buck-boost  D = M/(1+M)    |vo/d| = V/(D·D')   ω0 = D'/√(LC)  Q = D'R√(C/L)   RHP zero D'²R/(D L)
//
// and vo/vg = V/Vg everywhere. Sepic, cuk and zeta have the buck-boost's direct-current figures only. In discontinuous conduction, decided with the lossy
// solution (the ideal boundary where that does not exist), K = 2L ff/R gives duty and gain; resonance, quality and RHP zero are
// NaN there. With a load held as a constant current or power, quality keeps R = V/I. The gain is per unit duty also under current mode.
func IdealOf(c *Circuit) Ideal {
	nan := math.NaN()
	out := Ideal{nan, nan, nan, nan, nan, nan, nan}
	if check(c) != nil {
		return out
	}
	s := Reflect(c)
	out.ESRZero = s.esrZero()
	out.LineGain = s.Output / s.Input
	if s.isDiscontinuous(c) {
		out.Duty, out.ControlGain = s.idealDiscontinuous()
		return out
	}
	m := s.Output / (s.Drive * s.Input)
	load := s.Output / s.Load
	root := math.Sqrt(s.Inductance) * math.Sqrt(s.capacitance())
	off := 1.0
	switch s.Family {
	case BuckLike:
		out.Duty = m
		out.ControlGain = s.Output / m
	case BoostLike:
		out.Duty, off = 1-1/m, 1/m
		out.ControlGain = s.Output / off
		out.RHPZero = off * off * load / s.Inductance / (2 * math.Pi)
	default:
		out.Duty, off = m/(1+m), 1/(1+m)
		out.ControlGain = s.Output / (out.Duty * off)
		out.RHPZero = off * off * load / (out.Duty * s.Inductance) / (2 * math.Pi)
	}
	if !(out.Duty > 0 && out.Duty < 1) {
		return Ideal{nan, nan, nan, nan, nan, nan, out.ESRZero}
	}
	if s.Second.Inductance > 0 {
		out.RHPZero = nan
		return out
	}
	out.Resonance = off / root / (2 * math.Pi)
	out.Quality = off * load * math.Sqrt(s.capacitance()) / math.Sqrt(s.Inductance)
	return out
}

// isDiscontinuous decides the conduction mode of a circuit as Solve does.
func (s *Stage) isDiscontinuous(c *Circuit) bool {
	if c.Synchronous {
		return false
	}
	curve := s.conversion()
	d := curve.duty(s.Output, s.Load)
	if math.IsNaN(d) {
		return false
	}
	x := s.steady(d)
	return s.discontinuous(&x)
}

// idealDiscontinuous returns the loss-free duty and |vo/d| (V) in discontinuous conduction, K = 2 L ff/R:
//
//	buck D = M√(K/(1−M)), (2V/D)(1−M)/(2−M); boost D = √(K M(M−1)), (2V/D)(M−1)/(2M−1); buck-boost D = M√K, V/D
func (s *Stage) idealDiscontinuous() (duty, gain float64) {
	m := s.Output / (s.Drive * s.Input)
	k := 2 * s.Inductance * s.FilterFrequency * s.Load / s.Output
	switch s.Family {
	case BuckLike:
		duty = m * math.Sqrt(k/(1-m))
		return duty, 2 * s.Output / duty * (1 - m) / (2 - m)
	case BoostLike:
		duty = math.Sqrt(k * m * (m - 1))
		return duty, 2 * s.Output / duty * (m - 1) / (2*m - 1)
	default:
		duty = m * math.Sqrt(k)
		return duty, s.Output / duty
	}
}
