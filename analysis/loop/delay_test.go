package loop

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

// Source: independent computation, the dense search of measure_test.go. Stability with a delay: winding of 1 + T along a dense path, the
// argument principle spelled out.
func TestDelayedLoopsMatchADenseSearch(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	var m Meter
	var out Figures
	stable := 0
	for range 16 {
		p := random(r)
		for len(p.Poles)+p.Integrators <= len(p.Zeros) { // a delayed loop gain has to fall
			p.Poles = append(p.Poles, -1e5)
		}
		p.Gain /= 30
		if r.IntN(3) > 0 { // mostly stable plants
			for i, pole := range p.Poles {
				p.Poles[i] = complex(-math.Abs(real(pole)), imag(pole))
			}
		}
		p.Delay = math.Pow(10, -7+2*r.Float64())
		require.NoError(t, m.Measure(&p, 100e3, &out))
		compareWithSearch(t, &p, &out)
		if out.Stable {
			stable++
		}
	}
	assert.Positive(t, stable)
}

// Source: as above; the sampled factor's own definition.
func TestSampledLoopsMatchADenseSearch(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 24))
	var m Meter
	var out Figures
	stable := 0
	for range 20 {
		f := math.Pow(10, 2.5+r.Float64())
		pole := pair(f, 0.5+5*r.Float64())
		p := transfer.Product{Function: transfer.Function{Gain: math.Pow(10, 2*r.Float64()-1), Poles: pole, Delay: 15e-6 * r.Float64()}}
		a, b := 0.9+0.099*r.Float64(), r.Float64()*0.99
		p.Sampled = &transfer.Sampled{Period: 1e-5, Numerator: []float64{1, -(a + b), a * b}, Denominator: []float64{1, -1.3, 0.3}}
		if r.IntN(4) == 0 {
			p.Sampled.Numerator = []float64{0, 0.5, 0.2} // complex roots and a sample of delay
			p.Sampled.Denominator = []float64{1, -1.2, 0.9}
		}
		require.NoError(t, m.Measure(&p, 100e3, &out))
		compareWithSearch(t, &p, &out)
		if out.Stable {
			stable++
		}
	}
	assert.Greater(t, stable, 3)
}

func compareWithSearch(t *testing.T, p *transfer.Product, out *Figures) {
	t.Helper()
	ref := search(p, 100e3, 20000)
	if ref.modulus > 1e-3 {
		require.Equal(t, windingStable(p), out.Stable, "%+v", *p)
	}
	want := expected(ref, p, out.Stable)
	if len(want.Crossovers) != len(out.Crossovers) {
		require.Greater(t, len(out.Crossovers), len(want.Crossovers), "%+v", *p)
		return
	}
	same(t, want.Crossover, out.Crossover, 1e-6*want.Crossover, "crossover", p)
	same(t, want.PhaseMargin, out.PhaseMargin, 1e-4, "phase margin", p)
	same(t, want.GainMargin, out.GainMargin, 1e-3, "gain margin", p)
	same(t, want.GainReductionMargin, out.GainReductionMargin, 1e-3, "gain reduction margin", p)
	require.LessOrEqual(t, out.ModulusMargin, want.ModulusMargin*(1+1e-6), "%+v", *p)
	same(t, cmplx.Abs(1+p.At(twoPi*out.ModulusFrequency)), out.ModulusMargin, 1e-7*(1+want.ModulusMargin), "modulus margin", p)
	if t.Failed() {
		t.FailNow()
	}
}

