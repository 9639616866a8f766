package plant

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// The identities need no outside reference: each is a property that the equations of theory.md must have.

// eachSample runs a check for every topology on a few drawn circuits.
func eachSample(t *testing.T, check func(t *testing.T, r sampler, c Circuit)) {
	for _, topology := range Topologies() {
		for seed := range uint64(12) {
			r := newSampler(seed*100 + uint64(topology))
			c := r.circuit(topology)
			t.Run(fmt.Sprintf("%v/%d", topology, seed), func(t *testing.T) { check(t, r, c) })
		}
	}
}

// sameResponse asserts that two solutions have the same control function up to a frequency factor k (their frequencies are k times the first's).
func sameResponse(t *testing.T, a, b *Solution, k, tolerance float64) {
	t.Helper()
	for f := 1e-5; f < 3; f *= 1.7 {
		w := 2 * math.Pi * a.FilterFrequency * f
		x, y := a.Control.At(w), b.Control.At(w*k)
		if !assert.LessOrEqual(t, cmplx.Abs(x/y-1), tolerance, "at %g of the filter frequency: %v, %v", f, x, y) {
			return
		}
	}
}

func TestSteadyStateSatisfiesTheAveragedEquations(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		c = r.filtered(r.banked(c))
		c.Phases = 1 + r.IntN(3)
		s := Reflect(&c)
		s.Conductance = 0
		curve := s.conversion()
		d := curve.duty(s.Output, s.Load)
		if math.IsNaN(d) {
			assert.ErrorIs(t, Solve(&c, new(Solution)), ErrUnreachable)
			return
		}
		x := s.steady(d)
		m := s.average(&x)
		w := s.values(&m.layout, &x)
		for i := range m.order {
			scale := 0.0
			for j := range columns {
				scale = max(scale, math.Abs(m.a[i][j]*w[j]))
			}
			assert.InDelta(t, 0, m.a[i].dot(&w)/scale, 1e-10, "state %d", i)
		}
		assert.InEpsilon(t, s.Output, m.vo.dot(&w), 1e-12)
		assert.InEpsilon(t, x.terminal, m.vt.dot(&w), 1e-12)
		assert.InEpsilon(t, x.drawn, m.ig.dot(&w), 1e-12)
		on := s.interval(&m.layout, onPart)
		assert.InEpsilon(t, x.slope, on.dx[0].dot(&w), 1e-9)
		if c.Topology.TwoInductor() {
			assert.InEpsilon(t, x.slope2, on.dx[1].dot(&w), 1e-9)
		}
	})
}

func TestOperatingPointIsTheLowestDuty(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		s := Reflect(&c)
		curve := s.conversion()
		d := curve.duty(s.Output, s.Load)
		below := func(d float64) bool {
			return (curve.drive.at(d)-s.Load*curve.loss.at(d))/curve.divisor.at(d) < s.Output
		}
		limit := d
		if math.IsNaN(d) {
			limit = 1
		}
		for k := 1; k < 500; k++ {
			if x := float64(k) / 500; x < limit*(1-1e-9) {
				require.True(t, below(x), "V is reached at %v, duty is %v", x, d)
			}
		}
	})
}

func TestLosslessModelEqualsTheClosedForms(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		c.Inductor.Resistance, c.SecondInductor.Resistance, c.Coupling.ESR, c.Banks[0].ESR = 0, 0, 0, 0
		c.SwitchResistance, c.RectifierResistance, c.RectifierDrop = 0, 0, 0
		if c.Topology.Isolated() {
			c = r.turned(c)
		}
		var out Solution
		require.NoError(t, Solve(&c, &out))
		ideal := IdealOf(&c)
		assert.InEpsilon(t, ideal.Duty, out.Duty, 1e-10)
		assert.InEpsilon(t, ideal.ControlGain, out.ControlGain, 1e-9)
		assert.InEpsilon(t, ideal.LineGain, out.LineGain, 1e-9)
		if c.Topology.TwoInductor() {
			return
		}
		assert.InEpsilon(t, ideal.Resonance, out.Resonance, 1e-10)
		assert.InEpsilon(t, ideal.Quality, out.Quality, 1e-9)
		if c.Topology.Family() == BuckLike {
			assert.True(t, math.IsNaN(out.RHPZero) && math.IsNaN(ideal.RHPZero))
			assert.Empty(t, out.Control.Zeros)
		} else {
			assert.InEpsilon(t, ideal.RHPZero, out.RHPZero, 1e-9)
			assert.InDelta(t, 1, DutyPeak(&c), 1e-6) // a double root of the condition, so half of the digits
		}
	})
}

