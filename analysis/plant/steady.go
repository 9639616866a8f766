package plant

import "math"

// steady is the averaged state at one duty in continuous conduction: currents of the equivalent phase (A), the filter's terminal.
type steady struct {
	duty     float64
	current  float64 // of the inductor (first)
	second   float64 // of the second inductor, 0 without
	coupling float64 // V across the coupling capacitor
	terminal float64 // V, mean voltage at the converter's input
	drawn    float64 // A, mean current drawn there
	slope    float64 // A/s, of the inductor in the on interval at the average state, losses included
	slope2   float64 // A/s, of the second inductor
}

// steady returns the averaged state at a duty (0 < d < 1).
func (s *Stage) steady(d float64) steady {
	if s.Second.Inductance > 0 {
		return s.steadyOfTwo(d)
	}
	x := steady{duty: d}
	x.current = s.Load / between(s.On.B, s.Off.B).at(d)
	x.drawn = s.Drive * between(s.On.A, s.Off.A).at(d) * x.current
	x.terminal = s.Input - s.FilterInductor.Resistance*x.drawn
	vt := s.terminalAt(&x, s.Drive*s.On.A*x.current)
	vo := s.Output + parallelResistance(s.Branches())*(s.On.B*x.current-s.Load)
	x.slope = (s.On.A*s.Drive*vt - s.On.B*vo - s.On.R*x.current - s.On.C*s.Drop) / s.Inductance
	return x
}

// terminalAt is the voltage at the converter's input while it draws that current, V.
func (s *Stage) terminalAt(x *steady, drawn float64) float64 {
	if !s.HasFilter {
		return x.terminal
	}
	return x.terminal - parallelResistance(s.shunts[:s.shuntCount])*(drawn-x.drawn)
}

// steadyOfTwo is steady for sepic, cuk and zeta. The charge balance of the coupling capacitor gives i1 = I·D/D', the output's i2 = I; the coupling
// voltage follows from the second inductor's mean voltage.
func (s *Stage) steadyOfTwo(d float64) steady {
	off := 1 - d
	x := steady{duty: d, current: s.Load * d / off, second: s.Load}
	sum := x.current + x.second
	x.drawn = x.current // zeta: the sum in the on interval, d·sum, which is the same
	x.terminal = s.Input - s.FilterInductor.Resistance*x.drawn
	vt := x.terminal
	if s.Family == ZetaLike {
		vt = s.terminalAt(&x, sum)
	}
	common := s.Second.Resistance*x.second + off*(s.Drop+s.RectifierResistance*sum)
	onLoss := s.SwitchResistance*sum + s.Coupling.R*x.second
	across := 0.0 // what the second inductor sees in the on interval besides the coupling capacitor and losses
	if s.Family == SepicLike {
		rho := parallelResistance(s.Branches())
		common += off * (s.Output + rho*(sum-s.Load))
	} else {
		common += s.Output
		across = -s.Output
	}
	x.coupling = common/d + onLoss
	if s.Family == ZetaLike {
		x.coupling -= vt
		across += vt
	}
	x.slope = (vt - s.First.Resistance*x.current - s.SwitchResistance*sum) / s.First.Inductance
	x.slope2 = (x.coupling + across - onLoss - s.Second.Resistance*x.second) / s.Second.Inductance
	return x
}

// discontinuous reports whether the rectifier's current reaches zero within the period: the mean current of all inductors is below half
// of their ripple.
func (s *Stage) discontinuous(x *steady) bool {
	return x.current+x.second < (x.slope+x.slope2)*x.duty*s.Period/2
}

// CriticalCurrent returns the load current (A, all phases) at the boundary between continuous and discontinuous conduction: where the mean
// inductor current equals half of the ripple in the lossy solution of continuous conduction. NaN with a synchronous rectifier, outside the model's
// domain, and where no load current up to the greatest that can be reached has a boundary.
func CriticalCurrent(c *Circuit) float64 {
	if c.Synchronous || check(c) != nil {
		return math.NaN()
	}
	s := Reflect(c)
	return s.boundary()
}

// boundary finds the load current at which ΣiL = ripple/2 by bisection on a logarithmic scale. The load's current enters through losses
// only, so the excess ΣiL − ripple/2 rises with it.
func (s *Stage) boundary() float64 {
	curve := s.conversion()
	excess := func(amps float64) float64 {
		d := curve.duty(s.Output, amps)
		if math.IsNaN(d) {
			return math.NaN()
		}
		t := *s
		t.Load = amps
		x := t.steady(d)
		return x.current + x.second - (x.slope+x.slope2)*d*s.Period/2
	}
	// The ripple is the off-slope's fall over D'·T, so V·T/L is beyond the boundary; where losses put that out of reach, come down.
	high := (s.Output + s.Drop) * s.Period / s.Inductance
	for range 400 {
		if !math.IsNaN(excess(high)) {
			break
		}
		high /= 1.25
	}
	if !(excess(high) > 0) {
		return math.NaN()
	}
	low := high
	for range 400 {
		low /= 2
		if excess(low) < 0 {
			break
		}
	}
	if !(excess(low) < 0) {
		return math.NaN()
	}
	for high/low-1 > 1e-13 {
		mid := math.Sqrt(low) * math.Sqrt(high)
		if mid <= low || mid >= high {
			break
		}
		if excess(mid) < 0 {
			low = mid
		} else {
			high = mid
		}
	}
	return math.Sqrt(low) * math.Sqrt(high)
}
