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

func (p phaseSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	if low, high := s.Bounds(g); low > 0 || high < 0 {
		return true
	}
	return eachTurn(s, theta, p.angle, func(t *interval.Form) bool { return offSegment(s, g, t, -p.angle, p.angle) })
}

func (p gainSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	if low, high := s.Bounds(g); low > 0 || high < -p.depth {
		return true
	}
	return eachTurn(s, theta, 0, func(t *interval.Form) bool { return offSegment(s, t, g, -p.depth, 0) })
}

// eachTurn asks for every whole turn that brings theta within reach of ± angle.
func eachTurn(s interval.Space, theta *interval.Form, angle float64, avoids func(t *interval.Form) bool) bool {
	const rounding = 1e-9
	low, high := s.Bounds(theta)
	first, last := math.Ceil((low-angle-rounding)/wholeTurn), math.Floor((high+angle+rounding)/wholeTurn)
	if last-first > 3 {
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

// avoids: with z = g + jθ about its centre z0, 1 + T = 1 − e^z = (1 − e^z0) − e^z0·(w + …), w = z − z0, the rest at most |w|²·e^|w|/2. A convex
// set and a disc are apart when a line separates them: tried is the one across the way to the centre, and those along each symbol.
func (p discSet) avoids(s interval.Space, g, theta *interval.Form) bool {
	low, high := s.Bounds(g)
	if math.Expm1(low) > p.radius*(1+1e-12) || -math.Expm1(high) > p.radius*(1+1e-12) {
		return true
	}
	across := func(x, y float64) float64 { return math.Sqrt(x*x + y*y) }
	rho := g.Rest + theta.Rest
	for i := range s.N {
		rho += across(g.Coef[i], theta.Coef[i])
	}
	rho *= 1 + 1e-13
	if !(rho < 1) {
		return false
	}
	sin, cos := math.Sincos(theta.Centre)
	size := math.Exp(g.Centre)
	ex, ey := size*cos, size*sin
	cx, cy := 1-ex, -ey
	rest := size*(g.Rest+theta.Rest+rho*rho*math.Exp(rho)/2) + 1e-13*(1+size)*(1+math.Abs(theta.Centre))
	apart := func(nx, ny float64) bool { // n is a unit vector
		far := math.Abs(nx*cx+ny*cy) - rest
		for i := range s.N {
			qx, qy := ex*g.Coef[i]-ey*theta.Coef[i], ey*g.Coef[i]+ex*theta.Coef[i]
			far -= math.Abs(nx*qx + ny*qy)
		}
		return far > p.radius*(1+1e-12)
	}
	if c := across(cx, cy); c > 0 && apart(cx/c, cy/c) {
		return true
	}
	for i := range s.N {
		qx, qy := ex*g.Coef[i]-ey*theta.Coef[i], ey*g.Coef[i]+ex*theta.Coef[i]
		if q := across(qx, qy); q > 0 && apart(-qy/q, qx/q) {
			return true
		}
	}
	return false
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
