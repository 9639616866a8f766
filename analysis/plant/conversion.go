package plant

import (
	"errors"
	"math"

	"halfplane/analysis/transfer"
)

// ErrUnreachable says that no duty between 0 and 1 gives the output voltage: the input is too low, or losses too high.
var ErrUnreachable = errors.New("no duty reaches the output voltage")

// parabola is a polynomial c[0] + c[1]·d + c[2]·d² in the duty d.
type parabola [3]float64

// between is the straight line that is off at d = 0 and on at d = 1: the average over the period of a quantity with these two values.
func between(on, off float64) parabola { return parabola{off, on - off, 0} }

// times multiplies two straight lines.
func (p parabola) times(q parabola) parabola {
	return parabola{p[0] * q[0], p[0]*q[1] + p[1]*q[0], p[1] * q[1]}
}

// plus returns p + k·q.
func (p parabola) plus(k float64, q parabola) parabola {
	return parabola{p[0] + k*q[0], p[1] + k*q[1], p[2] + k*q[2]}
}

// at evaluates the parabola.
func (p parabola) at(d float64) float64 { return p[0] + d*(p[1]+d*p[2]) }

// conversion holds the lossy averaged output voltage of continuous conduction as V(d) = (drive − I·loss)/divisor: three parabolas in the
// duty d, for every family. It follows from section 2 of the theory sheet with dx/dt = 0 and io = I: the bank voltages equal V, the mean of the current
// into the output node equals I, and the inductor's mean voltage is zero; the equation multiplied by the mean off-side fraction b̄
// is quadratic in d, so the duty is closed form. With ρ, ρf the parallel resistance of the branches at output and filter and
// var(x) = mean(x²) − mean(x)² over the two intervals:
//
//	one inductor:  V b̄² = b̄ (m ā Vg − c̄ VF) − I (r̄ + rf m² ā² + ρf m² var a + ρ var b)
//	two inductors: V D'² = D D' Vg − D'² VF − I (D² (r1+rf) + D'² r2 + D Ron + D' rD + D D' (rc + ρ [sepic] + ρf [zeta]))
type conversion struct{ drive, loss, divisor parabola }

// conversion returns the stage's conversion curve.
func (s *Stage) conversion() conversion {
	rho, rhoF := parallelResistance(s.Branches()), 0.0
	if s.HasFilter {
		rhoF = parallelResistance(s.shunts[:s.shuntCount])
	}
	if s.Second.Inductance > 0 {
		return s.conversionOfTwo(rho, rhoF)
	}
	a, b := between(s.On.A, s.Off.A), between(s.On.B, s.Off.B)
	mean := between(s.On.R, s.Off.R)
	m2 := s.Drive * s.Drive
	aa, bb := a.times(a), b.times(b)
	varA := between(s.On.A*s.On.A, s.Off.A*s.Off.A).plus(-1, aa)
	varB := between(s.On.B*s.On.B, s.Off.B*s.Off.B).plus(-1, bb)
	loss := mean.plus(m2*s.FilterInductor.Resistance, aa).plus(m2*rhoF, varA).plus(rho, varB)
	volts := parabola{}.plus(s.Drive*s.Input, a).plus(-s.Drop, between(s.On.C, s.Off.C))
	return conversion{b.times(volts), loss, bb}
}

// conversionOfTwo is conversion for sepic, cuk and zeta.
func (s *Stage) conversionOfTwo(rho, rhoF float64) conversion {
	on, off := between(1, 0), between(0, 1)
	onOn, onOff, offOff := on.times(on), on.times(off), off.times(off)
	mixed := s.Coupling.R + ofFamily(s.Family, rho, 0, rhoF)
	loss := parabola{}.plus(s.First.Resistance+s.FilterInductor.Resistance, onOn).plus(s.Second.Resistance, offOff).
		plus(s.SwitchResistance, on).plus(s.RectifierResistance, off).plus(mixed, onOff)
	drive := parabola{}.plus(s.Input, onOff).plus(-s.Drop, offOff)
	return conversion{drive, loss, offOff}
}

// duty returns the lowest d in (0, 1) at which V(d) rises through volts at the load current amps; NaN when there is none. The upper root,
// beyond the peak of the conversion ratio, is never the operating point (theory sheet section 13, trap 1): a boost that gives
// more than volts at d = 0 already has that root alone, and no operating point.
func (c *conversion) duty(volts, amps float64) float64 {
	excess := c.drive.plus(-amps, c.loss).plus(-volts, c.divisor)
	if excess.at(0) >= 0 {
		return math.NaN()
	}
	return lowestInside(excess)
}

// lowestInside returns the lowest root of the parabola in (0, 1), NaN when there is none.
func lowestInside(p parabola) float64 {
	x, y := math.NaN(), math.NaN()
	switch {
	case p[2] != 0:
		u, v := transfer.Quadratic(p[2], p[1], p[0])
		if imag(u) == 0 {
			x, y = real(u), real(v)
		}
	case p[1] != 0:
		x = -p[0] / p[1]
	}
	if y > 0 && y < 1 && !(x > 0 && x < y) {
		x = y
	}
	if x > 0 && x < 1 {
		return x
	}
	return math.NaN()
}

// peak returns the duty at which V(d) is greatest with the load held as the resistance ohms (V/I); 1 when it rises all the way. With
// I = V/R the curve is V = drive/(divisor + loss/R), and the condition V' = 0 is again a parabola, as the cubic terms cancel.
func (c *conversion) peak(ohms float64) float64 {
	n, q := c.drive, c.divisor.plus(1/ohms, c.loss)
	d := lowestInside(parabola{
		n[1]*q[0] - n[0]*q[1],
		2 * (n[2]*q[0] - n[0]*q[2]),
		n[2]*q[1] - n[1]*q[2],
	})
	if math.IsNaN(d) {
		return 1
	}
	return d
}

// DutyPeak returns the duty at which the lossy conversion ratio of continuous conduction peaks, with the load held as the resistance V/I
// (boost with winding resistance only: 1 − √(rL/R)). 1 without losses. NaN in the buck family, which has no peak, and where
// the circuit is outside the model's domain.
func DutyPeak(c *Circuit) float64 {
	if !c.Topology.HasDutyPeak() || check(c) != nil {
		return math.NaN()
	}
	s := Reflect(c)
	v := s.conversion()
	return v.peak(c.OutputVoltage / c.LoadCurrent)
}
