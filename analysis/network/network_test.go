package network

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

// byImpedances evaluates a network from its impedances at s, the long way: theory sheet section 7 and the table of the
// spec format, with no polynomial and no pole in between.
func byImpedances(p *Parts, s complex128, finite bool) complex128 {
	c := func(x float64) complex128 { return complex(x, 0) }
	parallel := func(a, b complex128) complex128 { return a * b / (a + b) }
	capacitor := func(x float64) complex128 { return 1 / (s * c(x)) }
	zf := capacitor(p.IntegratorCapacitor)
	if p.Kind != Type1 {
		zf += c(p.FeedbackResistor)
		if p.RolloffCapacitor > 0 && p.Kind != Optocoupler {
			zf = parallel(zf, capacitor(p.RolloffCapacitor))
		}
	}
	zi := c(p.UpperResistor)
	if p.LeadCapacitor > 0 {
		zi = parallel(zi, c(p.LeadResistor)+capacitor(p.LeadCapacitor))
	}
	switch p.Kind {
	case Transconductance:
		if p.OutputResistance > 0 {
			zf = parallel(zf, c(p.OutputResistance))
		}
		return c(p.Transconductance) * zf * c(p.LowerResistor) / (c(p.LowerResistor) + zi)
	case Optocoupler:
		fast := complex128(1)
		if p.FixedLEDSupply {
			fast = 0
		}
		h := c(p.CurrentTransferRatio*p.PullUpResistor/p.LEDResistor) * (fast + zf/zi) / (1 + s*c(p.PullUpResistor*p.RolloffCapacitor))
		if p.OptocouplerPole > 0 {
			h /= 1 + s/c(2*math.Pi*p.OptocouplerPole)
		}
		return h
	}
	h := zf / zi
	if finite && (p.GainBandwidth > 0 || p.OpenLoopGain > 0) {
		gain := p.OpenLoopGain
		if gain == 0 {
			gain = 1e6
		}
		inverse := c(1 / gain)
		if p.GainBandwidth > 0 {
			inverse += s / c(2*math.Pi*p.GainBandwidth)
		}
		ground := zi
		if p.LowerResistor > 0 {
			ground = parallel(zi, c(p.LowerResistor))
		}
		h /= 1 + (1+zf/ground)*inverse
	}
	return h
}

func randomParts(r *rand.Rand, kind Kind) Parts {
	decades := func(low, high float64) float64 { return math.Pow(10, low+(high-low)*r.Float64()) }
	maybe := func(x float64) float64 {
		if r.IntN(4) == 0 {
			return 0
		}
		return x
	}
	p := Parts{
		Kind: kind, UpperResistor: decades(2, 6), LowerResistor: decades(2, 6), FeedbackResistor: decades(2, 6),
		IntegratorCapacitor: decades(-10, -6), RolloffCapacitor: maybe(decades(-12, -8)),
	}
	switch kind {
	case Type3:
		p.LeadResistor, p.LeadCapacitor = decades(1, 5), decades(-11, -7)
	case Transconductance:
		p.Transconductance, p.OutputResistance = decades(-4, -2), maybe(decades(5, 8))
		p.LeadCapacitor = maybe(decades(-11, -8))
		p.LeadResistor = decades(1, 5)
	case Optocoupler:
		p.LEDResistor, p.PullUpResistor, p.CurrentTransferRatio = decades(2, 4), decades(2, 5), decades(-1, 1)
		p.OptocouplerPole, p.FixedLEDSupply = maybe(decades(3, 6)), r.IntN(2) == 0
	}
	if kind <= Type3 {
		p.GainBandwidth, p.OpenLoopGain = maybe(decades(5, 9)), maybe(decades(2, 7))
	}
	return p
}

// Source: independent computation, the impedances of the spec format's table.
func TestEveryAnalogueNetworkIsItsImpedances(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	var out transfer.Product
	for _, kind := range []Kind{Type1, Type2, Type3, Transconductance, Optocoupler} {
		for range 3000 {
			p := randomParts(r, kind)
			require.NoError(t, Build(&p, &out), "%+v", p)
			for decade := -1.0; decade <= 9; decade += 0.7 {
				w := math.Pow(10, decade)
				want := byImpedances(&p, complex(0, w), true)
				got := out.At(w)
				assert.LessOrEqual(t, cmplx.Abs(got-want), 1e-9*cmplx.Abs(want), "%v at %g rad/s: %v, want %v; %+v", kind, w, got, want, p)
			}
			if t.Failed() {
				t.FailNow()
			}
		}
	}
}

