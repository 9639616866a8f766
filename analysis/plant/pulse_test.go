package plant

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// lightly draws a circuit of a single-inductor topology in discontinuous conduction.
func (r sampler) lightly(t Topology) Circuit {
	c := r.circuit(t)
	c.Synchronous = false
	c.LoadCurrent = CriticalCurrent(&c) * r.between(0.02, 0.9)
	return c
}

var singleInductor = []Topology{Buck, Boost, BuckBoost, TwoSwitchBuckBoost, Flyback, Forward, PushPull, IsolatedBoost}

// averaged evaluates the equations of theory.md section 5 as they stand there, one row at a time.
// Sizes are the sums of the terms' magnitudes, which bound the rounding.
func averaged(s *Stage, l *layout, w row, d float64) (dx, size [maxStates]float64, vo, ig float64) {
	on, off, idle := s.interval(l, onPart), s.interval(l, offPart), s.interval(l, idlePart)
	rest, busy := w, w
	rest[0] = 0
	peak := d * s.Period * on.dx[0].dot(&rest) / (1 - on.dx[0][0]*d*s.Period/2)
	d2 := 2*w[0]/peak - d
	busy[0] = peak / 2
	mean := func(a, b, c *row) float64 { return d*a.dot(&busy) + d2*b.dot(&busy) + (1-d-d2)*c.dot(&rest) }
	for i := range l.order {
		dx[i] = mean(&on.dx[i], &off.dx[i], &idle.dx[i])
		for j := range columns {
			size[i] += (math.Abs(on.dx[i][j]) + math.Abs(off.dx[i][j])) * math.Abs(w[j])
		}
	}
	return dx, size, mean(&on.vo, &off.vo, &idle.vo), mean(&on.ig, &off.ig, &idle.ig)
}

func TestPulseSatisfiesTheAveragedEquations(t *testing.T) {
	for _, topology := range singleInductor {
		r := newSampler(uint64(topology))
		for range 20 {
			c := r.filtered(r.banked(r.lightly(topology)))
			var out Solution
			if Solve(&c, &out) != nil {
				continue
			}
			require.Equal(t, Discontinuous, out.Mode)
			s := Reflect(&c)
			s.Conductance = 0
			p, ok := s.pulse(out.Duty)
			require.True(t, ok)
			l := s.layout()
			w := s.values(&l, &p.steady)
			dx, size, vo, ig := averaged(&s, &l, w, p.duty)
			assert.InEpsilon(t, s.Output, vo, 1e-9)
			assert.InEpsilon(t, p.drawn, ig, 1e-9)
			for i := range l.order {
				assert.InDelta(t, 0, dx[i]/size[i], 1e-9, "%v state %d", topology, i)
			}
			assert.Less(t, p.duty+p.fall, 1.01)
		}
	}
}

func TestPulseModelIsTheDerivativeOfTheAveragedEquations(t *testing.T) {
	for _, topology := range singleInductor {
		r := newSampler(40 + uint64(topology))
		c := r.filtered(r.banked(r.lightly(topology)))
		var out Solution
		if Solve(&c, &out) != nil {
			continue
		}
		s := Reflect(&c)
		p, ok := s.pulse(out.Duty)
		require.True(t, ok)
		m := s.averagePulse(p)
		w := s.values(&m.layout, &p.steady)
		check := func(what string, step float64, move func(h float64) (row, float64), column func(i int) float64, vo, ig float64) {
			wp, dp := move(step)
			wm, dm := move(-step)
			up, size, vp, ip := averaged(&s, &m.layout, wp, dp)
			down, _, vm, im := averaged(&s, &m.layout, wm, dm)
			for i := range m.order {
				want := (up[i] - down[i]) / (2 * step)
				assert.InDelta(t, want, column(i), 1e-5*math.Abs(want)+1e-15*size[i]/step, "%v %s state %d", topology, what, i)
			}
			assert.InDelta(t, (vp-vm)/(2*step), vo, 1e-4*(math.Abs(vo)+1e-3*s.Output))
			assert.InDelta(t, (ip-im)/(2*step), ig, 1e-4*(math.Abs(ig)+1e-3*p.drawn))
		}
		for j := range columns {
			if (j >= m.order && j < maxStates) || j == colOne {
				continue
			}
			step := 1e-5 * max(math.Abs(w[j]), 1e-3)
			check("column", step, func(h float64) (row, float64) { v := w; v[j] += h; return v, p.duty },
				func(i int) float64 { return m.a[i][j] }, m.vo.row[j], m.ig.row[j])
		}
		check("duty", 1e-6*p.duty, func(h float64) (row, float64) { return w, p.duty + h }, func(i int) float64 { return m.duty[i] }, m.vo.duty, m.ig.duty)
	}
}

