package transfer

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestRootsOfKnownPolynomials(t *testing.T) {
	for _, c := range []struct {
		name   string
		source string
		coeffs []float64
		want   []complex128
	}{
		{"constant", "definition", []float64{3}, nil},
		{"line", "definition", []float64{6, -2}, []complex128{3}},
		{"pair", "(x+1)²+4", []float64{5, 2, 1}, []complex128{-1 + 2i, -1 - 2i}},
		{"wide real", "(x+1e-9)(x+1e9)", []float64{1, 1e9 + 1e-9, 1}, []complex128{-1e-9, -1e9}},
		{"leading zeros", "x²(x−2)", []float64{0, 0, -2, 1, 0, 0}, []complex128{0, 0, 2}},
		{"difference of squares", "x²−4", []float64{-4, 0, 1}, []complex128{2, -2}},
		{"cubic", "(x+1)(x²+1e6)", []float64{1e6, 1e6, 1, 1}, []complex128{-1, 1e3i, -1e3i}},
		{"quartic", "(x+1)(x+2)(x+3)(x+4), Vieta", []float64{24, 50, 35, 10, 1}, []complex128{-1, -2, -3, -4}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, err := Roots(c.coeffs)
			require.NoError(t, err)
			require.Len(t, got, len(c.want), c.source)
			for _, w := range c.want {
				assert.LessOrEqual(t, nearest(got, w), 1e-9*math.Max(cmplx.Abs(w), 1e-9), "%v in %v", w, got)
			}
		})
	}
}

func nearest(roots []complex128, want complex128) float64 {
	best := math.Inf(1)
	for _, r := range roots {
		best = math.Min(best, cmplx.Abs(r-want))
	}
	return best
}

func TestRootsRefuseWhatHasNone(t *testing.T) {
	for _, bad := range [][]float64{nil, {0, 0}, {1, math.NaN()}, {math.Inf(1), 1}} {
		_, err := Roots(bad)
		assert.Error(t, err, "%v", bad)
	}
	_, err := Eigenvalues(2, []float64{1, 2, 3})
	assert.Error(t, err)
	_, err = Eigenvalues(1, []float64{math.Inf(-1)})
	assert.Error(t, err)
}

func TestQuadraticRootsScaleWithTheirVariable(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 1000 {
		a, b, c := r.NormFloat64(), r.NormFloat64(), r.NormFloat64()
		k := math.Exp(60 * r.NormFloat64())
		x, y := Quadratic(a, b, c)
		u, v := Quadratic(a/k/k, b/k, c)
		assert.InDelta(t, 0, cmplx.Abs(u/complex(k, 0)-x), 1e-12*cmplx.Abs(x))
		assert.InDelta(t, 0, cmplx.Abs(v/complex(k, 0)-y), 1e-12*cmplx.Abs(y))
		assert.InEpsilon(t, c/a, real(x*y), 1e-12)
		assert.InDelta(t, -b/a, real(x+y), 1e-12*(cmplx.Abs(x)+cmplx.Abs(y)))
	}
}

// A loop-like function with every feature: pair zeros, real poles, an integrator, a delay.
func sample() Function {
	return Function{Gain: -3, Integrators: 1, Zeros: []complex128{complex(-10, 400), complex(-10, -400), 5e4},
		Poles: []complex128{-70, complex(-500, 3000), complex(-500, -3000), -1e6, -2e6}, Delay: 1e-6}
}

func TestQuickFormEqualsDefinition(t *testing.T) {
	f := sample()
	g := Function{Gain: 2, Integrators: -2, Zeros: []complex128{complex(3, 4)}, Poles: []complex128{complex(-1, 2), complex(-1, -2)}}
	for _, h := range []Function{f, g, {Gain: 1.5}, {Gain: 1, Integrators: 3}} {
		for w := 1e-3; w < 1e9; w *= 3.7 {
			want, got := h.Eval(complex(0, w)), h.At(w)
			assert.InDelta(t, 0, cmplx.Abs(want-got), 1e-12*cmplx.Abs(want))
		}
	}
}

func TestConjugateFrequencyGivesConjugateResponse(t *testing.T) {
	f := sample()
	for w := 1.0; w < 1e8; w *= 5 {
		assert.InDelta(t, 0, cmplx.Abs(cmplx.Conj(f.At(w))-f.At(-w)), 1e-12*cmplx.Abs(f.At(w)))
	}
}

func TestPolynomialsAndRootsAreInverse(t *testing.T) {
	f := sample()
	f.Delay = 0
	num, den := f.Polynomials(1e4)
	g, err := FromPolynomials(num, den, 1e4)
	require.NoError(t, err)
	assert.Equal(t, f.Integrators, g.Integrators)
	for w := 1.0; w < 1e8; w *= 2 {
		assert.InDelta(t, 0, cmplx.Abs(f.At(w)/g.At(w)-1), 1e-8)
	}
	_, err = FromPolynomials([]float64{0}, den, 1e4)
	assert.Error(t, err)
	_, err = FromPolynomials(num, nil, 1e4)
	assert.Error(t, err)
	_, err = FromPolynomials(num, den, -1)
	assert.Error(t, err)
}

func TestProductEqualsItsFactors(t *testing.T) {
	f, g := sample(), Function{Gain: 4, Zeros: []complex128{-5}, Integrators: -1, Delay: 2e-6}
	before := len(f.Zeros)
	h := Multiply(f, g)
	assert.Len(t, f.Zeros, before)
	for w := 1.0; w < 1e7; w *= 3 {
		assert.InDelta(t, 0, cmplx.Abs(h.At(w)/(f.At(w)*g.At(w))-1), 1e-12)
	}
	var copied Function
	copied.Set(&h)
	assert.Equal(t, h.At(77), copied.At(77))
}

func TestSampledFactorRepeatsWithTheSamplingFrequency(t *testing.T) {
	p := Product{Function: Function{Gain: 2, Delay: 1e-6}, Sampled: &Sampled{Period: 1e-5, Numerator: []float64{5, -4}, Denominator: []float64{1, -0.5}}}
	ws := 2 * math.Pi / p.Sampled.Period
	for w := 100.0; w < ws; w *= 2 {
		assert.InDelta(t, 0, cmplx.Abs(p.Sampled.At(w)-p.Sampled.At(w+ws)), 1e-9)
		assert.InDelta(t, 0, cmplx.Abs(p.At(w)-p.Eval(complex(0, w))), 1e-12)
	}
	// z = 1: (5−4)/(1−0.5), geometric series.
	assert.InDelta(t, 2.0, real(p.Sampled.At(0)), 1e-15)
}

func TestNothingPanicsOnOddRoots(t *testing.T) {
	odd := []float64{0, math.Inf(1), math.NaN(), 1e-300, 1e300, -1}
	for _, a := range odd {
		for _, b := range odd {
			f := Function{Gain: a, Integrators: 2, Zeros: []complex128{complex(a, b), complex(a, -b)}, Poles: []complex128{complex(b, 0), complex(b, a)}}
			assert.NotPanics(t, func() { f.At(a); f.At(b); f.Polynomials(a); Roots([]float64{a, b, a, b}) })
		}
	}
}