// Source: the definition of a root; the eigenvalues of the companion matrix (gonum, package transfer) as the second opinion.
func TestFastRootsAgreeWithEigenvalues(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for n := 3; n <= 4; n++ {
		for range 20000 {
			var a poly
			a[0] = 1
			for k := 1; k <= n; k++ {
				a[k] = a[k-1] * math.Pow(10, 5*(r.Float64()-0.7))
			}
			var x [4]complex128
			require.True(t, a.simultaneous(x[:n]), "%v", a)
			pairUp(x[:n])
			// The elementary symmetric functions give the coefficients back.
			back := transfer.Expand(x[:n], 1)
			for k := range back {
				assert.InEpsilon(t, a[k], back[k], 1e-9, "coefficient %d of %v, roots %v", k, a, x)
			}
			slow, err := transfer.Roots(a[:n+1])
			require.NoError(t, err)
			for _, s := range slow {
				nearest := math.Inf(1)
				for _, f := range x[:n] {
					nearest = math.Min(nearest, cmplx.Abs(f-s)/cmplx.Abs(s))
				}
				assert.Less(t, nearest, 1e-5, "%v of %v, fast roots %v", s, a, x[:n]) // near-double roots lose half the digits
			}
			if t.Failed() {
				t.FailNow()
			}
		}
	}
}

func TestMultipleRootsAreFound(t *testing.T) {
	for _, a := range []poly{{1, 3, 3, 1}, {1, 4, 6, 4, 1}, {1, 2, 2, 2, 1}, {4, 12, 13, 6, 1}} {
		n := a.degree()
		roots, err := a.appendRoots(nil, 1)
		require.NoError(t, err)
		back := transfer.Expand(roots, 1)
		for k := range back {
			assert.InDelta(t, a[k]/a[0], back[k], 1e-3, "%v: roots %v", a[:n+1], roots)
		}
	}
}

// Identity: theory sheet section 7, "The lower resistor has no effect on an ideal op-amp's loop".
func TestLowerResistorDoesNothingToAnIdealAmplifier(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	var with, without transfer.Product
	for range 200 {
		p := randomParts(r, Type3)
		q := p
		q.LowerResistor = 0
		require.NoError(t, BuildIdeal(&p, &with))
		require.NoError(t, BuildIdeal(&q, &without))
		assert.Equal(t, without, with)
	}
}

// Identity: an amplifier a thousand times beyond the network is the ideal one.
func TestFastAmplifierIsAlmostIdeal(t *testing.T) {
	p := Parts{Kind: Type3, UpperResistor: 100e3, LowerResistor: 5490, FeedbackResistor: 7870, IntegratorCapacitor: 39e-9, RolloffCapacitor: 1e-9,
		LeadResistor: 2050, LeadCapacitor: 2.7e-9, GainBandwidth: 1e12, OpenLoopGain: 1e9}
	var finite, ideal transfer.Product
	require.NoError(t, Build(&p, &finite))
	require.NoError(t, BuildIdeal(&p, &ideal))
	for w := 10.0; w < 1e6; w *= 3 {
		assert.Less(t, cmplx.Abs(finite.At(w)/ideal.At(w)-1), 1e-4)
	}
}

// Identity: theory sheet section 7, the fast lane: |H| never falls below CTR·Rpu/Rled before the poles.
func TestOptocouplerNeverFallsBelowItsFastLane(t *testing.T) {
	p := Parts{Kind: Optocoupler, UpperResistor: 38.3e3, IntegratorCapacitor: 8.2e-9, LEDResistor: 931, PullUpResistor: 4750, CurrentTransferRatio: 1}
	var out transfer.Product
	require.NoError(t, Build(&p, &out))
	for w := 1.0; w < 1e9; w *= 2 {
		assert.GreaterOrEqual(t, cmplx.Abs(out.At(w)), 4750.0/931*(1-1e-12))
	}
}

func TestDigitalNetworkIsItsDifferenceEquation(t *testing.T) {
	p := Parts{Kind: Digital, SamplingFrequency: 150e3, SenseGain: 0.1, Delay: 6.67e-6,
		Numerator: []float64{5.7018678, -10.900154, 5.2069149}, Denominator: []float64{1, -1.22826091, 0.22826091}}
	var out transfer.Product
	require.NoError(t, Build(&p, &out))
	w := 2 * math.Pi * 11e3
	z1 := cmplx.Exp(complex(0, -w/150e3)) // z^−1
	want := 0.1 * (5.7018678 - 10.900154*z1 + 5.2069149*z1*z1) / (1 - 1.22826091*z1 + 0.22826091*z1*z1) * cmplx.Exp(complex(0, -w*6.67e-6))
	assert.Less(t, cmplx.Abs(out.At(w)-want), 1e-12*cmplx.Abs(want))
}

