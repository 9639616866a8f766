package loop

import "math"

// interval settles what lies between two neighbouring nodes, or asks for a node between them. It records only when
// everything about the interval is settled, so nothing is counted twice.
func (k *walker) interval(a, b *node) (divide bool, err error) {
	width := b.u - a.u
	small := width < narrowest
	least, greatest := k.ranges(a, b)
	low, high := envelope(a.g, b.g, width, least.magnitude, greatest.magnitude)
	inRange := a.w >= k.first*(1-1e-12) && b.w <= k.last*(1+1e-12)

	crosses := low <= 0 && high >= 0
	if crosses && !small && least.magnitude < 0 && greatest.magnitude > 0 {
		return true, nil
	}

	turns := high > 0 || inRange && high > k.below
	nears := inRange && k.couldBeNearer(low, high)
	crossing := false
	if turns || nears {
		change, known := between(b.theta-a.theta, least.phase*width, greatest.phase*width)
		if !known && !small {
			return true, nil
		}
		end := a.theta + change
		bottom, top := envelope(a.theta, end, width, least.phase, greatest.phase)
		if turns {
			if crossing = onAxis(bottom, top); crossing && !small {
				if least.phase < 0 && greatest.phase > 0 || math.Abs(change) > 3 {
					return true, nil
				}
			}
		}
		if nears && !k.noNearer(low, high, bottom, top) {
			if !small && (high-low > coarse || top-bottom > coarse) {
				return true, nil
			}
			k.closest(a, b)
		}
	}
	if crosses && (a.g < 0) != (b.g < 0) && inRange {
		k.crossover(a, b)
	}
	if crossing && (a.theta < 0) != (b.theta < 0) && math.Abs(b.theta-a.theta) < math.Pi {
		k.phaseCrossover(a, b, b.theta > a.theta, inRange)
	}
	return false, nil
}

// between gives the true change of a phase whose wrapped change is known and whose true change lies within a range; known is
// false where more than one fits.
func between(wrapped, low, high float64) (change float64, known bool) {
	const slack = 1e-9
	first := math.Ceil((low - slack - wrapped) / (2 * math.Pi))
	change = wrapped + 2*math.Pi*first
	if change > high+slack { // rounding: take the nearest turn
		return wrapped - 2*math.Pi*math.Round((wrapped-(low+high)/2)/(2*math.Pi)), true
	}
	return change, change+2*math.Pi > high+slack
}

// onAxis says whether a whole turn, where −T is real and positive, may lie between two phases.
func onAxis(bottom, top float64) bool {
	const slack = 1e-9
	return math.Ceil((bottom-slack)/(2*math.Pi))*2*math.Pi <= top+slack
}

// couldBeNearer says whether |T| between e^low and e^high leaves room for |1 + T| below the least one known.
func (k *walker) couldBeNearer(low, high float64) bool {
	if k.measured != k.least { // it changes many times before it is asked for
		d := k.least
		k.measured, k.room, k.angle = d, [2]float64{math.Log1p(-min(d, 1)), math.Log1p(d)}, math.Pi
		if d < 1 {
			k.angle = math.Asin(d)
		}
	}
	return high > k.room[0] && low < k.room[1]
}

// noNearer says whether |1 + T| stays at least the least one known over |T| in [e^low, e^high] and arg(−T) in [bottom, top]: the
// point of that sector nearest to −1 lies at the angle nearest to it and at |T| = cos of that angle, or at the end of the
// range next to it.
func (k *walker) noNearer(low, high, bottom, top float64) bool {
	const negligible = 1 - 1e-9 // below this the search would only polish
	angle := 0.0
	if !onAxis(bottom, top) {
		turn := 2 * math.Pi * math.Round(bottom/(2*math.Pi))
		angle = min(math.Abs(bottom-turn), math.Abs(top-turn), math.Abs(top-turn-2*math.Pi))
	}
	if angle >= k.angle {
		return true // seen from 0, −1 is at least that far to the side
	}
	sin, cos := math.Sincos(min(angle, math.Pi))
	least := k.least * negligible
	if cos > 0 && sin >= least {
		return true
	}
	g := min(max(cos, math.Exp(low)), math.Exp(high))
	return (g-cos)*(g-cos)+sin*sin >= least*least
}

