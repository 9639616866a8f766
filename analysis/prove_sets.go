package analysis

import (
	"math"

	"halfplane/analysis/interval"
)

// forbidden is a set of values of T that a margin keeps the loop gain away from, in terms of g = ln|T| and θ = arg(−T): −1 is at g = 0,
// θ = 0.
type forbidden interface {
	// avoids is true when no value that the forms enclose is in the set.
	avoids(s interval.Space, g, theta *interval.Form) bool
	// beyond is true when no value with ln|T| between low and high is in the set.
	beyond(low, high float64) bool
	// worsens gives the direction in which each symbol brings the loop gain nearer to the set; frequency is the symbol of u, which is
	// eliminated.
	worsens(s interval.Space, g, theta *interval.Form, frequency int) [interval.Symbols]float64
}

// phaseSet: |T| = 1 with arg(−T) within ± angle (radians), which a stable loop of that phase margin has nowhere.
type phaseSet struct{ angle float64 }

// gainSet: T real and negative with ln|T| from −depth to 0.
type gainSet struct{ depth float64 }

// discSet: |1 + T| below radius.
type discSet struct{ radius float64 }

const wholeTurn = 2 * math.Pi

func (p phaseSet) beyond(low, high float64) bool { return low > 0 || high < 0 }
func (p gainSet) beyond(low, high float64) bool  { return low > 0 || high < -p.depth }
func (p discSet) beyond(low, high float64) bool {
	return math.Expm1(low) > p.radius*(1+1e-12) || -math.Expm1(high) > p.radius*(1+1e-12)
}

func (p phaseSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	return eachTurn(s, theta, p.angle, func(t *interval.Form) bool { return offSegment(s, g, t, -p.angle, p.angle) })
}

func (p gainSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	return eachTurn(s, theta, 0, func(t *interval.Form) bool { return offSegment(s, t, g, -p.depth, 0) })
}

// eachTurn asks for every whole turn that brings theta within reach of ± angle.
func eachTurn(s interval.Space, theta *interval.Form, angle float64, avoids func(t *interval.Form) bool) bool {
	const rounding = 1e-9
	low, high := s.Bounds(theta)
	first, last := math.Ceil((low-angle-rounding)/wholeTurn), math.Floor((high+angle+rounding)/wholeTurn)
	if !(last-first <= 3) { // also when a bound is not a number
		return false
	}
	for k := first; k <= last; k++ {
		var t interval.Form
		s.Shift(&t, theta, -k*wholeTurn)
		t.Rest += 1e-15 * math.Abs(k) // 2π itself is rounded
		if !avoids(&t) {
			return false
		}
	}
	return true
}

// offSegment is true when the forms a and b are nowhere a = 0 and b in [low, high] at once. The values of (a, b) are a convex set, and so is
// the segment: they are apart when a line separates them. Tried are the axes and, for every symbol, the line along which that
// symbol moves the pair: h = b·a[i] − a·b[i] does not depend on it.
func offSegment(s interval.Space, a, b *interval.Form, low, high float64) bool {
	if l, h := s.Bounds(a); l > 0 || h < 0 {
		return true
	}
	if l, h := s.Bounds(b); l > high || h < low {
		return true
	}
	for i := range s.N {
		ai, bi := a.Coef[i], b.Coef[i]
		if ai == 0 {
			continue
		}
		centre := b.Centre*ai - a.Centre*bi
		radius := math.Abs(ai)*b.Rest + math.Abs(bi)*a.Rest
		size := math.Abs(b.Centre*ai) + math.Abs(a.Centre*bi)
		for k := range s.N {
			x, y := b.Coef[k]*ai, a.Coef[k]*bi
			radius += math.Abs(x - y)
			size += math.Abs(x) + math.Abs(y)
		}
		radius += 1e-14 * (size + radius)
		from, to := min(ai*low, ai*high), max(ai*low, ai*high)
		if centre-radius > to || centre+radius < from {
			return true
		}
	}
	return false
}

func (p phaseSet) worsens(s interval.Space, g, theta *interval.Form, frequency int) [interval.Symbols]float64 {
	t := theta.Centre - wholeTurn*math.Round(theta.Centre/wholeTurn)
	return eliminate(s, g, theta, frequency, func(slope float64) float64 { return -math.Copysign(1, t-slope*g.Centre) })
}

