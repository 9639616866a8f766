package interval

import "math"

// Symbols is how many independent quantities a form can depend on.
const Symbols = 20

// unit is the largest relative rounding error of one operation, 2⁻⁵³; slack covers the roundings of a sum of up to a hundred
// terms that are not negative.
const (
	unit  = 0x1p-53
	slack = 1 + 0x1p-44
	least = 1e-300 // stands for what underflow can lose
)

// Form is the affine form Centre + Σ Coef[i]·ε[i] + Rest·η: every ε is one and the same unknown in [−1, 1] wherever it stands, η is any
// value in [−1, 1]. (J. L. D. Comba, J. Stolfi, "Affine arithmetic and its applications to computer graphics", SIBGRAPI 1993;
// L. H. de Figueiredo, J. Stolfi, "Affine arithmetic: concepts and applications", Numerical Algorithms 37 (2004); both
// from memory.) Keeping the dependence is what plain intervals (R. E. Moore, "Interval Analysis", 1966) lose.
type Form struct {
	Centre float64
	Coef   [Symbols]float64
	Rest   float64 // not negative
}

// Space says how many of the symbols are in use; operations go through these only.
type Space struct{ N int }

// Const is an exactly known value.
func Const(v float64) Form { return Form{Centre: v} }

// Range is the form of symbol i running from low to high.
func Range(low, high float64, i int) (f Form) {
	if low == high {
		return Const(low)
	}
	f.Centre = low + (high-low)/2
	radius := math.Max(high-f.Centre, f.Centre-low)
	f.Coef[i] = radius
	f.Rest = 2 * unit * (math.Abs(f.Centre) + radius)
	return f
}

// Anywhere is a value between low and high of which nothing else is known: it depends on no symbol.
func Anywhere(low, high float64) (f Form) {
	f.Centre = low + (high-low)/2
	f.Rest = math.Max(high-f.Centre, f.Centre-low)
	f.Rest += 4 * unit * (math.Abs(f.Centre) + f.Rest)
	return f
}

// radius is Σ|Coef|, rounded.
func (s Space) radius(a *Form) float64 {
	r := 0.0
	for _, v := range a.Coef[:s.N] {
		r += math.Abs(v)
	}
	return r
}

// Bounds encloses the form's values.
func (s Space) Bounds(a *Form) (low, high float64) {
	r := (s.radius(a) + a.Rest) * slack
	r += 2 * unit * (math.Abs(a.Centre) + r)
	return a.Centre - r, a.Centre + r
}

// Magnitude is an upper bound of the form's absolute value.
func (s Space) Magnitude(a *Form) float64 {
	low, high := s.Bounds(a)
	return math.Max(math.Abs(low), math.Abs(high))
}

// Add sets d = a + b.
func (s Space) Add(d, a, b *Form) { s.combine(d, a, b, 1) }

// Sub sets d = a − b.
func (s Space) Sub(d, a, b *Form) { s.combine(d, a, b, -1) }

func (s Space) combine(d, a, b *Form, sign float64) {
	size := math.Abs(a.Centre) + math.Abs(b.Centre)
	for i := range s.N {
		x, y := a.Coef[i], sign*b.Coef[i]
		size += math.Abs(x) + math.Abs(y)
		d.Coef[i] = x + y
	}
	d.Centre = a.Centre + sign*b.Centre
	d.Rest = (a.Rest+b.Rest)*slack + 2*unit*size + least
}

// Scale sets d = k·a.
func (s Space) Scale(d, a *Form, k float64) { s.Affine(d, a, k, 0, 0) }

// Affine sets d = k·a + c ± rest.
func (s Space) Affine(d, a *Form, k, c, rest float64) {
	size := math.Abs(k * a.Centre)
	for i := range s.N {
		v := k * a.Coef[i]
		size += math.Abs(v)
		d.Coef[i] = v
	}
	d.Centre = k*a.Centre + c
	d.Rest = (math.Abs(k)*a.Rest+rest)*slack + 4*unit*(size+math.Abs(c)) + least
}

// Shift sets d = a + c.
func (s Space) Shift(d, a *Form, c float64) { s.Affine(d, a, 1, c, 0) }

// Mul sets d = a·b. Of the products ε[i]·ε[k] the squares lie in [0, 1] and are centred there; the others go to the rest.
func (s Space) Mul(d, a, b *Form) {
	ac, bc := a.Centre, b.Centre
	var ra, rb, squares, absolute float64
	for i := range s.N {
		x, y := a.Coef[i], b.Coef[i]
		ra += math.Abs(x)
		rb += math.Abs(y)
		p := x * y
		squares += p
		absolute += math.Abs(p)
		d.Coef[i] = ac*y + bc*x
	}
	aRest, bRest := a.Rest, b.Rest
	d.Centre = ac*bc + squares/2
	rest := (ra*rb - absolute/2) + (math.Abs(ac)+ra)*bRest + (math.Abs(bc)+rb)*aRest + aRest*bRest
	rounding := float64(8*(s.N+4)) * unit * (math.Abs(ac) + ra) * (math.Abs(bc) + rb)
	d.Rest = math.Max(rest, 0)*slack + rounding + least
}

// Sqr sets d = a².
func (s Space) Sqr(d, a *Form) { s.Mul(d, a, a) }
