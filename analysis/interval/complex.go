package interval

import "math"

// Complex is a complex value whose parts are forms of the same symbols.
type Complex struct{ Re, Im Form }

// MulComplex sets d = a·b; d is neither of the two.
func (s Space) MulComplex(d, a, b *Complex) {
	var p Form
	s.Mul(&d.Re, &a.Re, &b.Re)
	s.Mul(&p, &a.Im, &b.Im)
	s.Sub(&d.Re, &d.Re, &p)
	s.Mul(&d.Im, &a.Re, &b.Im)
	s.Mul(&p, &a.Im, &b.Re)
	s.Add(&d.Im, &d.Im, &p)
}

// AddComplex sets d = a + b.
func (s Space) AddComplex(d, a, b *Complex) {
	s.Add(&d.Re, &a.Re, &b.Re)
	s.Add(&d.Im, &a.Im, &b.Im)
}

// Size bounds |z|.
func (s Space) Size(z *Complex) (least, most float64) {
	rl, rh := s.Bounds(&z.Re)
	il, ih := s.Bounds(&z.Im)
	near := func(low, high float64) float64 { return math.Max(0, math.Max(low, -high)) }
	far := func(low, high float64) float64 { return math.Max(math.Abs(low), math.Abs(high)) }
	a, b, c, d := near(rl, rh), near(il, ih), far(rl, rh), far(il, ih)
	return math.Sqrt(a*a+b*b) * (1 - 8*unit), math.Sqrt(c*c+d*d) * (1 + 8*unit)
}

// LogPolar adds sign·ln|z| to magnitude and sign·arg z to phase, arg z around the principal value of the centre; false, and nothing is
// added, where z may be zero or its range is too wide about its centre.
//
// With r ≈ 1/centre, z·r = 1 + w, and ln(1+w) = w − w²/2 + …, where what follows is at most |w|³/(3(1−|w|)).
func (s Space) LogPolar(magnitude, phase *Form, z *Complex, sign float64) bool {
	x, y := z.Re.Centre, z.Im.Centre
	size := x*x + y*y
	if !(size > 1e-250 && size < 1e250) { // beyond, underflow and overflow would spoil what rounding is taken to be
		return false
	}
	rx, ry := x/size, -y/size
	var w Complex // z·r − 1
	var p Form
	s.Scale(&w.Re, &z.Re, rx)
	s.Scale(&p, &z.Im, ry)
	s.Sub(&w.Re, &w.Re, &p)
	s.Shift(&w.Re, &w.Re, -1)
	s.Scale(&w.Im, &z.Re, ry)
	s.Scale(&p, &z.Im, rx)
	s.Add(&w.Im, &w.Im, &p)

	var linear, squares, sqRe, sqIm float64 // Σ|w[i]|, Σ|w[i]|², Σ w[i]²
	for i := range s.N {
		a, b := w.Re.Coef[i], w.Im.Coef[i]
		m2 := a*a + b*b
		linear += math.Sqrt(m2)
		squares += m2
		sqRe += a*a - b*b
		sqIm += 2 * a * b
	}
	linear *= slack
	off := math.Abs(w.Re.Centre) + math.Abs(w.Im.Centre)
	rest := (w.Re.Rest + w.Im.Rest + off) * slack
	all := linear + rest
	if !(all < 0.75) {
		return false
	}
	second := (linear*linear-squares/2)/2 + linear*rest + rest*rest/2
	error := (second+all*all*all/(3*(1-all)))*slack + rest + 64*unit*(1+all)
	lnr, argr := math.Log(size)/2, math.Atan2(y, x) // −ln|r|, −arg r but for rounding of r, which rest and unit count

	m := Form{Centre: lnr - sqRe/4, Coef: w.Re.Coef, Rest: error + 16*unit*(1+math.Abs(lnr))}
	a := Form{Centre: argr - sqIm/4, Coef: w.Im.Coef, Rest: error + 16*unit*(1+math.Abs(argr))}
	s.combine(magnitude, magnitude, &m, sign)
	s.combine(phase, phase, &a, sign)
	return true
}

// ExpPolar sets z = e^(magnitude + j·phase); false where the range is too wide. With w the deviation from the centre, e^w = 1 + w + …, and
// what follows is at most |w|²·e^|w|/2.
func (s Space) ExpPolar(z *Complex, magnitude, phase *Form) bool {
	all := magnitude.Rest + phase.Rest
	for i := range s.N {
		a, b := magnitude.Coef[i], phase.Coef[i]
		all += math.Sqrt(a*a + b*b)
	}
	all *= slack
	if !(all < 1) || !(math.Abs(magnitude.Centre) < 600) {
		return false
	}
	size := math.Exp(magnitude.Centre)
	sin, cos := math.Sincos(phase.Centre)
	x, y := size*cos, size*sin
	rest := size*(magnitude.Rest+phase.Rest+all*all*math.Exp(all)/2)*slack + 64*unit*size*(1+math.Abs(phase.Centre)+math.Abs(magnitude.Centre))*(1+all)
	*z = Complex{Form{Centre: x, Rest: rest}, Form{Centre: y, Rest: rest}}
	for i := range s.N {
		a, b := magnitude.Coef[i], phase.Coef[i]
		z.Re.Coef[i], z.Im.Coef[i] = x*a-y*b, y*a+x*b
	}
	return true
}
