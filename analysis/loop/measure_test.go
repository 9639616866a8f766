package loop

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"sort"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

const twoPi = 2 * math.Pi

func pair(hz, quality float64) []complex128 {
	x, y := transfer.Quadratic(1, 1/quality, 1)
	return []complex128{x * complex(twoPi*hz, 0), y * complex(twoPi*hz, 0)}
}

func random(r *rand.Rand) transfer.Product {
	decades := func(low, high float64) float64 { return math.Pow(10, low+(high-low)*r.Float64()) }
	var p transfer.Product
	p.Gain = decades(-2, 3)
	if r.IntN(8) == 0 {
		p.Gain = -p.Gain
	}
	p.Integrators = r.IntN(3)
	root := func(right int) []complex128 {
		f, q := decades(1, 5.5), decades(-0.5, 3.5)
		side := complex128(1)
		if r.IntN(right) == 0 {
			side = -1
		}
		if r.IntN(2) == 0 {
			return []complex128{side * complex(-twoPi*f, 0)}
		}
		x := pair(f, q)
		return []complex128{side * x[0], side * x[1]}
	}
	for range 1 + r.IntN(4) {
		p.Poles = append(p.Poles, root(8)...)
	}
	for range r.IntN(5) {
		p.Zeros = append(p.Zeros, root(4)...)
	}
	p.Gain *= math.Pow(twoPi*decades(1, 4), float64(p.Integrators))
	return p
}

// reference measures t the plain way: a dense grid, denser around every root, and bisection.
type reference struct {
	crossovers, phase []float64 // rad/s
	modulus           float64
}

// grid is evenly spaced in ln ω and denser around every root: steps of a tenth of its half-width over 30 half-widths.
func grid(t *transfer.Product, low, high float64, points int) []float64 {
	var us []float64
	for i := range points {
		us = append(us, low+(high-low)*float64(i)/float64(points-1))
	}
	for _, r := range append(append([]complex128{}, t.Zeros...), t.Poles...) {
		for k := -300; k <= 300; k++ {
			w := cmplx.Abs(r) + 0.1*float64(k)*math.Abs(real(r))
			if w > 0 && math.Log(w) > low && math.Log(w) < high {
				us = append(us, math.Log(w))
			}
		}
	}
	sort.Float64s(us)
	return us
}

func search(t *transfer.Product, ff float64, points int) reference {
	low, high := math.Log(twoPi*1e-6*ff), math.Log(twoPi*10*ff)
	if t.Sampled != nil {
		high = math.Log(math.Pi / t.Sampled.Period)
	}
	us := grid(t, low, high, points)
	magnitude := func(u float64) float64 { return math.Log(cmplx.Abs(t.At(math.Exp(u)))) }
	angle := func(u float64) float64 { return cmplx.Phase(-t.At(math.Exp(u))) }
	bisect := func(f func(float64) float64, a, b float64) float64 {
		fa := f(a)
		for range 60 {
			m := (a + b) / 2
			if fm := f(m); (fm < 0) == (fa < 0) {
				a = m
			} else {
				b = m
			}
		}
		return math.Exp((a + b) / 2)
	}
	out := reference{modulus: math.Inf(1)}
	modulus := func(u float64) float64 { return cmplx.Abs(1 + t.At(math.Exp(u))) }
	var last [3]float64
	for i, u := range us {
		now := [3]float64{magnitude(u), angle(u), modulus(u)}
		if i > 0 {
			if (now[0] < 0) != (last[0] < 0) {
				out.crossovers = append(out.crossovers, bisect(magnitude, us[i-1], u))
			}
			if (now[1] < 0) != (last[1] < 0) && math.Abs(now[1]-last[1]) < math.Pi {
				out.phase = append(out.phase, bisect(angle, us[i-1], u))
			}
		}
		if now[2] < out.modulus {
			out.modulus = now[2]
			a, b := us[max(i-1, 0)], us[min(i+1, len(us)-1)]
			for range 50 { // ternary search around the best point
				c, d := a+(b-a)/3, b-(b-a)/3
				if modulus(c) < modulus(d) {
					b = d
				} else {
					a = c
				}
			}
			out.modulus = math.Min(out.modulus, modulus((a+b)/2))
		}
		last = now
	}
	return out
}

// closedLoopRight counts the roots of den + num in the right half-plane and gives the smallest |Re|/|root| of all.
func closedLoopRight(t *testing.T, p *transfer.Product) (right int, clearance float64) {
	var log float64
	n := 0
	for _, r := range append(append([]complex128{}, p.Zeros...), p.Poles...) {
		log += math.Log(cmplx.Abs(r))
		n++
	}
	num, den := p.Polynomials(math.Exp(log / float64(n)))
	for len(num) < len(den) {
		num = append(num, 0)
	}
	for i := range den {
		num[i] += den[i]
	}
	roots, err := transfer.Roots(num)
	require.NoError(t, err)
	clearance = math.Inf(1)
	for _, r := range roots {
		if real(r) > 0 {
			right++
		}
		clearance = math.Min(clearance, math.Abs(real(r))/cmplx.Abs(r))
	}
	return right, clearance
}

