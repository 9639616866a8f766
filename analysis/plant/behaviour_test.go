package plant

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// Poles, zeros and gain must say what the state-space matrices say, for every order up to all banks, filter and two inductors.
func TestRootsReproduceTheStateSpaceResponse(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		c = r.filtered(r.banked(c))
		var out Solution
		if Solve(&c, &out) != nil {
			return
		}
		s := Reflect(&c)
		x := s.steady(out.Duty)
		m := s.average(&x)
		k := m.control()
		for f := 1e-5; f < 10; f *= 2.3 {
			w := 2 * math.Pi * out.FilterFrequency * f
			var b [maxOrder]complex128
			for i := range m.order {
				b[i] = complex(k.b[i], 0)
			}
			require.True(t, k.a.solveComplex(m.order, complex(0, w), &b))
			want := complex(k.e, 0)
			for i := range m.order {
				want += complex(k.c[i], 0) * b[i]
			}
			assert.LessOrEqual(t, cmplx.Abs(out.Control.At(w)/want-1), 1e-6, "at %g", f)
		}
	})
}

// The extra element theorem (Middlebrook, "Null double injection and the extra element theorem", IEEE Trans. Education 1989): the
// augmented matrices and the two impedance ratios must tell the same story. Exact where the terminal voltage carries no step
// (no filter ESR).
func TestFilterRatiosExplainTheAugmentedPlant(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		c = r.filtered(c)
		c.Filter.ESR = 0
		if r.IntN(2) == 0 {
			c = r.current(c)
		} else {
			c.Modulator.FeedForward = r.IntN(2) == 0
		}
		var out Solution
		if Solve(&c, &out) != nil {
			return
		}
		s := Reflect(&c)
		x := s.steady(out.Duty)
		study := s.filterStudy(&c, &x, &out)
		bareCircuit := c
		bareCircuit.Filter = Filter{}
		bareCircuit.InputVoltage = x.terminal
		var bare Solution
		require.NoError(t, Solve(&bareCircuit, &bare))
		for f := 1e-4; f < 0.5; f *= 1.9 {
			w := 2 * math.Pi * out.FilterFrequency * f
			n, d := study.quotients(w)
			want := bare.Control.At(w) * (1 + n) / (1 + d)
			assert.LessOrEqual(t, cmplx.Abs(out.Control.At(w)/want-1), 1e-5, "at %g", f)
			assert.LessOrEqual(t, cmplx.Abs(n), out.Input.ZoOverZn*(1+1e-3))
			assert.LessOrEqual(t, cmplx.Abs(d), out.Input.ZoOverZd*(1+1e-3))
		}
	})
}

// A constant power load is a negative resistance: lossless buck, poles at +I/(2 V C) (trace of the matrix in theory.md section 2).
func TestConstantPowerPutsPolesOnTheRight(t *testing.T) {
	r := newSampler(9)
	c := r.circuit(Buck)
	c.Inductor.Resistance, c.SwitchResistance, c.RectifierResistance, c.RectifierDrop, c.Banks[0].ESR = 0, 0, 0, 0, 0
	var out Solution
	for behaviour, sign := range map[Behaviour]float64{Resistive: -1, ConstantCurrent: 0, ConstantPower: 1} {
		c.Behaviour = behaviour
		require.NoError(t, Solve(&c, &out))
		want := sign * c.LoadCurrent / (2 * c.OutputVoltage * c.Banks[0].Capacitance)
		assert.InDelta(t, want, real(out.Control.Poles[0]), 1e-9*cmplx.Abs(out.Control.Poles[0]))
	}
	c.Behaviour = ConstantCurrent
	require.NoError(t, Solve(&c, &out))
	assert.True(t, math.IsNaN(out.Quality), "no damping, no finite quality")
}

func TestFeedForwardScalesTheRampWithTheInput(t *testing.T) {
	r := newSampler(11)
	c := r.circuit(Buck)
	c.Modulator.FeedForward = true
	c.Inductor.Resistance, c.SwitchResistance, c.RectifierResistance, c.RectifierDrop = 0, 0, 0, 0
	var low, high Solution
	require.NoError(t, Solve(&c, &low))
	c.InputVoltage *= 1.3
	require.NoError(t, Solve(&c, &high))
	// A lossless buck's gain is Vg, so the product does not move.
	assert.InEpsilon(t, low.ModulatorGain*low.ControlGain, high.ModulatorGain*high.ControlGain, 1e-12)
	assert.InEpsilon(t, 1/c.Modulator.RampAmplitude, low.ModulatorGain, 1e-12)
}