func TestTransferFunctionTakesPairs(t *testing.T) {
	p := Parts{Kind: TransferFunction, Gain: 3, SenseGain: 0.5, Integrator: 25, Zeros: []Root{{Frequency: 1000, Quality: 2}, {Frequency: 300}},
		Poles: []Root{{Frequency: 50e3, Quality: 0.3}, {Frequency: 70e3}}}
	var out transfer.Product
	require.NoError(t, Build(&p, &out))
	f := 1400.0
	s := complex(0, f) // in hertz: the 2π cancels everywhere
	want := 1.5 * (25 / s) * (1 + s/2000 + s*s/1e6) * (1 + s/300) / ((1 + s/15e3 + s*s/2.5e9) * (1 + s/70e3))
	assert.Less(t, cmplx.Abs(out.At(2*math.Pi*f)-want), 1e-12*cmplx.Abs(want))
}

func TestNamesGoThereAndBack(t *testing.T) {
	for _, k := range Kinds() {
		got, ok := ParseKind(k.String())
		assert.True(t, ok)
		assert.Equal(t, k, got)
	}
	_, ok := ParseKind("unknown network")
	assert.False(t, ok)
	assert.Equal(t, "unknown network", Kind(0).String())
	assert.Equal(t, "unknown network", Kind(99).String())
}

func TestPartsThatMakeNoNetworkAreRefused(t *testing.T) {
	var out transfer.Product
	nan := math.NaN()
	for name, p := range map[string]Parts{
		"no kind":            {},
		"unknown kind":       {Kind: 42},
		"nothing":            {Kind: Type3},
		"negative resistor":  {Kind: Type1, UpperResistor: -1, IntegratorCapacitor: 1e-9},
		"not a number":       {Kind: Type1, UpperResistor: nan, IntegratorCapacitor: 1e-9},
		"infinite":           {Kind: Type1, UpperResistor: math.Inf(1), IntegratorCapacitor: 1e-9},
		"negative amplifier": {Kind: Type1, UpperResistor: 1, IntegratorCapacitor: 1e-9, GainBandwidth: -1},
		"no coefficients":    {Kind: Digital, SamplingFrequency: 1e5},
		"not causal":         {Kind: Digital, SamplingFrequency: 1e5, Numerator: []float64{1}, Denominator: []float64{0, 1}},
		"not sampled":        {Kind: Digital, Numerator: []float64{1}, Denominator: []float64{1}},
	} {
		assert.Error(t, Build(&p, &out), name)
	}
}

// Source: own vector of the check values, section 3.3 (independent computation).
func TestSetPointIsTheDivider(t *testing.T) {
	p := Parts{Kind: Type2, ReferenceVoltage: 0.7, UpperResistor: 51.1e3, LowerResistor: 1.5e3}
	assert.InDelta(t, 24.54667, SetPoint(&p), 1e-5)
	p.LowerResistor = 0
	assert.True(t, math.IsNaN(SetPoint(&p)))
	p = Parts{Kind: Digital, ReferenceVoltage: 0.7, UpperResistor: 1, LowerResistor: 1}
	assert.True(t, math.IsNaN(SetPoint(&p)))
}

func TestBuildAllocatesNothingOnceWarm(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for _, kind := range []Kind{Type1, Type2, Type3, Transconductance, Optocoupler} {
		p := randomParts(r, kind)
		p.GainBandwidth, p.OpenLoopGain = 1e7, 3e4
		var out transfer.Product
		require.NoError(t, Build(&p, &out))
		assert.Zero(t, testing.AllocsPerRun(50, func() { _ = Build(&p, &out) }), "%v", kind)
	}
}

func BenchmarkBuild(b *testing.B) {
	p := Parts{Kind: Type3, UpperResistor: 100e3, LowerResistor: 5490, FeedbackResistor: 7870, IntegratorCapacitor: 39e-9, RolloffCapacitor: 1e-9,
		LeadResistor: 2050, LeadCapacitor: 2.7e-9, GainBandwidth: 10e6, OpenLoopGain: 31623}
	var out transfer.Product
	b.Run("finite", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			_ = Build(&p, &out)
		}
	})
	b.Run("ideal", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			_ = BuildIdeal(&p, &out)
		}
	})
}
