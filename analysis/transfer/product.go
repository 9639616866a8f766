package transfer

import (
	"fmt"
	"math"
)

// Multiply returns the product of the functions: gains multiply, roots and integrators gather, delays add. The roots are copied; nothing
// passed in is changed or shared.
func Multiply(fs ...Function) Function {
	out := Function{Gain: 1}
	for i := range fs {
		out.Times(&fs[i])
	}
	return out
}

// Times multiplies f by g in place; the capacity of f's slices is reused.
func (f *Function) Times(g *Function) {
	f.Gain *= g.Gain
	f.Integrators += g.Integrators
	f.Zeros = append(f.Zeros, g.Zeros...)
	f.Poles = append(f.Poles, g.Poles...)
	f.Delay += g.Delay
}

// Reset makes f the constant 1 and keeps the capacity of its slices.
func (f *Function) Reset() {
	*f = Function{Gain: 1, Zeros: f.Zeros[:0], Poles: f.Poles[:0]}
}

// Set makes f a copy of g in f's own storage.
func (f *Function) Set(g *Function) {
	f.Reset()
	f.Times(g)
}

// FromPolynomials returns num(s/scale)/den(s/scale) as zeros, poles and gain. Coefficients ascend in powers of s/scale; scale (rad/s)
// is positive and should lie near the roots' geometric mean. The error says which polynomial has no usable coefficient or roots.
func FromPolynomials(num, den []float64, scale float64) (Function, error) {
	if !(scale > 0) || math.IsInf(scale, 0) {
		return Function{}, fmt.Errorf("making a transfer function: scale %v is not a positive number", scale)
	}
	zeros, lowestN, orderN, err := scaledRoots(num, scale)
	if err != nil {
		return Function{}, fmt.Errorf("finding zeros: %w", err)
	}
	poles, lowestD, orderD, err := scaledRoots(den, scale)
	if err != nil {
		return Function{}, fmt.Errorf("finding poles: %w", err)
	}
	f := Function{Integrators: orderD - orderN, Zeros: zeros, Poles: poles}
	f.Gain = lowestN / lowestD * math.Pow(scale, float64(f.Integrators))
	return f, nil
}

// scaledRoots returns the roots away from the origin (rad/s), the lowest coefficient that is not zero and its power.
func scaledRoots(a []float64, scale float64) (roots []complex128, lowest float64, order int, err error) {
	for order < len(a) && a[order] == 0 {
		order++
	}
	if order == len(a) {
		return nil, 0, 0, fmt.Errorf("all %d coefficients are zero", len(a))
	}
	roots, err = Roots(a[order:])
	for i := range roots {
		roots[i] *= complex(scale, 0)
	}
	return roots, a[order], order, err
}

// Polynomials returns numerator and denominator expanded in powers of s/scale (ascending, scale in rad/s), without the delay. The
// denominator's lowest coefficient that is not zero is scale^Integrators or 1; the gain stands in the numerator.
func (f *Function) Polynomials(scale float64) (num, den []float64) {
	num, den = Expand(f.Zeros, scale), Expand(f.Poles, scale)
	for i := range num {
		num[i] *= f.Gain
	}
	for range f.Integrators {
		den = shift(den, scale)
	}
	for k := f.Integrators; k < 0; k++ {
		num = shift(num, scale)
	}
	return num, den
}

// Expand returns the ascending coefficients of Π(1 − s/r) in powers of s/scale. Conjugate neighbours give real coefficients.
func Expand(roots []complex128, scale float64) []float64 {
	a := make([]complex128, 1, len(roots)+1)
	a[0] = 1
	for _, r := range roots {
		c := complex(-scale, 0) / r
		a = append(a, 0)
		for k := len(a) - 1; k > 0; k-- {
			a[k] += c * a[k-1]
		}
	}
	out := make([]float64, len(a))
	for k, v := range a {
		out[k] = real(v)
	}
	return out
}

// shift multiplies a polynomial in s/scale by s.
func shift(a []float64, scale float64) []float64 {
	out := make([]float64, len(a)+1)
	for k, v := range a {
		out[k+1] = v * scale
	}
	return out
}
