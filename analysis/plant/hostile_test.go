package plant

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// fields lists every number of a circuit.
func fields(c *Circuit) []*float64 {
	all := []*float64{&c.SwitchingFrequency, &c.InputVoltage, &c.OutputVoltage, &c.LoadCurrent, &c.LoadCapacitance, &c.LoadESR, &c.TurnsPrimary,
		&c.TurnsSecondary, &c.Inductor.Inductance, &c.Inductor.Resistance, &c.SecondInductor.Inductance, &c.SecondInductor.Resistance,
		&c.Coupling.Capacitance, &c.Coupling.ESR, &c.Coupling.Count, &c.MagnetizingInductance, &c.SwitchResistance, &c.RectifierDrop, &c.RectifierResistance,
		&c.Filter.Inductance, &c.Filter.Resistance, &c.Filter.Capacitance, &c.Filter.ESR, &c.Filter.DampingResistance, &c.Filter.DampingCapacitance,
		&c.Modulator.RampAmplitude, &c.Modulator.NominalInput, &c.Modulator.CurrentSenseGain, &c.Modulator.SlopeCompensation, &c.Modulator.ControlRatio}
	for i := range c.Banks {
		all = append(all, &c.Banks[i].Capacitance, &c.Banks[i].ESR, &c.Banks[i].Count)
	}
	return all
}

// sound asserts what every answer must hold: finite or NaN figures, exact conjugate neighbours, a gain that is the function at 0.
func sound(t *testing.T, c *Circuit, out *Solution, err error) {
	t.Helper()
	if err != nil {
		require.False(t, out.HasModel)
		return
	}
	if !out.HasModel {
		return
	}
	for _, v := range []float64{out.Duty, out.InductorCurrent, out.InductorRipple, out.ModulatorGain, out.ControlGain, out.StageCapacitance} {
		require.False(t, math.IsInf(v, 0) || math.IsNaN(v), "%+v of %+v", out, c)
	}
	for _, v := range []float64{out.LineGain, out.Resonance, out.Quality, out.ESRZero, out.RHPZero, out.OutputResistance} {
		require.False(t, math.IsInf(v, 0), "%+v of %+v", out, c)
	}
	for _, roots := range [][]complex128{out.Control.Poles, out.Control.Zeros} {
		for i := 0; i < len(roots); i++ {
			z := roots[i]
			require.False(t, cmplx.IsNaN(z) || cmplx.IsInf(z) || z == 0)
			if imag(z) != 0 {
				require.Less(t, i+1, len(roots))
				require.Equal(t, cmplx.Conj(z), roots[i+1])
				i++
			}
		}
	}
	require.Equal(t, math.Abs(real(out.Control.Eval(0))), out.ControlGain)
}

func TestHostileNumbersNeverPanic(t *testing.T) {
	odd := []float64{0, math.Inf(1), math.Inf(-1), math.NaN(), 1e-300, 1e300, 5e-324, math.MaxFloat64, 1e-15, 1e15, -1}
	var out Solution
	try := func(c *Circuit) {
		assert.NotPanics(t, func() {
			err := Solve(c, &out)
			sound(t, c, &out, err)
			IdealOf(c)
			DutyPeak(c)
			CriticalCurrent(c)
			WithRipple(c, &out, func(s complex128) complex128 { return 1e4 / s })
		})
	}
	for _, topology := range Topologies() {
		r := newSampler(200 + uint64(topology))
		for round := range 40 {
			c := r.circuit(topology)
			if topology.Isolated() {
				c = r.turned(c)
			}
			if round%2 == 0 {
				c = r.filtered(r.banked(c))
			}
			if round%3 == 0 {
				c = r.current(c)
			}
			c.Synchronous = round%4 != 0
			c.Modulator.FeedForward = round%5 == 0
			c.Behaviour = Behaviour(1 + round%3)
			all := fields(&c)
			for range 1 + r.IntN(3) {
				*all[r.IntN(len(all))] = odd[r.IntN(len(odd))]
			}
			try(&c)
		}
	}
	try(&Circuit{})
	try(&Circuit{Topology: 99, Phases: -1})
}

// From femto to kilo: parts drawn over the whole scale give finite figures or an error.
func TestAnySizeOfPartsStaysFinite(t *testing.T) {
	solved := 0
	var out Solution
	for _, topology := range Topologies() {
		r := newSampler(300 + uint64(topology))
		for range 150 {
			c := r.circuit(topology)
			c = r.filtered(r.banked(c))
			if r.IntN(2) == 0 {
				c = r.current(c)
			}
			c.Synchronous = r.IntN(2) == 0
			for _, v := range fields(&c) {
				if *v > 0 && r.IntN(3) == 0 {
					*v *= r.between(1e-12, 1e6)
				}
			}
			c.InputVoltage = c.OutputVoltage * r.between(0.2, 5)
			err := Solve(&c, &out)
			sound(t, &c, &out, err)
			if err == nil {
				solved++
			}
		}
	}
	assert.Greater(t, solved, 500, "the test must reach models, not errors only")
}

func TestNamesRoundTrip(t *testing.T) {
	require.Len(t, Topologies(), 14)
	for _, v := range Topologies() {
		got, ok := ParseTopology(v.String())
		assert.True(t, ok)
		assert.Equal(t, v, got)
		assert.NotEqual(t, "unknown", v.Family().String())
	}
	for _, v := range []Behaviour{Resistive, ConstantCurrent, ConstantPower} {
		got, ok := ParseBehaviour(v.String())
		assert.True(t, ok)
		assert.Equal(t, v, got)
	}
	for _, v := range []Scheme{VoltageMode, PeakCurrentMode} {
		got, ok := ParseScheme(v.String())
		assert.True(t, ok)
		assert.Equal(t, v, got)
	}
	assert.Equal(t, "ccm", Continuous.String())
	assert.Equal(t, "dcm", Discontinuous.String())
	_, ok := ParseTopology("unknown")
	assert.False(t, ok)
	assert.Equal(t, "unknown", Topology(0).String())
	assert.Equal(t, "unknown", Mode(7).String())
}