// windingStable follows arg(1 + T) from ω ≈ 0 to high ω, adds the quarter circles of the poles at the origin, and compares with the
// open-loop poles on the right: for ω > 0 the angle must turn by +π for each pair of them (by π/2 for each one).
func windingStable(p *transfer.Product) bool {
	low, high := math.Log(1e-4), math.Log(1e9)
	right, origin := 0, p.Integrators
	for _, r := range p.Poles {
		if real(r) > 0 {
			right++
		}
	}
	if s := p.Sampled; s != nil {
		high = math.Log(math.Pi / s.Period)
		sum := 0.0
		for _, c := range s.Denominator {
			sum += c
		}
		if math.Abs(sum) < 1e-12 {
			origin++
		}
	}
	total := -float64(origin) * math.Pi / 2 // from the positive real axis to the start of the path
	var last complex128
	// Start on the positive real axis, where T is real: 1 + T there is positive, or negative for a negative low-frequency gain.
	sign := 1.0
	if p.Gain < 0 && (origin > 0 || p.Gain < -1) {
		sign = -1
	}
	const n = 60000
	first := 1 + p.At(math.Exp(low))
	total = math.Remainder(cmplx.Phase(first)-cmplx.Phase(complex(sign, 0))-total, 2*math.Pi) + total
	last = first
	step := func(u float64) {
		v := 1 + p.At(math.Exp(u))
		total += cmplx.Phase(v / last)
		last = v
	}
	for _, u := range grid(p, low, high, n) {
		step(u)
	}
	if p.Sampled == nil {
		total -= cmplx.Phase(last) // 1 + T → 1
	}
	return math.Abs(total-float64(right)*math.Pi/2) < 0.6
}

// Source: K. J. Åström, "Limitations on control system performance", European Journal of Control 6 (2000); closed forms of
// T = k(1 − s/z)/s re-derived for the check values, section 2.1 (exact).
func TestRightHalfPlaneZeroLimitsTheMarginInClosedForm(t *testing.T) {
	// The phase of the closed form reaches −180° only at infinity; a pole 10⁵ times above z brings it to a finite frequency and
	// changes the gain there by 10⁻⁵ and the phase at crossover by less than 6·10⁻⁴ degrees / part.
	const z = twoPi * 100
	for _, c := range []struct{ part, phase, gain float64 }{
		{2, 63.4349488, 6.98970004}, {3, 71.5650512, 10}, {4, 75.9637565, 12.3044892}, {5, 78.6900675, 14.1497335}, {10, 84.2894069, 20.0432137},
	} {
		wc := z / c.part
		k := wc / math.Hypot(1, 1/c.part) // |T(jωc)| = 1
		p := transfer.Product{Function: transfer.Function{Gain: k, Integrators: 1, Zeros: []complex128{z}, Poles: []complex128{-1e5 * z}}}
		var out Figures
		require.NoError(t, Measure(&p, 100e3, &out))
		assert.InEpsilon(t, wc/twoPi, out.Crossover, 1e-9)
		assert.InDelta(t, c.phase, out.PhaseMargin, 6e-4/c.part)
		assert.InDelta(t, c.gain, out.GainMargin, 1e-3)
		assert.True(t, out.Stable)
	}
}

// Identity: a delay turns the phase by 360°·f·T and leaves the magnitude alone.
func TestMarginDropsWithDelay(t *testing.T) {
	p := typical()
	var before, after Figures
	require.NoError(t, Measure(&p, 250e3, &before))
	p.Delay = 2e-6
	require.NoError(t, Measure(&p, 250e3, &after))
	assert.InEpsilon(t, before.Crossover, after.Crossover, 1e-12)
	assert.InDelta(t, before.PhaseMargin-360*before.Crossover*2e-6, after.PhaseMargin, 1e-9)
}

// Identity: scaling every frequency by k scales every crossover by k and no margin.
func TestScalingFrequenciesScalesCrossovers(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 32))
	for range 300 {
		p := random(r)
		k := math.Pow(10, 6*r.Float64()-3)
		q := transfer.Product{Function: transfer.Function{Gain: p.Gain * math.Pow(k, float64(p.Integrators)), Integrators: p.Integrators}}
		for _, z := range p.Zeros {
			q.Zeros = append(q.Zeros, z*complex(k, 0))
		}
		for _, z := range p.Poles {
			q.Poles = append(q.Poles, z*complex(k, 0))
		}
		var a, b Figures
		require.NoError(t, Measure(&p, 100e3, &a))
		require.NoError(t, Measure(&q, 100e3*k, &b))
		require.Len(t, b.Crossovers, len(a.Crossovers))
		for i := range a.Crossovers {
			require.InEpsilon(t, a.Crossovers[i]*k, b.Crossovers[i], 1e-8)
		}
		same(t, a.PhaseMargin, b.PhaseMargin, 1e-6, "phase margin", &p)
		same(t, a.GainMargin, b.GainMargin, 1e-6, "gain margin", &p)
		require.Equal(t, a.Stable, b.Stable)
	}
}

