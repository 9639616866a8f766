package spread

import (
	"math"
	"math/rand/v2"
)

// Box bounds every axis; Min <= Max.
type Box struct{ Min, Max []float64 }

// Value judges one point: the lower, the worse; NaN: the figure does not exist there.
type Value func(x []float64) float64

// Vertices visits every combination of the extremes of the axes named, the first axis changing slowest; the other axes keep their
// values in x. Axes without width are visited once. visit may keep nothing of its argument; it ends the walk by returning
// false.
func (b Box) Vertices(x []float64, axes []int, visit func(x []float64) bool) bool {
	if len(axes) == 0 {
		return visit(x)
	}
	axis, rest := axes[0], axes[1:]
	before := x[axis]
	defer func() { x[axis] = before }()
	x[axis] = b.Min[axis]
	if !b.Vertices(x, rest, visit) {
		return false
	}
	if b.Max[axis] == b.Min[axis] {
		return true
	}
	x[axis] = b.Max[axis]
	return b.Vertices(x, rest, visit)
}

// Descend makes x worse by moving one axis at a time to the other of its extremes, in rounds until a whole round finds nothing
// (or `rounds` are done). It returns the value at x, which it changes; worst is the value at x before.
func (b Box) Descend(x []float64, worst float64, axes []int, rounds int, value Value) float64 {
	for range rounds {
		moved := false
		for _, axis := range axes {
			before := x[axis]
			for _, extreme := range [2]float64{b.Min[axis], b.Max[axis]} {
				if extreme == before {
					continue
				}
				x[axis] = extreme
				if v := value(x); worse(v, worst) {
					worst, before, moved = v, extreme, true
				}
			}
			x[axis] = before
		}
		if !moved {
			break
		}
	}
	return worst
}

// Inside makes x worse by searching every axis over its whole width, one after the other: `points` evenly spaced values and
// one close to the end where it stands, then a golden section around the worst of them when it is not at an end (J. Kiefer, "Sequential minimax search for a maximum",
// Proc. American Mathematical Society 4 (1953), from memory). It returns the value at x, which it changes.
func (b Box) Inside(x []float64, worst float64, axes []int, points int, value Value) float64 {
	for _, axis := range axes {
		low, high := b.Min[axis], b.Max[axis]
		if low == high {
			continue
		}
		best := x[axis]
		try := func(v float64) float64 {
			x[axis] = v
			f := value(x)
			if worse(f, worst) {
				worst, best = f, v
			}
			return f
		}
		for i := 1; i+1 < points; i++ {
			try(low + (high-low)*float64(i)/float64(points-1))
		}
		if b.atEnd(axis, best) { // the worst may lie close to the end
			if near := low + 0.03*(high-low); best == low {
				try(near)
			} else {
				try(low + high - near)
			}
		}
		if step := (high - low) / float64(points-1); best > low && best < high {
			golden(math.Max(low, best-step), math.Min(high, best+step), try)
		}
		x[axis] = best
	}
	return worst
}

func (b Box) atEnd(axis int, v float64) bool { return v == b.Min[axis] || v == b.Max[axis] }

// Scatter makes x worse by moving about half of the axes at a time by random steps, from half of an axis's width down to a
// two-hundredth, always from the worst point so far; steps beyond an extreme end there. It finds what single moves miss: a
// worst point against a curved border beyond which the figure does not exist. The steps depend on seed alone.
func (b Box) Scatter(x []float64, worst float64, axes []int, tries int, seed uint64, value Value) float64 {
	r := rand.New(rand.NewPCG(seed, 0))
	next := make([]float64, len(x))
	for try := range tries {
		size := 0.5 * math.Pow(0.01, float64(try)/float64(tries))
		copy(next, x)
		for _, axis := range axes {
			step := r.NormFloat64() * size
			if r.IntN(2) == 0 {
				next[axis] = math.Min(math.Max(x[axis]+step*(b.Max[axis]-b.Min[axis]), b.Min[axis]), b.Max[axis])
			}
		}
		if v := value(next); worse(v, worst) {
			worst = v
			copy(x, next)
		}
	}
	return worst
}

// golden narrows a bracket to about a hundredth of its width.
func golden(a, b float64, f func(float64) float64) {
	const ratio = 0.6180339887498949
	c, d := b-ratio*(b-a), a+ratio*(b-a)
	fc, fd := f(c), f(d)
	for range 9 {
		if worse(fc, fd) {
			b, d, fd = d, c, fc
			c = b - ratio*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = a + ratio*(b-a)
			fd = f(d)
		}
	}
}

// Boundary bisects between low, where is holds, and high, where it does not, and returns the nearest points on both sides: closer
// than a 2^-rounds part of the way.
func Boundary(low, high float64, rounds int, is func(v float64) bool) (inside, outside float64) {
	for range rounds {
		middle := low + (high-low)/2
		if middle == low || middle == high {
			break
		}
		if is(middle) {
			low = middle
		} else {
			high = middle
		}
	}
	return low, high
}

// worse says whether a is a worse value than b, beyond rounding; a value that does not exist never is, and anything is worse than one.
func worse(a, b float64) bool {
	return a < b-1e-10*math.Abs(b) || math.IsNaN(b) && !math.IsNaN(a)
}
