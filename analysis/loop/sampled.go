package loop

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"

	"halfplane/analysis/transfer"
)

// sample is the factor 1 − r·z^(−1) at z = e^(jψ), ψ = ω·period.
type sample struct {
	r          complex128
	size, turn float64 // |r| and arg r
	steepest   float64 // δ at which ln|f| rises most, see slopes
}

// setSampled takes N(z)/D(z) apart into such factors. Leading zeros of N are whole samples of delay. A root at z = 1 is an
// integrator (in N: a differentiator); roots of D outside the unit circle are unstable poles; others on it are nudged in.
func (f *form) setSampled(s *transfer.Sampled) error {
	if !(s.Period > 0) || math.IsInf(s.Period, 0) {
		return fmt.Errorf("measuring a loop: sampling period %v s", s.Period)
	}
	f.period = s.Period
	first := 0
	for first < len(s.Numerator) && s.Numerator[first] == 0 {
		first++
	}
	if len(s.Denominator) == 0 || s.Denominator[0] == 0 {
		return errors.New("measuring a loop: the sampled factor's denominator has no first coefficient")
	}
	if first == len(s.Numerator) {
		f.gain, f.low = 0, 0
		return nil
	}
	f.delay += float64(first) * s.Period
	f.gain *= s.Numerator[first] / s.Denominator[0]
	f.low = f.gain
	if err := f.appendSamples(s.Numerator[first:], -1); err != nil {
		return err
	}
	f.numerators = len(f.samples)
	return f.appendSamples(s.Denominator, 1)
}

// appendSamples adds the roots of Σ c[k]·z^(−k), side 1 for the denominator, −1 for the numerator.
func (f *form) appendSamples(c []float64, side int) error {
	ascending := make([]float64, len(c))
	for k, v := range c {
		ascending[len(c)-1-k] = v
	}
	roots, err := transfer.Roots(ascending)
	if err != nil {
		return fmt.Errorf("measuring a loop: sampled factor: %w", err)
	}
	for _, r := range roots {
		if cmplx.Abs(r-1) < 1e-7 {
			f.order += side
			f.samples = append(f.samples, sample{r: 1, size: 1})
			continue
		}
		if math.Abs(cmplx.Abs(r)-1) < lightest {
			r *= 1 - lightest
		}
		if side > 0 && cmplx.Abs(r) > 1 {
			f.unstable++
		}
		f.low *= math.Pow(cmplx.Abs(1-r), -float64(side))
		if imag(r) == 0 && real(r) > 1 {
			f.low = -f.low // the others, conjugate pairs included, are positive at z = 1
		}
		p := cmplx.Abs(r)
		f.samples = append(f.samples, sample{r, p, cmplx.Phase(r), math.Acos(math.Min(1, 2*p/(1+p*p)))})
	}
	return nil
}

// sampledAt gives the sampled factor's value and d ln/du at ω.
func (f *form) sampledAt(w float64) (v, l complex128) {
	psi := w * f.period
	sin, cos := math.Sincos(-psi)
	shift := complex(cos, sin)
	v = 1
	for i := range f.samples {
		x := f.samples[i].r * shift
		share := complex(0, psi) * x / (1 - x)
		if i < f.numerators {
			v, l = v*(1-x), l+share
		} else {
			v, l = v/(1-x), l-share
		}
	}
	return v, l
}

// slopes gives the ranges of the factor's d ln|f|/du and d arg f/du while ψ runs from psi1 to psi2. With δ = ψ − arg r, ρ = |r|:
//
//	d ln|f|/dψ = ρ·sin δ/(1 + ρ² − 2ρ·cos δ), extremes ±ρ/|1 − ρ²| at cos δ = 2ρ/(1 + ρ²)
//	d arg f/dψ = (ρ·cos δ − ρ²)/(1 + ρ² − 2ρ·cos δ), extremes ρ/(1 − ρ) at δ = 0 and −ρ/(1 + ρ) at π
func (s *sample) slopes(psi1, psi2 float64) (least, greatest slope) {
	if s.size == 0 {
		return
	}
	p := s.size
	d1, d2 := psi1-s.turn, psi2-s.turn
	a, b := s.share(d1), s.share(d2)
	least = slope{math.Min(a.magnitude, b.magnitude), math.Min(a.phase, b.phase)}
	greatest = slope{math.Max(a.magnitude, b.magnitude), math.Max(a.phase, b.phase)}
	for full := -2 * math.Pi; full <= 2*math.Pi; full += 2 * math.Pi {
		if inside(s.steepest+full, d1, d2) {
			greatest.magnitude = p / math.Abs(1-p*p)
		}
		if inside(-s.steepest+full, d1, d2) {
			least.magnitude = -p / math.Abs(1-p*p)
		}
		if inside(full, d1, d2) {
			least.phase, greatest.phase = math.Min(least.phase, p/(1-p)), math.Max(greatest.phase, p/(1-p))
		}
		if inside(math.Pi+full, d1, d2) {
			least.phase, greatest.phase = math.Min(least.phase, -p/(1+p)), math.Max(greatest.phase, -p/(1+p))
		}
	}
	least.magnitude, greatest.magnitude = stretch(least.magnitude, greatest.magnitude, psi1, psi2)
	least.phase, greatest.phase = stretch(least.phase, greatest.phase, psi1, psi2)
	return least, greatest
}

// share gives both derivatives at one δ, with 1 + ρ² − 2ρ·cos δ = (1 − ρ)² + 4ρ·sin²(δ/2) free of cancellation.
func (s *sample) share(d float64) slope {
	p := s.size
	sin, cos := math.Sincos(d / 2)
	h := (1-p)*(1-p) + 4*p*sin*sin
	return slope{2 * p * sin * cos / h, p * (1 - p - 2*sin*sin) / h}
}

func inside(x, low, high float64) bool { return x > low && x < high }

// stretch is the range of x·ψ for x between low and high and ψ between psi1 and psi2, both positive.
func stretch(low, high, psi1, psi2 float64) (float64, float64) {
	return math.Min(low*psi1, low*psi2), math.Max(high*psi1, high*psi2)
}
