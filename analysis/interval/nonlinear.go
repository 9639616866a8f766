package interval

import "math"

// Each function here is replaced by a straight line α·x + c over the range of its argument; any α is sound, these keep the error
// smallest (the minimax line). The distance between function and line is bounded at the ends and at the turning point, which is known in
// closed form; a few units in the last place of everything that enters are added for rounding and for the library's functions, which
// are taken to be right within four units in the last place.

// line finishes such a replacement: the function less α·x lies between low and high, values of size were added to get these.
func (s Space) line(d, a *Form, alpha, low, high, size float64) {
	rest := (high-low)/2 + 16*unit*(size+math.Abs(low)+math.Abs(high))
	s.Affine(d, a, alpha, low+(high-low)/2, rest)
}

// Inverse sets d = 1/a; false, and d is not set, where a may be zero.
func (s Space) Inverse(d, a *Form) bool {
	low, high := s.Bounds(a)
	switch {
	case low > 0:
	case high < 0:
		var n Form
		s.Scale(&n, a, -1)
		if !s.Inverse(d, &n) {
			return false
		}
		s.Scale(d, d, -1)
		return true
	default:
		return false
	}
	alpha := 1 / low / high
	if !(alpha > 0) || math.IsInf(alpha, 0) {
		return false
	}
	// 1/x + α·x is least at x = 1/√α, with 2√α, and greatest at an end.
	s.line(d, a, -alpha, 2*math.Sqrt(alpha), math.Max(1/low+alpha*low, 1/high+alpha*high), 1/low)
	return true
}

// Div sets d = a/b; false where b may be zero.
func (s Space) Div(d, a, b *Form) bool {
	var inverse Form
	if !s.Inverse(&inverse, b) {
		return false
	}
	s.Mul(d, a, &inverse)
	return true
}

// Sqrt sets d = √a; false where a may be negative.
func (s Space) Sqrt(d, a *Form) bool {
	low, high := s.Bounds(a)
	if !(low >= 0) || !(high > 0) {
		return false
	}
	rl, rh := math.Sqrt(low), math.Sqrt(high)
	alpha := 1 / (rl + rh)
	// √x − α·x is greatest at x = 1/(4α²), with 1/(4α), and least at an end.
	s.line(d, a, alpha, math.Min(rl-alpha*low, rh-alpha*high), 1/(4*alpha), rh+alpha*high)
	return true
}

// Exp sets d = e^a; false where that is beyond the numbers.
func (s Space) Exp(d, a *Form) bool {
	low, high := s.Bounds(a)
	if !(low > -600 && high < 600) {
		return false
	}
	el, eh := math.Exp(low), math.Exp(high)
	alpha := math.Exp(low + (high-low)/2)
	if high-low > 1e-3 {
		alpha = (eh - el) / (high - low)
	}
	// e^x − α·x is least at x = ln α, with α − α·ln α, and greatest at an end.
	s.line(d, a, alpha, alpha-alpha*math.Log(alpha), math.Max(el-alpha*low, eh-alpha*high), (eh+alpha)*(1+math.Abs(low)+math.Abs(high)))
	return true
}
