package plant

import (
	"math"

	"halfplane/analysis/transfer"
)

// maxOrder leaves room for the duty as one more state (current mode).
const maxOrder = maxStates + 1

// square is a matrix of which the leading n×n part is used.
type square [maxOrder][maxOrder]float64

// inverse returns the inverse of the leading n×n part: Gauss–Jordan elimination with pivots chosen relative to their row's size, as
// the rows of a state matrix differ by many decades. ok is false when a pivot vanishes or the result is not finite.
func (m *square) inverse(n int) (inv square, ok bool) {
	a := *m
	var size [maxOrder]float64
	for i := range n {
		inv[i][i] = 1
		for j := range n {
			size[i] = max(size[i], math.Abs(a[i][j]))
		}
		if !(size[i] > 0 && size[i] <= math.MaxFloat64) {
			return inv, false
		}
	}
	for k := range n {
		best, at := 0.0, -1
		for i := k; i < n; i++ {
			if v := math.Abs(a[i][k]) / size[i]; v > best {
				best, at = v, i
			}
		}
		if at < 0 {
			return inv, false
		}
		a[k], a[at] = a[at], a[k]
		inv[k], inv[at] = inv[at], inv[k]
		size[k], size[at] = size[at], size[k]
		pivot := 1 / a[k][k]
		for j := range n {
			a[k][j] *= pivot
			inv[k][j] *= pivot
		}
		for i := range n {
			f := a[i][k]
			if i == k || f == 0 {
				continue
			}
			for j := range n {
				a[i][j] -= f * a[k][j]
				inv[i][j] -= f * inv[k][j]
			}
		}
	}
	for i := range n {
		for j := range n {
			if v := inv[i][j]; math.IsNaN(v) || math.IsInf(v, 0) {
				return inv, false
			}
		}
	}
	return inv, true
}

// eigenvalues returns the eigenvalues of the leading n×n part; the first two orders in closed form.
func (m *square) eigenvalues(n int) ([]complex128, error) {
	switch n {
	case 1:
		return []complex128{complex(m[0][0], 0)}, nil
	case 2:
		p, q := transfer.Quadratic(1, -m[0][0]-m[1][1], m[0][0]*m[1][1]-m[0][1]*m[1][0])
		return []complex128{p, q}, nil
	}
	flat := make([]float64, 0, maxOrder*maxOrder)
	for i := range n {
		flat = append(flat, m[i][:n]...)
	}
	return transfer.Eigenvalues(n, flat)
}

// solveComplex overwrites the right-hand sides b with (s·I − A)⁻¹ b for the leading n×n part of A, by elimination with relative
// pivots. ok is false at an eigenvalue.
func (m *square) solveComplex(n int, s complex128, b ...*[maxOrder]complex128) (ok bool) {
	if n == 2 {
		return m.solvePair(s, b)
	}
	var a [maxOrder][maxOrder]complex128
	var size [maxOrder]float64
	for i := range n {
		for j := range n {
			a[i][j] = complex(-m[i][j], 0)
			if i == j {
				a[i][j] += s
			}
			size[i] = max(size[i], magnitude(a[i][j]))
		}
	}
	for k := range n {
		best, at := 0.0, -1
		for i := k; i < n; i++ {
			if v := magnitude(a[i][k]) / size[i]; v > best {
				best, at = v, i
			}
		}
		if at < 0 {
			return false
		}
		if at != k {
			a[k], a[at] = a[at], a[k]
			size[k], size[at] = size[at], size[k]
			for _, x := range b {
				x[k], x[at] = x[at], x[k]
			}
		}
		for i := k + 1; i < n; i++ {
			f := a[i][k] / a[k][k]
			if f == 0 {
				continue
			}
			for j := k + 1; j < n; j++ {
				a[i][j] -= f * a[k][j]
			}
			for _, x := range b {
				x[i] -= f * x[k]
			}
		}
	}
	for _, x := range b {
		for i := n - 1; i >= 0; i-- {
			for j := i + 1; j < n; j++ {
				x[i] -= a[i][j] * x[j]
			}
			x[i] /= a[i][i]
		}
	}
	return true
}

// solvePair is solveComplex for two states, by determinants: the commonest stage, asked at hundreds of frequencies.
func (m *square) solvePair(s complex128, b []*[maxOrder]complex128) (ok bool) {
	p, q := s-complex(m[0][0], 0), s-complex(m[1][1], 0)
	r, t := complex(m[0][1], 0), complex(m[1][0], 0)
	det := p*q - r*t
	if det == 0 {
		return false
	}
	for _, x := range b {
		x[0], x[1] = (q*x[0]+r*x[1])/det, (t*x[0]+p*x[1])/det
	}
	return true
}

// magnitude is |re| + |im|, enough for choosing pivots.
func magnitude(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }
