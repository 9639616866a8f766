package transfer

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// ErrNoConvergence says that the eigenvalue iteration did not settle.
var ErrNoConvergence = errors.New("eigenvalues did not converge")

// Quadratic returns the two roots of a·x² + b·x + c with a ≠ 0: a conjugate pair (positive imaginary part first) or two real roots, the
// smaller magnitude first. The larger real root comes from the sum without cancellation, the smaller from the product (the
// usual stable form; common practice). Coefficients are scaled first, so their squares neither overflow nor vanish.
func Quadratic(a, b, c float64) (x, y complex128) {
	if c == 0 {
		return 0, complex(-b/a, 0)
	}
	// x = t·u with t² = |c/a| makes the outer coefficients of u equal in magnitude.
	t := math.Sqrt(math.Abs(c)) / math.Sqrt(math.Abs(a))
	h := -b / (2 * math.Sqrt(math.Abs(a)) * math.Sqrt(math.Abs(c))) // half the sum, for a > 0
	if a < 0 {
		h = -h
	}
	q := 1.0
	if (a < 0) != (c < 0) {
		q = -1
	}
	if q > 0 && math.Abs(h) < 1 {
		w := math.Sqrt((1 - h) * (1 + h))
		return complex(t*h, t*w), complex(t*h, -t*w)
	}
	w := math.Sqrt(math.Abs(h)-1) * math.Sqrt(math.Abs(h)+1)
	if q < 0 {
		w = math.Hypot(h, 1)
	}
	big := h + math.Copysign(w, h)
	return complex(t*(q/big), 0), complex(t*big, 0)
}

// Roots returns all roots of Σ a[k]·x^k; vanishing leading coefficients are dropped, vanishing trailing ones give roots at 0. Up to the
// second order the closed form is used, above it the eigenvalues of the balanced companion matrix after scaling x so that the
// lowest and highest coefficient have the same size. A constant has no roots. Errors: nothing but zeros, a coefficient that is
// not finite, no convergence.
func Roots(ascending []float64) ([]complex128, error) {
	for k, v := range ascending {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("finding roots: coefficient %d is %v", k, v)
		}
	}
	high := len(ascending) - 1
	for high >= 0 && ascending[high] == 0 {
		high--
	}
	if high < 0 {
		return nil, errors.New("finding roots: the polynomial is zero everywhere")
	}
	low := 0
	for ascending[low] == 0 {
		low++
	}
	roots := make([]complex128, low, high)
	a := ascending[low : high+1]
	switch n := len(a) - 1; n {
	case 0:
		return roots, nil
	case 1:
		return append(roots, complex(-a[0]/a[1], 0)), nil
	case 2:
		x, y := Quadratic(a[2], a[1], a[0])
		return append(roots, x, y), nil
	default:
		more, err := companionRoots(a)
		if err != nil {
			return nil, fmt.Errorf("finding roots: %w", err)
		}
		return append(roots, more...), nil
	}
}

// companionRoots returns the roots of a polynomial of third or higher order whose outer coefficients are not zero.
func companionRoots(a []float64) ([]complex128, error) {
	n := len(a) - 1
	logT := (math.Log(math.Abs(a[0])) - math.Log(math.Abs(a[n]))) / float64(n)
	m := make([]float64, n*n)
	for k := range n {
		if a[k] != 0 {
			ratio := math.Exp(math.Log(math.Abs(a[k])) - math.Log(math.Abs(a[n])) - float64(n-k)*logT)
			if math.IsInf(ratio, 0) {
				return nil, errors.New("coefficients span too many decades")
			}
			if (a[k] < 0) == (a[n] < 0) {
				ratio = -ratio
			}
			m[k*n+n-1] = ratio
		}
		if k > 0 {
			m[k*n+k-1] = 1
		}
	}
	roots, err := Eigenvalues(n, m)
	t := complex(math.Exp(logT), 0)
	for i := range roots {
		roots[i] *= t
	}
	return roots, err
}

// Eigenvalues returns the eigenvalues of the real n×n matrix given row by row. The matrix is balanced (LAPACK's permutation and
// scaling, inside gonum) before the QR iteration; complex ones come as exact conjugate neighbours, positive imaginary part
// first. Entries that are not finite are an error, as gonum does not accept them. The input is not changed.
func Eigenvalues(n int, rows []float64) ([]complex128, error) {
	if len(rows) != n*n {
		return nil, fmt.Errorf("computing eigenvalues: %d entries for order %d", len(rows), n)
	}
	for _, v := range rows {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("computing eigenvalues: an entry is %v", v)
		}
	}
	if n == 0 {
		return nil, nil
	}
	// The matrix is destroyed; 4n of work is what LAPACK needs at least, and more speeds up large matrices only.
	scratch := make([]float64, n*n+6*n)
	a, rest := scratch[:n*n], scratch[n*n:]
	copy(a, rows)
	re, im, work := rest[:n], rest[n:2*n], rest[2*n:]
	none := blas64.General{Stride: 1}
	if lapack64.Geev(lapack.LeftEVNone, lapack.RightEVNone, blas64.General{Rows: n, Cols: n, Stride: n, Data: a}, re, im, none, none, work, len(work)) != 0 {
		return nil, ErrNoConvergence
	}
	values := make([]complex128, n)
	for i := range values {
		values[i] = complex(re[i], im[i])
	}
	for i, v := range values {
		if math.IsNaN(real(v)) || math.IsNaN(imag(v)) {
			return nil, fmt.Errorf("computing eigenvalues: number %d is %v", i, v)
		}
	}
	return values, nil
}
