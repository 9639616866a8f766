package loop

import (
	"errors"
	"fmt"
	"math"

	"halfplane/analysis/transfer"
)

// lightest is the least damping ratio that a root may have. A root on the imaginary axis makes |T| infinite or zero there; this
// much damping changes no figure and keeps every frequency finite. Poles count as stable when they are nudged.
const lightest = 1e-9

// form is a loop gain ready for measuring:
//
//	T(jω) = gain · (jω)^(−integrators) · Π zeros / Π poles · e^(−jω·delay) · sampled factor
//
// Real roots and conjugate pairs are alike real quadratics in jω, see section.
type form struct {
	gain        float64
	integrators int
	delay       float64
	sections    []section // the zeros, then the poles
	zeros       int       // how many of sections are zeros
	samples     []sample  // factors of N(z), then of D(z)
	numerators  int       // how many of samples belong to N
	period      float64   // s, 0 without a sampled factor
	unstable    int       // open-loop poles in the right half-plane
	order       int       // poles at the origin, of the sampled factor too, less zeros there
	low         float64   // K where T → K/s^order at s → 0, up to a positive factor for sampled roots at z = 1
}

// section is 1 + b·s + a·s² at s = jω: a root r has a = 0 and b = −1/r, a pair r, r* has a = 1/|r|², b = −2·Re(r)/|r|².
//
// What the section adds to the slopes d ln|T|/du and d arg T/du, u = ln ω, has few turning points; they stand here, so that the
// range of a slope over an interval of u is known exactly from the ends and these.
type section struct {
	a, b               float64
	peak2, peak        float64 // ω² of the phase slope's extreme and its value
	least2, least      float64 // ω² of the lowest magnitude slope between the ends, and its value; +Inf: none
	greatest2, highest float64 // likewise the highest
}

// slope is a section's share of d ln T/du, for a zero.
type slope struct{ magnitude, phase float64 }

// at gives the section's value at ω, the inverse of its square magnitude and its slopes.
func (q *section) at(w float64) (f complex128, inverse float64, s slope) {
	y, x := q.a*w*w, q.b*w
	r := 1 - y
	inverse = 1 / (r*r + x*x)
	return complex(r, x), inverse, slope{(x*x - 2*y*r) * inverse, x * (1 + y) * inverse}
}

// realSection is the factor 1 − s/r: its magnitude slope rises from 0 to 1, its phase slope peaks with 1/2 at ω = |r|.
func realSection(r float64) section {
	b := -1 / r
	return section{b: b, peak2: r * r, peak: math.Copysign(0.5, b), least2: math.Inf(1), greatest2: math.Inf(1)}
}

// pairSection is the factor of a conjugate pair of magnitude m and damping ratio zeta (negative in the right half-plane).
// With y = (ω/m)² and e = 2ζ² the magnitude slope is (2e·y − 2y(1−y))/((1−y)² + 2e·y), which turns at y = (1 ± √(e(2−e)))/(1−e)
// when e < 1; the phase slope peaks with 1/ζ at y = 1.
func pairSection(m, zeta float64) section {
	q := section{a: 1 / m / m, b: 2 * zeta / m, peak2: m * m, peak: 1 / zeta, least2: math.Inf(1), greatest2: math.Inf(1)}
	e := 2 * zeta * zeta
	if e < 1 {
		root := math.Sqrt(e * (2 - e))
		turn := func(y float64) (float64, float64) {
			return y * m * m, (2*e*y - 2*y*(1-y)) / ((1-y)*(1-y) + 2*e*y)
		}
		q.least2, q.least = turn((1 - root) / (1 - e))
		q.greatest2, q.highest = turn((1 + root) / (1 - e))
	}
	return q
}

// set takes a loop gain apart. The storage of sections is reused.
func (f *form) set(t *transfer.Product) error {
	f.gain, f.integrators, f.delay = t.Gain, t.Integrators, t.Delay
	f.order, f.low = t.Integrators, t.Gain
	f.sections, f.samples, f.period, f.unstable = f.sections[:0], f.samples[:0], 0, 0
	if math.IsNaN(t.Gain) || math.IsInf(t.Gain, 0) || !(t.Delay >= 0) || math.IsInf(t.Delay, 0) {
		return fmt.Errorf("measuring a loop: gain %v, delay %v s", t.Gain, t.Delay)
	}
	var err error
	if f.sections, _, err = appendSections(f.sections, t.Zeros); err != nil {
		return fmt.Errorf("measuring a loop: zeros: %w", err)
	}
	f.zeros = len(f.sections)
	if f.sections, f.unstable, err = appendSections(f.sections, t.Poles); err != nil {
		return fmt.Errorf("measuring a loop: poles: %w", err)
	}
	if t.Sampled != nil {
		return f.setSampled(t.Sampled)
	}
	return nil
}

// appendSections also counts the roots in the right half-plane.
func appendSections(list []section, roots []complex128) ([]section, int, error) {
	right := 0
	for i := 0; i < len(roots); i++ {
		x, y := real(roots[i]), imag(roots[i])
		m := math.Hypot(x, y)
		if !(m > 0) || math.IsInf(m, 0) {
			return list, 0, fmt.Errorf("root %v", roots[i])
		}
		if y == 0 {
			list = append(list, realSection(x))
			if x > 0 {
				right++
			}
			continue
		}
		i++
		if i == len(roots) || math.Abs(real(roots[i])-x)+math.Abs(imag(roots[i])+y) > 1e-6*m {
			return list, 0, errors.New("a complex root without its conjugate beside it")
		}
		zeta := -x / m
		if math.Abs(zeta) < lightest {
			zeta = lightest
		}
		if zeta < 0 {
			right += 2
		}
		list = append(list, pairSection(m, zeta))
	}
	return list, right, nil
}

// at gives T(jω) and d ln T/du. Each section's slopes are left in slopes where it is not nil.
func (f *form) at(w float64, slopes []slope) (t, l complex128) {
	num, den, inverse := complex(f.gain, 0), complex128(1), 1.0
	var magnitude, phase float64
	for i := range f.sections {
		v, v2, s := f.sections[i].at(w)
		if slopes != nil {
			slopes[i] = s
		}
		if i < f.zeros {
			num *= v
			magnitude, phase = magnitude+s.magnitude, phase+s.phase
		} else {
			den *= v
			inverse *= v2
			magnitude, phase = magnitude-s.magnitude, phase-s.phase
		}
		if i%8 == 7 { // long products neither overflow nor vanish
			num, den, inverse = num*complex(real(den)*inverse, -imag(den)*inverse), 1, 1
		}
	}
	t = num * complex(real(den)*inverse, -imag(den)*inverse)
	for range f.integrators {
		t = complex(imag(t)/w, -real(t)/w)
	}
	for k := f.integrators; k < 0; k++ {
		t = complex(-imag(t)*w, real(t)*w)
	}
	magnitude -= float64(f.integrators)
	if f.delay > 0 {
		sin, cos := math.Sincos(-w * f.delay)
		t *= complex(cos, sin)
		phase -= w * f.delay
	}
	l = complex(magnitude, phase)
	if f.period > 0 {
		v, s := f.sampledAt(w)
		t, l = t*v, l+s
	}
	return t, l
}

// dcGain is |T(0)|.
func (f *form) dcGain() float64 {
	switch {
	case f.low == 0 || f.order < 0:
		return 0
	case f.order > 0:
		return math.Inf(1)
	}
	return math.Abs(f.low)
}
