package plant

import (
	"math"
	"math/cmplx"
)

const (
	rippleHarmonics = 64  // of the filter frequency, theory sheet section 16
	ripplePoints    = 512 // of the ripple waveform over one period
)

// PieceCurrents returns the ripple current (A rms) of one piece of each output capacitor bank of a circuit whose operating point is
// s. The current into the output node is piecewise linear; its harmonics s_k divide among the banks by their admittances (theory
// sheet section 16). With N interleaved phases only every N-th harmonic remains. NaN where the operating point is unset.
func PieceCurrents(c *Circuit, s *Solution) []float64 {
	wave := outputWave(c, s)
	pieces := make([]float64, len(c.Banks))
	for k := c.Phases; k <= rippleHarmonics; k += c.Phases {
		current := wave.harmonic(k) * complex(float64(c.Phases), 0)
		total := outputAdmittance(c, s, k)
		for i := range c.Banks {
			amps := cmplx.Abs(current * bankAdmittance(c, s, k, i) / total)
			pieces[i] += 2 * amps * amps
		}
	}
	for i := range pieces {
		pieces[i] = math.Sqrt(pieces[i]) / c.Banks[i].Count
	}
	return pieces
}

// OutputRipple returns the output voltage's ripple (V, peak to peak) of a circuit whose operating point is s: the span of
// Σ 2·Re(s_k/Y·e^{jωkt}) (theory sheet section 16). No equivalent series inductance.
func OutputRipple(c *Circuit, s *Solution) float64 {
	wave := outputWave(c, s)
	var volts [rippleHarmonics + 1]complex128
	for k := c.Phases; k <= rippleHarmonics; k += c.Phases {
		volts[k] = wave.harmonic(k) * complex(float64(c.Phases), 0) / outputAdmittance(c, s, k)
	}
	return peakToPeak(volts[:])
}

// outputAdmittance is that of all banks, the load's capacitance and its conductance (S, never below zero) at the k-th harmonic.
func outputAdmittance(c *Circuit, s *Solution, k int) complex128 {
	var total complex128
	if c.Behaviour == Resistive {
		total = complex(c.LoadCurrent/c.OutputVoltage, 0)
	}
	for i := range c.Banks {
		total += bankAdmittance(c, s, k, i)
	}
	if c.LoadCapacitance > 0 {
		total += admittance(2*math.Pi*float64(k)*s.FilterFrequency, c.LoadCapacitance, c.LoadESR)
	}
	return total
}

// bankAdmittance is that of one whole bank (S) at the k-th harmonic.
func bankAdmittance(c *Circuit, s *Solution, k, bank int) complex128 {
	b := &c.Banks[bank]
	return admittance(2*math.Pi*float64(k)*s.FilterFrequency, b.Count*b.Capacitance*derating(b.Derating, c.OutputVoltage), b.ESR/b.Count)
}

// admittance of a capacitor (F) in series with a resistance (Ω) at omega (rad/s).
func admittance(omega, capacitance, resistance float64) complex128 {
	return 1 / complex(resistance, -1/(omega*capacitance))
}

// peakToPeak is the span of Σ 2·Re(v_k·e^{j2πkx}) over one period.
func peakToPeak(harmonics []complex128) float64 {
	var turn [ripplePoints]complex128
	for p := range turn {
		sin, cos := math.Sincos(2 * math.Pi * float64(p) / ripplePoints)
		turn[p] = complex(cos, sin)
	}
	low, high := math.Inf(1), math.Inf(-1)
	for p := range ripplePoints {
		sum := 0.0
		for k, v := range harmonics {
			w := turn[k*p%ripplePoints]
			sum += 2 * (real(v)*real(w) - imag(v)*imag(w))
		}
		low, high = math.Min(low, sum), math.Max(high, sum)
	}
	return high - low
}

// ramp is a straight piece of a waveform from (From, Start) to (To, End); times are fractions of the period.
type ramp struct{ From, To, Start, End float64 }

// waveform is a periodic current (A) made of ramps; it is zero elsewhere.
type waveform []ramp

// harmonic returns the k-th complex Fourier coefficient, ∫ y·e^{−j2πkx} dx over one period of length 1:
// for a piece with slope m, [(−y/(jω) + m/ω²)·e^{−jωx}] between its ends, ω = 2πk.
func (w waveform) harmonic(k int) complex128 {
	omega := 2 * math.Pi * float64(k)
	var sum complex128
	for _, r := range w {
		if !(r.To > r.From) {
			continue
		}
		slope := (r.End - r.Start) / (r.To - r.From)
		primitive := func(x, y float64) complex128 {
			return complex(slope/(omega*omega), y/omega) * cmplx.Exp(complex(0, -omega*x))
		}
		sum += primitive(r.To, r.End) - primitive(r.From, r.Start)
	}
	return sum
}

// outputWave is the current of one phase into the output node: the filter inductor's in the buck family, cuk and zeta, what the
// rectifier carries in the others.
func outputWave(c *Circuit, s *Solution) waveform {
	average, swing := s.InductorCurrent, s.InductorRipple
	switch c.Topology.Family() {
	case CukLike, ZetaLike:
		average, swing = s.SecondCurrent, s.SecondRipple
	case SepicLike:
		average, swing = average+s.SecondCurrent, swing+s.SecondRipple
	}
	low, high, end := average-swing/2, average+swing/2, 1.0
	if s.Mode == Discontinuous {
		// The current falls to zero (its ripple is its peak) at D + D2, and its average is peak·(D + D2)/2.
		if low, high = 0, swing; !c.Topology.TwoInductor() {
			end = math.Min(1, 2*average/swing)
		}
	}
	fall := ramp{s.Duty, end, high, low}
	switch c.Topology.Family() {
	case BoostLike, BuckBoostLike, SepicLike:
		return waveform{fall}
	}
	return waveform{{0, s.Duty, low, high}, fall}
}
