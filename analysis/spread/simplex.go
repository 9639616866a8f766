package spread

import (
	"math"

	"gonum.org/v1/gonum/optimize"
)

// beyond stands for a value that does not exist, larger than any that does.
const beyond = 1e30

// Between lists those of the axes whose value in x lies strictly between the extremes.
func (b Box) Between(x []float64, axes []int) []int {
	var list []int
	for _, axis := range axes {
		if b.Min[axis] < x[axis] && x[axis] < b.Max[axis] {
			list = append(list, axis)
		}
	}
	return list
}

// Simplex makes x worse by moving the axes named together: the downhill simplex method (J. A. Nelder, R. Mead, "A simplex method for
// function minimization", Computer Journal 7 (1965), from memory), started from x with a twentieth of each axis's width
// and ended after `evaluations` values. Points outside the box count as the nearest inside. It returns the value at x, which it changes.
func (b Box) Simplex(x []float64, worst float64, axes []int, evaluations int, value Value) float64 {
	if len(axes) == 0 || math.IsNaN(worst) {
		return worst
	}
	best := make([]float64, len(axes))
	start := make([]float64, len(axes))
	for i, axis := range axes {
		best[i] = x[axis]
		start[i] = (x[axis] - b.Min[axis]) / (b.Max[axis] - b.Min[axis])
	}
	var fault any // a panic would end the program: the method runs on a goroutine of its own
	problem := optimize.Problem{Func: func(part []float64) (v float64) {
		defer func() {
			if cause := recover(); cause != nil {
				fault, v = cause, beyond
			}
		}()
		if fault != nil {
			return beyond
		}
		for i, axis := range axes {
			x[axis] = b.Min[axis] + (b.Max[axis]-b.Min[axis])*math.Min(math.Max(part[i], 0), 1)
		}
		if v = value(x); math.IsNaN(v) {
			return beyond
		}
		if worse(v, worst) {
			worst = v
			for i, axis := range axes {
				best[i] = x[axis]
			}
		}
		return math.Min(v, beyond)
	}}
	settings := &optimize.Settings{FuncEvaluations: evaluations, Converger: &optimize.FunctionConverge{Absolute: 1e-9, Relative: 1e-7, Iterations: 20}}
	_, _ = optimize.Minimize(problem, start, settings, &optimize.NelderMead{SimplexSize: 0.05}) // running out of evaluations is no error here
	if fault != nil {
		panic(fault)
	}
	for i, axis := range axes {
		x[axis] = best[i]
	}
	return worst
}