func TestSubharmonicInnerLoopHasPolesOnTheRight(t *testing.T) {
	r := newSampler(21)
	seen := map[bool]int{}
	for range 200 {
		c := r.current(r.circuit([]Topology{Buck, Boost, BuckBoost}[r.IntN(3)]))
		c.Modulator.SlopeCompensation *= 0.1 * r.Float64()
		var out Solution
		if Solve(&c, &out) != nil {
			continue
		}
		p := out.Current.OffDutyProduct
		if math.Abs(p-0.5) < 0.02 {
			continue
		}
		unstable := false
		for _, pole := range out.Control.Poles {
			if cmplx.Abs(pole) > 0.3*math.Pi*out.FilterFrequency && real(pole) > 0 {
				unstable = true
			}
		}
		seen[unstable]++
		assert.Equal(t, p < 0.5, unstable, "mc·D' = %v, poles %v", p, out.Control.Poles)
		assert.Equal(t, p < 0.5, out.Current.HalfFrequencyQuality < 0)
	}
	assert.Greater(t, seen[true], 5)
	assert.Greater(t, seen[false], 5)
}

func TestDutyPeakIsWhereTheOutputIsHighest(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		if !c.Topology.HasDutyPeak() {
			assert.True(t, math.IsNaN(DutyPeak(&c)))
			return
		}
		s := Reflect(&c)
		curve := s.conversion()
		ohms := c.OutputVoltage / c.LoadCurrent
		volts := func(d float64) float64 { return curve.drive.at(d) / (curve.divisor.at(d) + curve.loss.at(d)/ohms) }
		peak := DutyPeak(&c)
		for k := 1; k < 200; k++ {
			d := float64(k) / 200
			assert.LessOrEqual(t, volts(d), volts(peak)*(1+1e-12))
		}
	})
	// Boost with winding resistance only, theory.md section 3: D'pk = √(rL/R), Vmax = Vg/2·√(R/rL).
	r := newSampler(1)
	c := r.circuit(Boost)
	c.SwitchResistance, c.RectifierResistance, c.RectifierDrop, c.Banks[0].ESR = 0, 0, 0, 0
	load := c.OutputVoltage / c.LoadCurrent
	assert.InEpsilon(t, 1-math.Sqrt(c.Inductor.Resistance/load), DutyPeak(&c), 1e-12)
}

func TestUnreachableOutputIsAnError(t *testing.T) {
	r := newSampler(2)
	buck := r.circuit(Buck)
	buck.InputVoltage = 0.99 * buck.OutputVoltage
	assert.ErrorIs(t, Solve(&buck, new(Solution)), ErrUnreachable)
	boost := r.circuit(Boost)
	boost.Inductor.Resistance = boost.OutputVoltage / boost.LoadCurrent // the greatest gain is then 1/2
	assert.ErrorIs(t, Solve(&boost, new(Solution)), ErrUnreachable)
	boost.LoadCurrent = -1
	err := Solve(&boost, new(Solution))
	require.Error(t, err)
	assert.NotErrorIs(t, err, ErrUnreachable)
	assert.Contains(t, err.Error(), "load current")
}

// TestBoostGivesNoLessThanItsInput: the only duty that solves the averaged equations then lies beyond the peak of the conversion
// ratio, and is no operating point (theory of the boost converter: M = 1/(1 − D) >= 1).
func TestBoostGivesNoLessThanItsInput(t *testing.T) {
	for _, volts := range []float64{4, 8, 8.9} {
		c := Circuit{
			Topology: Boost, Phases: 1, SwitchingFrequency: 250e3, InputVoltage: 9, OutputVoltage: volts, LoadCurrent: 1, Behaviour: Resistive,
			TurnsPrimary: 1, TurnsSecondary: 1, Inductor: Winding{Inductance: 22e-6, Resistance: 0.025}, Synchronous: true,
			Banks:            []Bank{{Capacitance: 100e-6, ESR: 0.01, Count: 1}},
			SwitchResistance: 0.015, RectifierResistance: 0.012,
			Modulator: Modulator{Scheme: VoltageMode, RampAmplitude: 1, ControlRatio: 1},
		}
		var out Solution
		assert.ErrorIs(t, Solve(&c, &out), ErrUnreachable, "%v V", volts)
	}
}