// Source: theory sheet section 8: |1 + T| >= mm guarantees PM >= 2·asin(mm/2) and GM >= −20·log(1 − mm).
func TestModulusMarginGuaranteesTheOthers(t *testing.T) {
	r := rand.New(rand.NewPCG(33, 34))
	var out Figures
	for range 2000 {
		p := random(r)
		require.NoError(t, Measure(&p, 100e3, &out))
		m := out.ModulusMargin
		if !out.Stable || m >= 1 || math.IsNaN(out.PhaseMargin) {
			continue
		}
		assert.GreaterOrEqual(t, out.PhaseMargin, 2*math.Asin(m/2)*180/math.Pi-1e-6)
		if !math.IsNaN(out.GainMargin) {
			assert.GreaterOrEqual(t, out.GainMargin, -20*math.Log10(1-m)-1e-6)
		}
	}
}

// Source: theory sheet section 13, trap 7: a plant with poles on the right and too little gain is unstable without any crossover.
func TestUnstablePlantWithoutCrossoverIsUnstable(t *testing.T) {
	p := transfer.Product{Function: transfer.Function{Gain: 0.5, Poles: []complex128{complex(500, 6000), complex(500, -6000)}}}
	var out Figures
	require.NoError(t, Measure(&p, 100e3, &out))
	assert.False(t, out.Stable)
	assert.Equal(t, 2, out.UnstablePlantPoles)
	assert.InDelta(t, 0.5, out.DCGain, 1e-12)
	// Held by a derivative path with enough gain: den + num = s² + (k − 1000)s + … has both roots on the left.
	p = transfer.Product{Function: transfer.Function{Gain: 2, Poles: p.Poles, Zeros: []complex128{-1000}}}
	require.NoError(t, Measure(&p, 100e3, &out))
	assert.True(t, out.Stable)
	assert.Positive(t, out.PhaseMargin)
}

// Source: closed form, den + num at s = 0 and the Routh array of a cubic: K/(s(1+s/a)(1+s/b)) is stable up to K = a + b.
func TestVerdictFlipsExactlyAtTheRouthBoundary(t *testing.T) {
	a, b := 1000.0, 30000.0
	for _, c := range []struct {
		part   float64
		stable bool
	}{{0.999999, true}, {1.000001, false}} {
		p := transfer.Product{Function: transfer.Function{Gain: (a + b) * c.part, Integrators: 1, Poles: []complex128{complex(-a, 0), complex(-b, 0)}}}
		var out Figures
		require.NoError(t, Measure(&p, 100e3, &out))
		assert.Equal(t, c.stable, out.Stable)
		assert.Equal(t, c.stable, out.PhaseMargin > 0)
		assert.InDelta(t, 0, out.GainMargin, 1e-5)
		assert.Less(t, out.ModulusMargin, 1e-5)
	}
}

func TestFiguresThatDoNotExistAreNaN(t *testing.T) {
	var out Figures
	require.NoError(t, Measure(&transfer.Product{Function: transfer.Function{Gain: 0.1, Poles: []complex128{-100}}}, 1e5, &out))
	assert.True(t, math.IsNaN(out.Crossover) && math.IsNaN(out.PhaseMargin) && math.IsNaN(out.GainMargin) && math.IsNaN(out.GainReductionMargin))
	assert.Empty(t, out.Crossovers)
	assert.True(t, out.Stable)
	require.NoError(t, Measure(&transfer.Product{}, 1e5, &out))
	assert.Equal(t, 1.0, out.ModulusMargin)
	assert.True(t, out.Stable)
}