// crossover closes in on |T| = 1 between two nodes and keeps it.
func (k *walker) crossover(a, b *node) {
	w, t := k.solve(a, b, a.g, b.g, func(t, l complex128) (float64, float64) {
		g, _ := polar(t)
		return g, real(l)
	}, 1e-13)
	k.crossovers = append(k.crossovers, w)
	if m := math.Abs(math.Atan2(-imag(t), -real(t))); m < k.margin {
		k.margin, k.marginAt = m, w
	}
	k.consider(w, t)
}

// phaseCrossover closes in on arg(−T) = 0 between two nodes, counts the crossing when it lies beyond −1 and keeps its gain.
func (k *walker) phaseCrossover(a, b *node, rising, inRange bool) {
	w, t := k.solve(a, b, a.theta, b.theta, func(t, l complex128) (float64, float64) {
		_, theta := polar(t)
		return theta, imag(l)
	}, 1e-13)
	g, _ := polar(t)
	if g > 0 {
		if rising {
			k.count++
		} else {
			k.count--
		}
	}
	if !inRange {
		return
	}
	k.consider(w, t)
	if g <= 0 && g > k.below {
		k.below, k.belowAt = g, w
	}
	if g > 0 && g < k.above {
		k.above, k.aboveAt = g, w
	}
}

// closest looks for a minimum of |1 + T| between two nodes: a zero of d|1+T|²/du = 2·Re((1+T)*·T·l) that rises.
func (k *walker) closest(a, b *node) {
	rate := func(t, l complex128) (float64, float64) {
		d := t * l
		return (1+real(t))*real(d) + imag(t)*imag(d), math.NaN()
	}
	fa, _ := rate(a.t, a.l)
	fb, _ := rate(b.t, b.l)
	if fa < 0 && fb > 0 {
		w, t := k.solve(a, b, fa, fb, rate, 1e-6*math.Min(1, k.least))
		k.consider(w, t)
	}
}

// solve closes in on the zero of a function of u between two nodes at which it has opposite signs: Newton's steps where the
// function gives its slope and the step stays inside the bracket, else the Illinois form of false position (M. Dowell
// and P. Jarratt, "A modified regula falsi method for computing the root of an equation", BIT 11 (1971), from memory),
// bisection when neither halves the bracket in time.
func (k *walker) solve(a, b *node, fa, fb float64, of func(t, l complex128) (value, slope float64), tolerance float64) (w float64, t complex128) {
	ua, ub := a.u, b.u
	u := ua + (ub-ua)*fa/(fa-fb)
	side := 0
	for round := 0; ; round++ {
		if !(u > ua && u < ub) {
			u = (ua + ub) / 2
		}
		w = math.Exp(u)
		var l complex128
		t, l = k.at(w, nil)
		k.evals++
		f, rate := of(t, l)
		if f == 0 || round >= 100 {
			return w, t
		}
		if (f < 0) == (fa < 0) {
			ua, fa = u, f
			if side == -1 {
				fb /= 2
			}
			side = -1
		} else {
			ub, fb = u, f
			if side == 1 {
				fa /= 2
			}
			side = 1
		}
		next := ua + (ub-ua)*fa/(fa-fb)
		if step := f / rate; !math.IsNaN(step) && u-step > ua && u-step < ub && round < 40 {
			next = u - step
		}
		if math.Abs(next-u) <= tolerance || ub-ua <= tolerance {
			return w, t
		}
		if round >= 8 && round%3 == 0 {
			next = (ua + ub) / 2
		}
		u = next
	}
}