func TestClosedFormEqualsTheGeneralModel(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		var out, general Solution
		if Solve(&c, &out) != nil || c.Topology.TwoInductor() {
			return
		}
		s := Reflect(&c)
		x := s.steady(out.Duty)
		general.FilterFrequency = out.FilterFrequency
		require.NoError(t, s.generalModel(&c, &x, &general, true))
		assert.InEpsilon(t, out.Control.Gain, general.Control.Gain, 1e-9)
		assert.InEpsilon(t, out.LineGain, general.LineGain, 1e-9)
		assert.InEpsilon(t, out.OutputResistance, general.OutputResistance, 1e-7)
		assert.InEpsilon(t, out.Resonance, general.Resonance, 1e-9)
		assert.InEpsilon(t, out.Quality, general.Quality, 1e-9)
		sameResponse(t, &out, &general, 1, 1e-9)
	})
}

func TestReflectingThroughTheTransformerByHandChangesNothing(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		if !c.Topology.Isolated() {
			return
		}
		if c.Topology == HalfBridge { // by hand: half of the input, as the full bridge of the same output side sees all of it
			c.Topology = FullBridge
		}
		if r.IntN(2) == 0 {
			c = r.current(c)
		}
		byHand := c
		turned := c
		if r.IntN(2) == 0 && c.Topology == FullBridge {
			turned.Topology = HalfBridge
		}
		turned = r.turned(turned)
		var a, b Solution
		require.NoError(t, Solve(&byHand, &a))
		require.NoError(t, Solve(&turned, &b))
		assert.InEpsilon(t, a.Duty, b.Duty, 1e-9)
		assert.InEpsilon(t, a.InductorCurrent, b.InductorCurrent, 1e-9)
		assert.InEpsilon(t, a.InductorRipple, b.InductorRipple, 1e-9)
		assert.InEpsilon(t, a.EffectiveInductance, b.EffectiveInductance, 1e-9)
		assert.InEpsilon(t, a.Resonance, b.Resonance, 1e-9)
		assert.InEpsilon(t, a.LineGain/byHand.OutputVoltage*byHand.InputVoltage, b.LineGain/byHand.OutputVoltage*turned.InputVoltage, 1e-8)
		assert.Equal(t, math.IsNaN(a.RHPZero), math.IsNaN(b.RHPZero))
		if !math.IsNaN(a.RHPZero) {
			assert.InEpsilon(t, a.RHPZero, b.RHPZero, 1e-8)
		}
		sameResponse(t, &a, &b, 1, 1e-8)
	})
}

func TestFlybackIsABuckBoostBehindItsTurns(t *testing.T) {
	r := newSampler(5)
	for range 20 {
		plain := r.circuit(BuckBoost)
		fly := plain
		fly.Topology = Flyback
		fly = r.turned(fly)
		var a, b Solution
		require.NoError(t, Solve(&plain, &a))
		require.NoError(t, Solve(&fly, &b))
		assert.InEpsilon(t, a.Duty, b.Duty, 1e-9)
		sameResponse(t, &a, &b, 1, 1e-8)
	}
}

