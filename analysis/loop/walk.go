package loop

import (
	"errors"
	"math"
	"slices"
)

// ErrTooInvolved says that a loop gain turns too often to be followed (a delay of thousands of periods).
var ErrTooInvolved = errors.New("the loop gain turns too often to be measured")

// ErrStopped says that Meter.Stop ended a measurement.
var ErrStopped = errors.New("the measurement was stopped")

const (
	narrowest = 1e-9  // intervals of ln ω below this are not divided further
	steps     = 20000 // intervals looked at before a loop gain is given up as too involved
	coarse    = 0.25  // how far ln T may run within an interval that is searched for the least |1 + T|
)

// node is one evaluated frequency.
type node struct {
	u, w  float64    // ln ω, ω
	t, l  complex128 // T(jω) and d ln T/du
	g     float64    // ln|T|
	theta float64    // arg(−T), (−π, π]
	slot  int        // where its sections' slopes are
}

// walker follows T(jω) from left to right in intervals of u = ln ω. The ranges of d ln|T|/du and d arg T/du over an interval are
// known exactly (section, sample), so an interval is either proved to hold no crossover, no crossing of the negative real
// axis and no |1 + T| below the least one known, or proved to be monotone, or halved. Nothing is missed, however narrow,
// and most of the range is settled by a few evaluations. (The idea of bounding by slopes: S. A. Piyavskii, "An algorithm for
// finding the absolute extremum of a function", USSR Comput. Math. Math. Phys. 12 (1972), from memory.)
type walker struct {
	form
	slopes []slope // as many for each slot as there are sections
	free   []int   // slots not in use
	stack  []node  // nodes to the right, the nearest last
	visits int
	stop   func() bool // nil: never
	evals  int

	first, last float64 // ω of the range in which figures are wanted
	limit       float64 // ω beyond which nothing is looked at

	count      float64 // crossings of the negative real axis beyond −1, counter-clockwise ones positive, ω > 0
	unbounded  bool    // |T| does not fall below 1 while a delay turns it without end
	crossovers []float64
	margin     float64 // least |arg(−T)| at a crossover
	marginAt   float64
	below      float64 // greatest ln g < 0 over the phase crossovers, −Inf: none
	belowAt    float64
	above      float64 // least ln g > 0 over the phase crossovers, +Inf: none
	aboveAt    float64
	least      float64 // least |1 + T| known
	leastAt    float64
	room       [2]float64 // ln|T| must come between these for |1 + T| to be less
	angle      float64    // and arg(−T) within ± this, where the least is below 1
	measured   float64    // the least |1 + T| that room and angle belong to
}

// walk collects everything that the figures are made of.
func (k *walker) walk() error {
	k.slopes, k.free, k.stack = k.slopes[:0], k.free[:0], k.stack[:0]
	k.visits, k.unbounded = 0, false
	k.margin, k.below, k.above, k.least = math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(1)
	k.room, k.angle, k.measured = [2]float64{math.Inf(-1), math.Inf(1)}, math.Pi, math.Inf(1)
	k.marginAt, k.belowAt, k.aboveAt, k.leastAt = math.NaN(), math.NaN(), math.NaN(), math.NaN()
	k.start()
	left := k.pop()
	k.count = k.fromOrigin(&left)
	for len(k.stack) > 0 {
		right := k.stack[len(k.stack)-1]
		divide, err := k.interval(&left, &right)
		if err != nil {
			return err
		}
		if divide {
			if k.visits++; k.visits > steps {
				return ErrTooInvolved
			}
			if k.visits%256 == 0 && k.stop != nil && k.stop() {
				return ErrStopped
			}
			k.push((left.u+right.u)/2, math.Sqrt(left.w)*math.Sqrt(right.w))
			continue
		}
		k.free = append(k.free, left.slot)
		left = k.pop()
	}
	k.count += k.toInfinity(&left)
	return nil
}

// start puts the first nodes on the stack: the ends of the range, every root's own frequency, and ends beyond which T only
// follows its asymptotes.
func (k *walker) start() {
	var store [48]float64
	marks := append(store[:0], k.first, k.last)
	lowest, highest := k.first, k.last
	for i := range k.sections {
		w := math.Sqrt(k.sections[i].peak2)
		marks = append(marks, w)
		lowest, highest = math.Min(lowest, w), math.Max(highest, w)
	}
	for i := range k.samples {
		if s := &k.samples[i]; s.turn > 0 {
			marks = append(marks, s.turn/k.period)
			lowest = math.Min(lowest, s.turn/k.period)
		}
		if away := math.Abs(k.samples[i].size - 1); away > 0 && away < 1 {
			lowest = math.Min(lowest, away/k.period)
		}
	}
	if k.delay > 0 {
		lowest = math.Min(lowest, 1/k.delay)
	}
	lowest /= 1000
	if k.order > 0 && k.low != 0 {
		// left of the crossover of the asymptote K/s^order
		lowest = math.Min(lowest, 0.1*math.Pow(math.Abs(k.low), 1/float64(k.order)))
	}
	highest *= 1000
	if d := k.degree(); d > 0 { // right of the crossover of the asymptote c·s^d
		t, _ := k.at(highest, nil)
		g, _ := polar(t)
		highest *= 10 * math.Exp(math.Max(0, -g/float64(d)))
	}
	if k.period > 0 {
		highest = k.limit
	}
	marks = append(marks, math.Max(lowest, 1e-200), highest)
	slices.Sort(marks)
	for i := len(marks) - 1; i >= 0; i-- {
		if marks[i] > k.limit || len(k.stack) > 0 && marks[i] >= k.stack[len(k.stack)-1].w {
			continue
		}
		k.push(math.Log(marks[i]), marks[i])
	}
}

