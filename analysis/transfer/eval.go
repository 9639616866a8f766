package transfer

import (
	"math"
	"math/cmplx"
)

// Eval returns H(s) for any complex s (rad/s). At a pole the result is infinite.
func (f *Function) Eval(s complex128) complex128 {
	h := complex(f.Gain, 0)
	for _, z := range f.Zeros {
		h *= 1 - s/z
	}
	for _, p := range f.Poles {
		h /= 1 - s/p
	}
	for range f.Integrators {
		h /= s
	}
	for k := f.Integrators; k < 0; k++ {
		h *= s
	}
	if f.Delay != 0 {
		h *= cmplx.Exp(-s * complex(f.Delay, 0))
	}
	return h
}

// At returns H(jω) for a frequency omega (rad/s). Real roots cost one division and one complex multiplication, a conjugate pair is
// taken as one real quadratic in ω, and the two products meet in a single division.
func (f *Function) At(omega float64) complex128 {
	num, den := rootProduct(f.Zeros, omega), rootProduct(f.Poles, omega)
	h := complex(f.Gain, 0) * quotient(num, den)
	switch f.Integrators {
	case 0:
	case 1:
		h = complex(imag(h)/omega, -real(h)/omega)
	default:
		for range f.Integrators {
			h = complex(imag(h)/omega, -real(h)/omega)
		}
		for k := f.Integrators; k < 0; k++ {
			h = complex(-imag(h)*omega, real(h)*omega)
		}
	}
	if f.Delay != 0 {
		sin, cos := math.Sincos(-omega * f.Delay)
		h *= complex(cos, sin)
	}
	return h
}

// At returns the product at jω, rad/s: the function times the sampled factor where there is one.
func (p *Product) At(omega float64) complex128 {
	h := p.Function.At(omega)
	if p.Sampled != nil {
		h *= p.Sampled.At(omega)
	}
	return h
}

// Eval returns the product at any complex s (rad/s).
func (p *Product) Eval(s complex128) complex128 {
	h := p.Function.Eval(s)
	if p.Sampled != nil {
		h *= p.Sampled.evalShift(cmplx.Exp(-s * complex(p.Sampled.Period, 0)))
	}
	return h
}

// At returns N(z)/D(z) at z = e^(jωT), omega in rad/s.
func (d *Sampled) At(omega float64) complex128 {
	sin, cos := math.Sincos(-omega * d.Period)
	return d.evalShift(complex(cos, sin))
}

// evalShift returns N/D where shift stands for z^−1.
func (d *Sampled) evalShift(shift complex128) complex128 {
	return horner(d.Numerator, shift) / horner(d.Denominator, shift)
}

// horner returns Σ a[k]·x^k.
func horner(a []float64, x complex128) complex128 {
	var y complex128
	for k := len(a) - 1; k >= 0; k-- {
		y = y*x + complex(a[k], 0)
	}
	return y
}

// rootProduct returns Π(1 − jω/r) over the roots; neighbours that are conjugates are taken together.
func rootProduct(roots []complex128, omega float64) complex128 {
	re, im := 1.0, 0.0
	for i := 0; i < len(roots); i++ {
		x, y := real(roots[i]), imag(roots[i])
		var fr, fi float64
		switch {
		case y == 0:
			fr, fi = 1, -omega/x
		case i+1 < len(roots) && real(roots[i+1]) == x && imag(roots[i+1]) == -y:
			i++
			u := omega / (x*x + y*y)
			fr, fi = 1-omega*u, -2*u*x
		default:
			f := 1 - complex(0, omega)/roots[i]
			fr, fi = real(f), imag(f)
		}
		re, im = re*fr-im*fi, re*fi+im*fr
	}
	return complex(re, im)
}

// quotient returns a/b. The quick form is used where |b|² neither overflows nor vanishes.
func quotient(a, b complex128) complex128 {
	m := real(b)*real(b) + imag(b)*imag(b)
	if m > 1e-250 && m < 1e250 {
		r := a * complex(real(b), -imag(b))
		return complex(real(r)/m, imag(r)/m)
	}
	return a / b
}