func expected(r reference, p *transfer.Product, stable bool) Figures {
	nan := math.NaN()
	f := Figures{Crossover: nan, PhaseMargin: nan, GainMargin: nan, GainReductionMargin: nan, ModulusMargin: r.modulus}
	best := math.Inf(1)
	for _, w := range r.crossovers {
		f.Crossovers = append(f.Crossovers, w/twoPi)
		f.Crossover = w / twoPi
		best = math.Min(best, math.Abs(cmplx.Phase(-p.At(w)))*180/math.Pi)
	}
	if len(r.crossovers) > 0 {
		f.PhaseMargin = best
		if !stable {
			f.PhaseMargin = -best
		}
	}
	below, above := math.Inf(1), math.Inf(1)
	for _, w := range r.phase {
		g := 20 * math.Log10(cmplx.Abs(p.At(w)))
		if g < 0 {
			below = math.Min(below, -g)
		} else {
			above = math.Min(above, g)
		}
	}
	if stable {
		if !math.IsInf(below, 0) {
			f.GainMargin = below
		}
		if !math.IsInf(above, 0) {
			f.GainReductionMargin = above
		}
	} else if n := math.Min(below, above); !math.IsInf(n, 0) {
		f.GainMargin = -n
	}
	return f
}

func same(t *testing.T, want, got, tolerance float64, name string, p *transfer.Product) {
	t.Helper()
	if math.IsNaN(want) && math.IsNaN(got) {
		return
	}
	if !(math.Abs(want-got) <= tolerance) {
		t.Errorf("%s: got %v, want %v; loop %+v", name, got, want, *p)
	}
}

// Source: independent computation, a grid of 20,000 points with clusters around every root, bisection, roots of den + num.
func TestFindsWhatADenseSearchFinds(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	var out Figures
	var meter Meter
	loops, near, total, most := 40, 0, 0, 0
	if testing.Short() {
		loops = 15
	}
	for range loops {
		p := random(r)
		err := meter.Measure(&p, 100e3, &out)
		evals := meter.walker.evals
		require.NoError(t, err, "%+v", p)
		total, most = total+evals, max(most, evals)
		ref := search(&p, 100e3, 20000)
		right, clearance := closedLoopRight(t, &p)
		if clearance < 1e-6 {
			near++
			continue
		}
		require.Equal(t, right == 0, out.Stable, "%d closed-loop poles on the right; %+v", right, p)
		want := expected(ref, &p, right == 0)
		if len(want.Crossovers) != len(out.Crossovers) {
			// Two crossovers closer than the grid are seen only here: both must be real.
			require.Greater(t, len(out.Crossovers), len(want.Crossovers), "%+v", p)
			for _, f := range out.Crossovers {
				require.InDelta(t, 1, cmplx.Abs(p.At(twoPi*f)), 1e-6)
			}
			continue
		}
		for i := range want.Crossovers {
			require.InEpsilon(t, want.Crossovers[i], out.Crossovers[i], 1e-6)
		}
		same(t, want.Crossover, out.Crossover, 1e-6*want.Crossover, "crossover", &p)
		same(t, want.PhaseMargin, out.PhaseMargin, 1e-4, "phase margin", &p)
		same(t, want.GainMargin, out.GainMargin, 1e-4, "gain margin", &p)
		same(t, want.GainReductionMargin, out.GainReductionMargin, 1e-4, "gain reduction margin", &p)
		require.LessOrEqual(t, out.ModulusMargin, want.ModulusMargin*(1+1e-6), "%+v", p) // the grid may be the coarser one
		same(t, cmplx.Abs(1+p.At(twoPi*out.ModulusFrequency)), out.ModulusMargin, 1e-7*(1+want.ModulusMargin), "modulus margin", &p)
		if t.Failed() {
			t.FailNow()
		}
	}
	t.Logf("%d loops, %d too near the boundary to judge, %d evaluations on average, %d at most", loops, near, total/loops, most)
}

// Source: roots of den + num (gonum eigenvalues), thousands of loops; nothing else is compared, so this one is quick.
func TestStabilityIsThatOfTheClosedLoopPoles(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	var out Figures
	unstable := 0
	for range 20000 {
		p := random(r)
		if r.IntN(3) == 0 { // improper and biproper loops too
			p.Zeros = append(p.Zeros, complex(-1e4*r.Float64(), 0), complex(1e5*(r.Float64()-0.5), 0))
		}
		right, clearance := closedLoopRight(t, &p)
		if clearance < 1e-7 {
			continue
		}
		require.NoError(t, Measure(&p, 100e3, &out))
		require.Equal(t, right == 0, out.Stable, "%d closed-loop poles on the right; %+v", right, p)
		if right > 0 {
			unstable++
		}
	}
	assert.Greater(t, unstable, 2000)
}
