package plant

import "math"

// Stress is the ideal voltage (V) that the switch and the rectifier of a circuit block, without ringing.
type Stress struct{ Switch, Rectifier float64 }

// StressOf returns the blocking voltages of theory sheet section 14: a forward resets through a 1:1 winding; push-pull, half- and
// full-bridge have a centre-tapped secondary, isolated-boost a centre-tapped primary. NaN for an unknown topology.
func StressOf(c *Circuit) Stress {
	vg, v := c.InputVoltage, c.OutputVoltage
	n := 1.0
	if c.Topology.Isolated() {
		n = c.TurnsSecondary / c.TurnsPrimary
	}
	switch c.Topology {
	case Buck:
		return Stress{vg, vg}
	case Boost:
		return Stress{v, v}
	case BuckBoost, Sepic, Cuk, Zeta:
		return Stress{vg + v, vg + v}
	case TwoSwitchBuckBoost:
		return Stress{math.Max(vg, v), math.Max(vg, v)}
	case Flyback:
		return Stress{vg + v/n, v + n*vg}
	case Forward:
		return Stress{2 * vg, n * vg}
	case TwoSwitchForward:
		return Stress{vg, n * vg}
	case PushPull:
		return Stress{2 * vg, 2 * n * vg}
	case HalfBridge:
		return Stress{vg, n * vg}
	case FullBridge:
		return Stress{vg, 2 * n * vg}
	case IsolatedBoost:
		return Stress{2 * v / n, v}
	}
	return Stress{math.NaN(), math.NaN()}
}

// SwitchPeak returns the highest current (A) in one switch, on its own side, of a circuit at its operating point s: the inductor's
// peak reflected to the primary, both windings' peaks in a two-inductor topology, plus the transformer's magnetizing current where
// its inductance is given (a forward's rises from zero, a bridge's and a push-pull's swings to both sides of it).
func SwitchPeak(c *Circuit, s *Solution) float64 {
	peak := s.InductorPeak
	if c.Topology.TwoInductor() {
		peak += s.SecondPeak
	}
	if !c.Topology.Isolated() {
		return peak
	}
	peak *= s.TurnsRatio
	if c.MagnetizingInductance > 0 && c.Topology.rectified() {
		rise := c.InputVoltage * s.Duty / s.FilterFrequency / c.MagnetizingInductance
		switch c.Topology {
		case HalfBridge:
			rise /= 4
		case PushPull, FullBridge:
			rise /= 2
		}
		peak += rise
	}
	return peak
}