func TestUndampedRootsAreMeasured(t *testing.T) {
	p := transfer.Product{Function: transfer.Function{Gain: 5, Poles: []complex128{6000i, -6000i, -1e6}, Zeros: []complex128{-3000, 40000i, -40000i}}}
	var out Figures
	require.NoError(t, Measure(&p, 100e3, &out))
	assert.NotEmpty(t, out.Crossovers)
	assert.False(t, math.IsNaN(out.PhaseMargin))
}

// Identity: seeded grid of values that no loop gain should have.
func TestUnusableLoopGainsAreRefusedNotMeasured(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	var out Figures
	for _, p := range []transfer.Product{
		{Function: transfer.Function{Gain: nan}}, {Function: transfer.Function{Gain: inf}},
		{Function: transfer.Function{Gain: 1, Poles: []complex128{0}}},
		{Function: transfer.Function{Gain: 1, Zeros: []complex128{complex(nan, 0)}}},
		{Function: transfer.Function{Gain: 1, Zeros: []complex128{complex(inf, 0)}}},
		{Function: transfer.Function{Gain: 1, Poles: []complex128{complex(1, 2)}}},
		{Function: transfer.Function{Gain: 1, Poles: []complex128{complex(1, 2), complex(1, 3)}}},
		{Function: transfer.Function{Gain: 1, Delay: -1}},
		{Function: transfer.Function{Gain: 1}, Sampled: &transfer.Sampled{}},
		{Function: transfer.Function{Gain: 1}, Sampled: &transfer.Sampled{Period: 1e-5, Numerator: []float64{1}, Denominator: []float64{0, 1}}},
		{Function: transfer.Function{Gain: 1}, Sampled: &transfer.Sampled{Period: 1e-5, Numerator: []float64{nan}, Denominator: []float64{1}}},
	} {
		assert.Error(t, Measure(&p, 1e5, &out), "%+v", p)
	}
	good := typical()
	for _, ff := range []float64{0, -1, nan, inf} {
		assert.Error(t, Measure(&good, ff, &out))
	}
	// A delay of a million periods is given up, not followed for ever.
	good.Delay = 400
	assert.ErrorIs(t, Measure(&good, 250e3, &out), ErrTooInvolved)
}

func TestMeasuringAllocatesNothingOnceWarm(t *testing.T) {
	p := typical()
	var m Meter
	var out Figures
	require.NoError(t, m.Measure(&p, 250e3, &out))
	assert.Zero(t, testing.AllocsPerRun(20, func() { _ = m.Measure(&p, 250e3, &out) }))
	assert.Less(t, m.walker.evals, 400) // the goal of the quality page
}

func TestLogSlopeIsTheDerivative(t *testing.T) {
	p := typical()
	p.Delay = 3e-6
	p.Sampled = &transfer.Sampled{Period: 5e-6, Numerator: []float64{1, -0.9}, Denominator: []float64{1, -0.4, 0.3}}
	var m Meter
	for _, w := range []float64{200, 5000, 90e3} {
		l, err := m.LogSlope(&p, w)
		require.NoError(t, err)
		const h = 1e-6
		want := cmplx.Log(p.At(w*math.Exp(h))/p.At(w*math.Exp(-h))) / (2 * h)
		assert.InDelta(t, 0, cmplx.Abs(l-want), 1e-6*(1+cmplx.Abs(want)))
	}
}

func TestALongMeasurementCanBeStopped(t *testing.T) {
	f := transfer.Product{Function: transfer.Function{Gain: 2, Delay: 1, Poles: []complex128{-1e9}}} // turns above one far beyond any step limit
	var m Meter
	asked := 0
	m.StopWhen(func() bool { asked++; return asked == 2 })
	var out Figures
	require.ErrorIs(t, m.Measure(&f, 1e5, &out), ErrStopped)
	require.Equal(t, 2, asked)
	m.StopWhen(nil)
	require.ErrorIs(t, m.Measure(&f, 1e5, &out), ErrTooInvolved)
}