// Source: theory.md section 4 (closed forms in discontinuous conduction) and check-values 1.11 (conversion ratios).
func TestLosslessPulseEqualsTheClosedForms(t *testing.T) {
	for _, topology := range singleInductor {
		r := newSampler(80 + uint64(topology))
		for range 10 {
			c := r.circuit(topology)
			c.Synchronous = false
			c.Inductor.Resistance, c.Banks[0].ESR, c.SwitchResistance, c.RectifierResistance, c.RectifierDrop = 0, 0, 0, 0, 0
			c.LoadCurrent = CriticalCurrent(&c) * r.between(0.01, 0.95)
			var out Solution
			require.NoError(t, Solve(&c, &out))
			ideal := IdealOf(&c)
			assert.InEpsilon(t, ideal.Duty, out.Duty, 1e-9)
			assert.InEpsilon(t, ideal.ControlGain, out.ControlGain, 1e-6)
			assert.True(t, math.IsNaN(ideal.RHPZero))
			for _, p := range out.Control.Poles {
				assert.Zero(t, imag(p), "both poles are real")
			}
		}
	}
}

func TestDutyIsContinuousThroughTheBoundary(t *testing.T) {
	for _, topology := range Topologies() {
		r := newSampler(120 + uint64(topology))
		c := r.circuit(topology)
		c.Synchronous = false
		c.Inductor.Resistance, c.SecondInductor.Resistance, c.SwitchResistance, c.RectifierResistance = 0, 0, 0, 0
		c.Banks[0].ESR, c.Coupling.ESR = 0, 0
		edge := CriticalCurrent(&c)
		require.Positive(t, edge, topology)
		var below, above Solution
		c.LoadCurrent = edge * (1 - 1e-9)
		require.NoError(t, Solve(&c, &below))
		c.LoadCurrent = edge * (1 + 1e-9)
		require.NoError(t, Solve(&c, &above))
		assert.Equal(t, Discontinuous, below.Mode)
		assert.Equal(t, Continuous, above.Mode)
		assert.InEpsilon(t, above.Duty, below.Duty, 1e-6, topology)
		assert.InEpsilon(t, above.InductorCurrent, below.InductorCurrent, 1e-6, topology)
		assert.InEpsilon(t, above.InductorRipple, below.InductorRipple, 1e-6, topology)
		if topology.TwoInductor() {
			assert.False(t, below.HasModel)
			assert.InEpsilon(t, above.InductorPeak, below.InductorPeak, 1e-6, topology)
			assert.InEpsilon(t, above.SecondPeak, below.SecondPeak, 1e-6, topology)
		}
	}
}

func TestNoLoadWithADiodeHasNoModel(t *testing.T) {
	r := newSampler(4)
	c := r.circuit(Boost)
	c.LoadCurrent = 0
	var out Solution
	require.NoError(t, Solve(&c, &out))
	assert.True(t, out.HasModel, "a synchronous rectifier keeps conduction continuous")
	assert.Equal(t, Continuous, out.Mode)
	c.Synchronous = false
	require.NoError(t, Solve(&c, &out))
	assert.False(t, out.HasModel)
	assert.Equal(t, Discontinuous, out.Mode)
	assert.Zero(t, out.Duty)
}
