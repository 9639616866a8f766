package plant

import (
	"math"
	"math/cmplx"
	"slices"

	"halfplane/analysis/transfer"
)

// channel is a single-input single-output system dx/dt = A x + b u, y = c x + e u of order n, with A's inverse.
type channel struct {
	n      int
	a, inv square
	b, c   [maxOrder]float64
	e      float64
	invB   [maxOrder]float64 // A⁻¹ b
	dcGain float64           // e − c A⁻¹ b
}

// prepare inverts A and finds the direct-current gain.
func (k *channel) prepare() error {
	inv, ok := k.a.inverse(k.n)
	if !ok {
		return errSingular
	}
	k.inv = inv
	k.dcGain = k.e
	for i := range k.n {
		k.invB[i] = 0
		for j := range k.n {
			k.invB[i] += inv[i][j] * k.b[j]
		}
		k.dcGain -= k.c[i] * k.invB[i]
	}
	return nil
}

// zeros returns the transmission zeros. With σ = 1/s the system becomes Â = A⁻¹, b̂ = A⁻¹b, ĉ = −cA⁻¹, ê = G(0), whose
// zeros are the eigenvalues of Â + A⁻¹b cA⁻¹/G(0): one formula whether e is large, tiny or nothing, and the slow
// zeros, which matter to a loop, come out most exactly. A zero at infinity is a σ of 0; their number is the relative degree, which the
// vanishing Markov parameters e, cb, cAb, … tell exactly. (The pencil that this inverts: Emami-Naeini & Van Dooren, "Computation
// of zeros of linear multivariable systems", Automatica 1982.)
func (k *channel) zeros() ([]complex128, error) {
	finite := k.n - k.relativeDegree()
	if finite <= 0 {
		return nil, nil
	}
	var cInv [maxOrder]float64
	for j := range k.n {
		for i := range k.n {
			cInv[j] += k.c[i] * k.inv[i][j]
		}
	}
	m := k.inv
	for i := range k.n {
		f := k.invB[i] / k.dcGain
		for j := range k.n {
			m[i][j] += f * cInv[j]
			if v := m[i][j]; math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, errSingular
			}
		}
	}
	sigma, err := m.eigenvalues(k.n)
	if err != nil {
		return nil, err
	}
	slices.SortStableFunc(sigma, func(x, y complex128) int {
		switch d := cmplx.Abs(y) - cmplx.Abs(x); {
		case d < 0:
			return -1
		case d > 0:
			return 1
		}
		return 0
	})
	zeros := wholePairs(sigma, finite)
	for i, z := range zeros {
		m2 := cmplx.Abs(z)
		zeros[i] = complex(real(z)/m2/m2, -imag(z)/m2/m2)
	}
	return zeros, nil
}

// wholePairs returns the first count of the roots, in falling magnitude, without tearing a conjugate pair: where the cut would, the pair is
// rounding noise around zeros at infinity, and the next real root takes its place where there is one.
func wholePairs(sigma []complex128, count int) []complex128 {
	for i := 0; i < count; i++ {
		if imag(sigma[i]) == 0 {
			continue
		}
		if i+1 < count {
			i++
			continue
		}
		for _, z := range sigma[count:] {
			if imag(z) == 0 && z != 0 {
				sigma[i] = z
				return sigma[:count]
			}
		}
		return sigma[:i]
	}
	return sigma[:count]
}

// relativeDegree is the number of zeros at infinity: the index of the first of e, cb, cAb, cA²b, … that is not zero.
func (k *channel) relativeDegree() int {
	if k.e != 0 {
		return 0
	}
	v := k.b
	for degree := 1; degree <= k.n; degree++ {
		sum := 0.0
		for i := range k.n {
			sum += k.c[i] * v[i]
		}
		if sum != 0 {
			return degree
		}
		var next [maxOrder]float64
		for i := range k.n {
			for j := range k.n {
				next[i] += k.a[i][j] * v[j]
			}
		}
		v = next
	}
	return k.n
}

// states copies the model's matrix over its states.
func (m *linear) states() (a square) {
	for i := range m.order {
		copy(a[i][:m.order], m.a[i][:m.order])
	}
	return a
}

// control returns the channel from duty to output voltage.
func (m *linear) control() channel {
	k := channel{n: m.order, a: m.states(), e: m.vo.duty}
	copy(k.b[:], m.duty[:])
	copy(k.c[:m.order], m.vo.row[:m.order])
	return k
}

// steadyGain is the direct-current response of an output to an input column (colInput, colLoad), duty held.
func (m *linear) steadyGain(inv *square, o *row, col int) float64 {
	g := o[col]
	for i := range m.order {
		x := 0.0
		for j := range m.order {
			x += inv[i][j] * m.a[j][col]
		}
		g -= o[i] * x
	}
	return g
}

// steadyDuty is the direct-current response of an output to the duty; invB is A⁻¹ times the duty column.
func (m *linear) steadyDuty(invB *[maxOrder]float64, o *output) float64 {
	g := o.duty
	for i := range m.order {
		g -= o.row[i] * invB[i]
	}
	return g
}

// closeDuty returns the matrix of the model when the duty follows the states at once, d = (command + f·x)/h: A + b f/h.
func (k *channel) closeDuty(f *[maxOrder]float64, h float64) square {
	a := k.a
	for i := range k.n {
		for j := range k.n {
			a[i][j] += k.b[i] * f[j] / h
		}
	}
	return a
}

// resonanceOf returns frequency (Hz) and quality of a set of poles: of the lowest conjugate pair, without one of the two lowest poles. A
// single pole has neither.
func resonanceOf(poles []complex128) (frequency, quality float64) {
	p := slices.Clone(poles)
	slices.SortStableFunc(p, func(x, y complex128) int {
		switch d := cmplx.Abs(x) - cmplx.Abs(y); {
		case d < 0:
			return -1
		case d > 0:
			return 1
		}
		return 0
	})
	for _, x := range p {
		if imag(x) != 0 {
			return resonance(x, cmplx.Conj(x))
		}
	}
	if len(p) < 2 {
		return math.NaN(), math.NaN()
	}
	return resonance(p[0], p[1])
}

// store writes gain and roots into a function, in its own storage.
func store(f *transfer.Function, gain float64, poles, zeros []complex128) {
	f.Reset()
	f.Gain = gain
	f.Poles = append(f.Poles, poles...)
	f.Zeros = append(f.Zeros, zeros...)
}