// push evaluates T at w = e^u and puts the node on the stack.
func (k *walker) push(u, w float64) {
	n := node{u: u, w: w}
	if len(k.free) == 0 {
		k.free = append(k.free, len(k.slopes)/max(len(k.sections), 1))
		for range max(len(k.sections), 1) {
			k.slopes = append(k.slopes, slope{})
		}
	}
	n.slot = k.free[len(k.free)-1]
	k.free = k.free[:len(k.free)-1]
	n.t, n.l = k.at(n.w, k.slopesOf(&n))
	k.evals++
	n.g, n.theta = polar(n.t)
	k.consider(n.w, n.t)
	k.stack = append(k.stack, n)
}

func (k *walker) pop() node {
	n := k.stack[len(k.stack)-1]
	k.stack = k.stack[:len(k.stack)-1]
	return n
}

func (k *walker) slopesOf(n *node) []slope {
	size := max(len(k.sections), 1)
	return k.slopes[n.slot*size : (n.slot+1)*size]
}

// polar gives ln|T| and arg(−T).
func polar(t complex128) (g, theta float64) {
	return 0.5 * math.Log(real(t)*real(t)+imag(t)*imag(t)), math.Atan2(-imag(t), -real(t))
}

// consider keeps the least |1 + T| inside the range.
func (k *walker) consider(w float64, t complex128) {
	if re, im := 1+real(t), imag(t); re*re+im*im >= k.least*k.least || w < k.first*(1-1e-12) || w > k.last*(1+1e-12) {
		return
	}
	if d := math.Hypot(1+real(t), imag(t)); d < k.least {
		k.least, k.leastAt = d, w
	}
}

// ranges gives the ranges of d ln|T|/du and d arg T/du between two nodes.
func (k *walker) ranges(a, b *node) (least, greatest slope) {
	sa, sb := k.slopesOf(a), k.slopesOf(b)
	low2, high2 := a.w*a.w, b.w*b.w
	for i := range k.sections {
		q := &k.sections[i]
		m1, m2 := sa[i].magnitude, sb[i].magnitude
		if m1 > m2 {
			m1, m2 = m2, m1
		}
		if q.a > 0 {
			if q.least2 > low2 && q.least2 < high2 {
				m1 = min(m1, q.least)
			}
			if q.greatest2 > low2 && q.greatest2 < high2 {
				m2 = max(m2, q.highest)
			}
		}
		p1, p2 := sa[i].phase, sb[i].phase
		if p1 > p2 {
			p1, p2 = p2, p1
		}
		if q.peak2 > low2 && q.peak2 < high2 {
			p1, p2 = min(p1, q.peak), max(p2, q.peak)
		}
		if i >= k.zeros {
			m1, m2, p1, p2 = -m2, -m1, -p2, -p1
		}
		least.magnitude, greatest.magnitude = least.magnitude+m1, greatest.magnitude+m2
		least.phase, greatest.phase = least.phase+p1, greatest.phase+p2
	}
	least.magnitude -= float64(k.integrators)
	greatest.magnitude -= float64(k.integrators)
	least.phase -= b.w * k.delay
	greatest.phase -= a.w * k.delay
	for i := range k.samples {
		l, g := k.samples[i].slopes(a.w*k.period, b.w*k.period)
		if i >= k.numerators {
			l, g = slope{-g.magnitude, -g.phase}, slope{-l.magnitude, -l.phase}
		}
		least.magnitude, greatest.magnitude = least.magnitude+l.magnitude, greatest.magnitude+g.magnitude
		least.phase, greatest.phase = least.phase+l.phase, greatest.phase+g.phase
	}
	return least, greatest
}

// envelope gives the range of a function over [0, width] from its values at the ends and the range of its slope.
func envelope(a, b, width, least, greatest float64) (low, high float64) {
	low, high = min(a, b), max(a, b)
	if least < 0 && greatest > 0 {
		rise := (b - a - least*width) / (greatest - least) // how long it may rise first and still reach b
		high = max(high, a+greatest*rise)
		low = min(low, a+least*(width-rise))
	}
	return low, high
}
