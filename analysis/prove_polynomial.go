package analysis

import (
	"math"

	"halfplane/analysis/interval"
)

// enclosedPolynomial is a polynomial in s with ascending coefficients that are forms.
type enclosedPolynomial struct {
	c [6]interval.Form
	n int // coefficients in use
}

func polynomial(coefficients ...interval.Form) (p enclosedPolynomial) {
	p.n = copy(p.c[:], coefficients)
	return p
}

// times multiplies; the degree stays within the storage by the callers' choice.
func (p *enclosedPolynomial) times(s interval.Space, q *enclosedPolynomial) (r enclosedPolynomial) {
	r.n = p.n + q.n - 1
	var t interval.Form
	for i := range p.n {
		for k := range q.n {
			s.Mul(&t, &p.c[i], &q.c[k])
			s.Add(&r.c[i+k], &r.c[i+k], &t)
		}
	}
	return r
}

func (p *enclosedPolynomial) plus(s interval.Space, q *enclosedPolynomial) (r enclosedPolynomial) {
	r.n = max(p.n, q.n)
	for i := range r.n {
		s.Add(&r.c[i], &p.c[i], &q.c[i])
	}
	return r
}

func (p *enclosedPolynomial) scaled(s interval.Space, k *interval.Form) (r enclosedPolynomial) {
	r.n = p.n
	for i := range p.n {
		s.Mul(&r.c[i], &p.c[i], k)
	}
	return r
}

// trimmed drops leading coefficients that are exactly zero.
func (p enclosedPolynomial) trimmed() enclosedPolynomial {
	for p.n > 1 && isZero(&p.c[p.n-1]) {
		p.n--
	}
	return p
}

// isZero says whether a form is the constant 0, but for what underflow could hide.
func isZero(f *interval.Form) bool {
	if f.Centre != 0 || f.Rest > 1e-280 {
		return false
	}
	for _, v := range f.Coef {
		if v != 0 {
			return false
		}
	}
	return true
}

// reversed is s^degree·p(1/s), a polynomial in 1/s.
func (p *enclosedPolynomial) reversed() (r enclosedPolynomial) {
	r.n = p.n
	for i := range p.n {
		r.c[i] = p.c[p.n-1-i]
	}
	return r
}

// at evaluates p(j·w) from the powers of w; powers[k] is w^k.
func (p *enclosedPolynomial) at(s interval.Space, z *interval.Complex, powers *[6]interval.Form) {
	z.Re, z.Im = p.c[0], interval.Form{}
	var t interval.Form
	for k := 1; k < p.n; k++ {
		s.Mul(&t, &p.c[k], &powers[k])
		switch k % 4 {
		case 0:
			s.Add(&z.Re, &z.Re, &t)
		case 1:
			s.Add(&z.Im, &z.Im, &t)
		case 2:
			s.Sub(&z.Re, &z.Re, &t)
		case 3:
			s.Sub(&z.Im, &z.Im, &t)
		}
	}
}

// exponentials fills the powers e^(k·u) of a frequency between e^low and e^high, and u itself.
func (e *enclosed) exponentials(low, high float64, u *interval.Form, powers *[6]interval.Form) bool {
	*u = interval.Range(low, high, e.frequency)
	powers[0] = interval.Const(1)
	var t interval.Form
	for k := 1; k < len(powers); k++ {
		e.space.Scale(&t, u, float64(k))
		if !e.space.Exp(&powers[k], &t) {
			return false
		}
	}
	return true
}

// powersTo fills the powers of a value between 0 and high. They share no symbol: no power is a straight line in another.
func powersTo(high float64, powers *[6]interval.Form) {
	powers[0] = interval.Const(1)
	for k := 1; k < len(powers); k++ {
		powers[k] = interval.Anywhere(0, math.Pow(high, float64(k))*(1+1e-12))
	}
}