func (p gainSet) worsens(s interval.Space, g, theta *interval.Form, frequency int) [interval.Symbols]float64 {
	t := theta.Centre - wholeTurn*math.Round(theta.Centre/wholeTurn)
	return eliminate(s, theta, g, frequency, func(slope float64) float64 { return -math.Copysign(1, g.Centre-slope*t) })
}

// eliminate gives what every symbol does to b where a = 0, the frequency adjusting itself; sign turns it into the adverse direction.
func eliminate(s interval.Space, a, b *interval.Form, frequency int, sign func(slope float64) float64) (d [interval.Symbols]float64) {
	slope := 0.0
	if a.Coef[frequency] != 0 {
		slope = b.Coef[frequency] / a.Coef[frequency]
	}
	way := sign(slope)
	for i := range s.N {
		d[i] = way * (b.Coef[i] - slope*a.Coef[i])
	}
	return d
}

// avoids: 1 + T = 1 − e^z with z = g + jθ, so z is in the set when z = ln(1 − ζ) with |ζ| below the radius. The function −ln(1 − ζ) maps
// every disc about 0 in the unit disc onto a convex set (E. Study's theorem on convex functions, 1913, from memory), so again a line
// separates the values of the forms from it. Tried are the axis of θ, the way to the centre, and the line along each symbol.
func (p discSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	if !(p.radius < 1) {
		return false
	}
	return eachTurn(s, theta, math.Asin(p.radius), func(t *interval.Form) bool {
		if p.apart(s, g, t, 0, 1) || p.apart(s, g, t, g.Centre, t.Centre) {
			return true
		}
		for i := range s.N {
			if p.apart(s, g, t, -t.Coef[i], g.Coef[i]) {
				return true
			}
		}
		return false
	})
}

// apart is true when a·g + b·θ has no value in common with that of the set.
func (p discSet) apart(s interval.Space, g, theta *interval.Form, a, b float64) bool {
	if a == 0 && b == 0 {
		return false
	}
	centre := a*g.Centre + b*theta.Centre
	radius := math.Abs(a)*g.Rest + math.Abs(b)*theta.Rest
	size := math.Abs(a*g.Centre) + math.Abs(b*theta.Centre)
	for k := range s.N {
		x, y := a*g.Coef[k], b*theta.Coef[k]
		radius += math.Abs(x + y)
		size += math.Abs(x) + math.Abs(y)
	}
	radius += 1e-14*(size+radius) + 1e-12*(math.Abs(a)+math.Abs(b))
	return centre-radius > p.support(a, b) || centre+radius < -p.support(-a, -b)
}

// support is the greatest a·g + b·θ over the set. Its boundary is z = −ln(1 − w), |w/(1 − w)| = radius, with outward normal w: the point where
// the normal is (a, b) has w = r·e^(jφ), φ the direction of (a, b), and (1 − m²)·r² + 2m²·cos φ·r − m² = 0.
func (p discSet) support(a, b float64) float64 {
	length := math.Hypot(a, b)
	cos, sin := a/length, b/length
	m2 := p.radius * p.radius
	r := (-m2*cos + math.Sqrt(m2*m2*cos*cos+m2*(1-m2))) / (1 - m2)
	x, y := 1-r*cos, -r*sin
	return -a*math.Log(x*x+y*y)/2 - b*math.Atan2(y, x)
}

func (p discSet) worsens(s interval.Space, g, theta *interval.Form, frequency int) (d [interval.Symbols]float64) {
	sin, cos := math.Sincos(theta.Centre)
	size := math.Exp(min(g.Centre, 100))
	ex, ey := size*cos, size*sin
	nx, ny := 1-ex, -ey
	if qx, qy := ex*g.Coef[frequency]-ey*theta.Coef[frequency], ey*g.Coef[frequency]+ex*theta.Coef[frequency]; qx != 0 || qy != 0 {
		// the frequency adjusts itself: only what lies across its own way counts
		side := math.Copysign(1, -nx*qy+ny*qx)
		nx, ny = -qy*side, qx*side
	}
	for i := range s.N {
		qx, qy := ex*g.Coef[i]-ey*theta.Coef[i], ey*g.Coef[i]+ex*theta.Coef[i]
		d[i] = nx*qx + ny*qy // 1 + T moves by −q: along −n is nearer
	}
	return d
}
