package loop

import "math"

// The closed loop is stable when the Nyquist curve goes around −1 counter-clockwise once for every open-loop pole in the right
// half-plane (H. Nyquist, "Regeneration theory", Bell System Technical Journal 11 (1932)). Turns are counted where the
// curve crosses the negative real axis beyond −1: arg(−T) passes a whole turn while |T| > 1. The curve is symmetrical, so
// ω > 0 is followed and counted twice; what happens on the real axis itself (s = 0, s → ∞) counts half there.

// fromOrigin counts the crossings from s → 0 on the positive real axis, around the poles at the origin on a small quarter
// circle (arg T falls by a quarter turn for each), to the first node. Frequencies below the first node follow the asymptote.
func (k *walker) fromOrigin(n *node) float64 {
	if k.low == 0 || k.order < 0 || k.order == 0 && math.Abs(k.low) <= 1 {
		return 0
	}
	from := math.Pi // arg(−T) on the positive real axis
	if k.low < 0 {
		from = 0
	}
	return turns(from, near(n.theta, from-float64(k.order)*math.Pi/2))
}

// toInfinity counts the crossings from the last node to s → ∞ on the positive real axis. A sampled loop ends at half its sampling
// frequency, where the curve meets its mirror image: one that is still above 1 there closes across the nearer half of the
// real axis. A loop gain that falls crosses nothing beyond −1 any more.
func (k *walker) toInfinity(n *node) float64 {
	if n.g <= 0 {
		return 0
	}
	if k.period > 0 {
		return turns(n.theta, math.Pi*math.Round(n.theta/math.Pi))
	}
	degree := k.degree()
	if degree < 0 {
		return 0 // still above 1, but falling by its asymptote, whose phase stands still
	}
	if k.delay > 0 {
		k.unbounded = true // turns for ever with |T| > 1: right half-plane poles without end
		return 0
	}
	to := math.Pi
	if k.leading() < 0 {
		to = 0
	}
	return turns(n.theta, near(to, n.theta-float64(degree)*math.Pi/2))
}

// degree is the power of s that T follows at s → ∞.
func (k *walker) degree() int {
	d := -k.integrators
	for i := range k.sections {
		by := 1
		if k.sections[i].a > 0 {
			by = 2
		}
		if i >= k.zeros {
			by = -by
		}
		d += by
	}
	return d
}

// leading has the sign of c where T → c·s^degree at s → ∞: a real root 1 + b·s brings the sign of b, a pair none.
func (k *walker) leading() float64 {
	sign := math.Copysign(1, k.gain)
	for i := range k.sections {
		if k.sections[i].a == 0 && k.sections[i].b < 0 {
			sign = -sign
		}
	}
	return sign
}

// near is the phase equal to theta within whole turns that lies nearest to about.
func near(theta, about float64) float64 {
	return theta + 2*math.Pi*math.Round((about-theta)/(2*math.Pi))
}

// turns counts the whole turns that a phase passes between two values, rising ones positive; an end that is itself a whole
// turn counts half.
func turns(from, to float64) float64 { return passed(to) - passed(from) }

func passed(theta float64) float64 {
	t := theta / (2 * math.Pi)
	if whole := math.Round(t); math.Abs(t-whole) < 1e-15 {
		return whole - 0.5
	}
	return math.Floor(t)
}

// stable gives the verdict once the walk is done.
func (k *walker) stable() bool {
	return !k.unbounded && math.Round(2*k.count) == float64(k.unstable)
}