func TestScalingAllTimesScalesAllFrequencies(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		switch r.IntN(4) {
		case 0:
			c = r.filtered(r.banked(c))
		case 1:
			c = r.current(c)
		case 2:
			c = r.current(r.filtered(c))
		}
		if r.IntN(2) == 0 { // discontinuous
			c.Synchronous = false
			c.LoadCurrent /= 50
		}
		k := r.between(1e-3, 1e3)
		fast := c
		fast.Banks = append([]Bank(nil), c.Banks...)
		fast.SwitchingFrequency *= k
		for _, v := range []*float64{&fast.Inductor.Inductance, &fast.SecondInductor.Inductance, &fast.Coupling.Capacitance, &fast.LoadCapacitance,
			&fast.Filter.Inductance, &fast.Filter.Capacitance, &fast.Filter.DampingCapacitance} {
			*v /= k
		}
		for i := range fast.Banks {
			fast.Banks[i].Capacitance /= k
		}
		fast.Modulator.SlopeCompensation *= k
		var a, b Solution
		errA, errB := Solve(&c, &a), Solve(&fast, &b)
		require.Equal(t, errA == nil, errB == nil)
		if errA != nil || !a.HasModel {
			return
		}
		assert.Equal(t, a.Mode, b.Mode)
		assert.InEpsilon(t, a.Duty, b.Duty, 1e-9)
		assert.InEpsilon(t, a.Resonance*k, b.Resonance, 1e-6)
		assert.InEpsilon(t, a.ControlGain, b.ControlGain, 1e-6)
		sameResponse(t, &a, &b, k, 1e-5)
	})
}

func TestInterleavedPhasesAreOneWithTheirPartsInParallel(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		if r.IntN(2) == 0 {
			c = r.current(c)
		}
		n := float64(2 + r.IntN(4))
		many := c
		many.Phases = int(n)
		many.Inductor = Winding{c.Inductor.Inductance * n, c.Inductor.Resistance * n}
		many.SecondInductor = Winding{c.SecondInductor.Inductance * n, c.SecondInductor.Resistance * n}
		many.Coupling.Capacitance /= n
		many.Coupling.ESR *= n
		many.SwitchResistance *= n
		many.RectifierResistance *= n
		many.Modulator.CurrentSenseGain *= n
		var a, b Solution
		if Solve(&c, &a) != nil {
			return
		}
		require.NoError(t, Solve(&many, &b))
		assert.InEpsilon(t, a.Duty, b.Duty, 1e-12)
		assert.InEpsilon(t, a.InductorCurrent, b.InductorCurrent*n, 1e-9)
		assert.InEpsilon(t, a.InductorRipple, b.InductorRipple*n, 1e-9)
		sameResponse(t, &a, &b, 1, 1e-8)
	})
}

func TestBanksInParallelAreOneBank(t *testing.T) {
	eachSample(t, func(t *testing.T, r sampler, c Circuit) {
		one, many := c, c
		b := c.Banks[0]
		one.Banks = []Bank{{Capacitance: b.Capacitance, ESR: b.ESR, Count: 4}}
		many.Banks = []Bank{b, {Capacitance: b.Capacitance, ESR: b.ESR, Count: 2}}
		many.LoadCapacitance, many.LoadESR = b.Capacitance, b.ESR
		var x, y Solution
		if Solve(&one, &x) != nil {
			return
		}
		require.NoError(t, Solve(&many, &y))
		assert.InEpsilon(t, x.Duty, y.Duty, 1e-12)
		assert.InEpsilon(t, x.StageCapacitance, y.StageCapacitance, 1e-12)
		assert.InEpsilon(t, b.ESR/4, x.StageESR, 1e-12)
		assert.True(t, math.IsNaN(y.StageESR))
		sameResponse(t, &x, &y, 1, 1e-7)
	})
}

func TestDeratingScalesTheCapacitance(t *testing.T) {
	table := []DeratingPoint{{0, 1}, {10, 0.7}, {20, 0.4}}
	for _, c := range []struct{ volts, want float64 }{{-3, 1}, {0, 1}, {5, 0.85}, {10, 0.7}, {15, 0.55}, {20, 0.4}, {90, 0.4}} {
		assert.InDelta(t, c.want, derating(table, c.volts), 1e-15)
	}
	r := newSampler(3)
	c := r.circuit(Buck)
	plain := c
	c.Banks = []Bank{{Capacitance: c.Banks[0].Capacitance / 0.55, ESR: c.Banks[0].ESR, Count: 1,
		Derating: []DeratingPoint{{0, 1}, {c.OutputVoltage / 1.5, 0.7}, {2 * c.OutputVoltage / 1.5, 0.4}}}}
	var x, y Solution
	require.NoError(t, Solve(&plain, &x))
	require.NoError(t, Solve(&c, &y))
	assert.InEpsilon(t, x.Resonance, y.Resonance, 1e-12)
}
