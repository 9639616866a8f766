package network

import (
	"fmt"
	"math"

	"halfplane/analysis/transfer"
)

// direct gives a network that the spec states by its transfer function:
//
//	H = sense·gain·(ωi/s)·Π(1 + s/ωz)/Π(1 + s/ωp), a pair being 1 + s/(Q·ω0) + (s/ω0)²
//
// Gain and sense gain left out (0) are 1; no integrator where its frequency is 0.
func direct(p *Parts, f *transfer.Function) {
	f.Gain = p.sense()
	if p.Gain != 0 {
		f.Gain *= p.Gain
	}
	if p.Integrator > 0 {
		f.Gain *= 2 * math.Pi * p.Integrator
		f.Integrators = 1
	}
	for _, z := range p.Zeros {
		f.Zeros = z.appendTo(f.Zeros)
	}
	for _, r := range p.Poles {
		f.Poles = r.appendTo(f.Poles)
	}
}

// appendTo appends the root or the pair, rad/s; a quality of 1/2 or less is a pair of real roots.
func (r Root) appendTo(roots []complex128) []complex128 {
	w := 2 * math.Pi * r.Frequency
	if r.Quality == 0 {
		return append(roots, complex(-w, 0))
	}
	x, y := transfer.Quadratic(1, 1/r.Quality, 1)
	return append(roots, x*complex(w, 0), y*complex(w, 0))
}

func (p *Parts) sense() float64 {
	if p.SenseGain != 0 {
		return p.SenseGain
	}
	return 1
}

// digital gives sense·N(z)/D(z) at z = e^(sT), times e^(−s·delay): computation and hold, from sampling to the modulated edge.
func digital(p *Parts, out *transfer.Product) error {
	switch {
	case !(p.SamplingFrequency > 0) || math.IsInf(p.SamplingFrequency, 0):
		return fmt.Errorf("building a digital network: sampling-frequency is %v", p.SamplingFrequency)
	case len(p.Numerator) == 0 || len(p.Denominator) == 0:
		return fmt.Errorf("building a digital network: %d numerator and %d denominator coefficients", len(p.Numerator), len(p.Denominator))
	case p.Denominator[0] == 0:
		return fmt.Errorf("building a digital network: the first denominator coefficient is 0, the output would come before the input")
	}
	out.Gain, out.Delay = p.sense(), p.Delay
	if out.Sampled == nil {
		out.Sampled = &transfer.Sampled{}
	}
	s := out.Sampled
	s.Period = 1 / p.SamplingFrequency
	s.Numerator = append(s.Numerator[:0], p.Numerator...)
	s.Denominator = append(s.Denominator[:0], p.Denominator...)
	return nil
}
