package network

import (
	"math"
	"math/cmplx"

	"halfplane/analysis/transfer"
)

// poly is a polynomial of up to the fourth degree with ascending coefficients: all that a network around one amplifier needs.
type poly [5]float64

func (a poly) plus(b poly) poly {
	for k := range a {
		a[k] += b[k]
	}
	return a
}

func (a poly) scaled(c float64) poly {
	for k := range a {
		a[k] *= c
	}
	return a
}

// times multiplies; the product's degree stays within 4 by the callers' choice.
func (a poly) times(b poly) poly {
	var out poly
	for i, x := range a {
		if x == 0 {
			continue
		}
		for k := 0; i+k < len(out); k++ {
			out[i+k] += x * b[k]
		}
	}
	return out
}

// degree is the highest power with a coefficient.
func (a poly) degree() int {
	n := len(a) - 1
	for n > 0 && a[n] == 0 {
		n--
	}
	return n
}

// appendRoots appends the roots of a(s/scale), rad/s, to roots. The lowest coefficient is not zero. Up to the second degree they
// are closed forms, above it simultaneous iteration; where that does not settle, the eigenvalues of package transfer.
func (a poly) appendRoots(roots []complex128, scale float64) ([]complex128, error) {
	n := a.degree()
	if n <= 2 {
		return appendQuadratic(roots, a[1]/a[0]/scale, a[2]/a[0]/scale/scale), nil
	}
	var x [4]complex128
	if a.simultaneous(x[:n]) {
		pairUp(x[:n])
		for _, r := range x[:n] {
			roots = append(roots, r*complex(scale, 0))
		}
		return roots, nil
	}
	slow, err := transfer.Roots(a[:n+1])
	for _, r := range slow {
		roots = append(roots, r*complex(scale, 0))
	}
	return roots, err
}

// simultaneous finds all roots of a at once and says whether they settled. Iteration: O. Aberth, "Iteration methods for finding all
// zeros of a polynomial simultaneously", Mathematics of Computation 27 (1973) (from memory); starting radii from the
// upper convex hull of log|a[k]|: D. A. Bini, "Numerical computation of polynomial zeros by means of Aberth's method",
// Numerical Algorithms 13 (1996) (from memory). Roots decades apart start in their own decade, so a dozen rounds do.
func (a poly) simultaneous(x []complex128) bool {
	const rounds = 60 // a double root converges linearly, one bit a round
	n := len(x)
	a.starts(x)
	var done [4]bool
	for range rounds {
		settled := true
		for i := range x {
			if done[i] {
				continue
			}
			step, exact := a.newton(x[i], n)
			if !exact {
				var sum complex128
				for k := range x {
					if k != i {
						sum += reciprocal(x[i] - x[k])
					}
				}
				step *= reciprocal(1 - step*sum)
				x[i] -= step
				exact = abs1(step) <= 4e-16*abs1(x[i])
			}
			done[i] = exact
			settled = settled && exact
		}
		if settled {
			return true
		}
	}
	return false
}

// newton gives a/a′ at x and whether x is already a root within rounding. Outside the unit circle the reversed polynomial is
// used, so that no power overflows.
func (a poly) newton(x complex128, n int) (step complex128, exact bool) {
	value, slope, size := complex(a[n], 0), complex(0, 0), math.Abs(a[n])
	r := cmplx.Abs(x)
	for k := n - 1; k >= 0; k-- {
		slope = slope*x + value
		value = value*x + complex(a[k], 0)
		size = size*r + math.Abs(a[k])
	}
	if abs1(value) <= 4e-16*size || slope == 0 {
		return 0, true
	}
	return value * reciprocal(slope), false
}

// starts spreads n starting points over the circles that the hull of log|a[k]| gives, away from the real axis.
func (a poly) starts(x []complex128) {
	n := len(x)
	placed := 0
	for low := 0; low < n; {
		// The next corner of the hull is the point with the steepest rise from low.
		high, best := n, math.Inf(-1)
		for k := low + 1; k <= n; k++ {
			if a[k] == 0 {
				continue
			}
			if rise := (math.Log(math.Abs(a[k])) - math.Log(math.Abs(a[low]))) / float64(k-low); rise >= best {
				best, high = rise, k
			}
		}
		radius := math.Exp(-best)
		for k := low; k < high; k++ {
			angle := 2*math.Pi*float64(k-low)/float64(high-low) + 2.4 + 0.3*float64(low)
			x[placed] = cmplx.Rect(radius, angle)
			placed++
		}
		low = high
	}
}

// pairUp makes roots of a real polynomial exact: those with no imaginary part beyond rounding become real, the others exact
// conjugates that stand next to each other.
func pairUp(x []complex128) {
	const rounding = 1e-12
	for i := 0; i < len(x); i++ {
		if math.Abs(imag(x[i])) <= rounding*math.Abs(real(x[i])) || i+1 == len(x) {
			x[i] = complex(real(x[i]), 0)
			continue
		}
		mate := i + 1
		for k := i + 2; k < len(x); k++ {
			if cmplx.Abs(x[k]-cmplx.Conj(x[i])) < cmplx.Abs(x[mate]-cmplx.Conj(x[i])) {
				mate = k
			}
		}
		x[i+1], x[mate] = x[mate], x[i+1]
		if cmplx.Abs(x[i+1]-cmplx.Conj(x[i])) > 1e-3*cmplx.Abs(x[i]) {
			x[i] = complex(real(x[i]), 0)
			continue
		}
		middle := (x[i] + cmplx.Conj(x[i+1])) / 2
		x[i], x[i+1] = middle, cmplx.Conj(middle)
		i++
	}
}

func reciprocal(z complex128) complex128 {
	m := real(z)*real(z) + imag(z)*imag(z)
	return complex(real(z)/m, -imag(z)/m)
}

func abs1(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }
