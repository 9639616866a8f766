package spread

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestVerticesVisitsEveryCombinationOnce(t *testing.T) {
	b := Box{Min: []float64{0, 1, 5, 2}, Max: []float64{1, 2, 5, 9}}
	seen := map[[4]float64]int{}
	x := []float64{0.5, 1.5, 5, 3}
	b.Vertices(x, []int{0, 1, 2}, func(x []float64) bool { seen[[4]float64(x)]++; return true })
	assert.Equal(t, map[[4]float64]int{{0, 1, 5, 3}: 1, {0, 2, 5, 3}: 1, {1, 1, 5, 3}: 1, {1, 2, 5, 3}: 1}, seen)
	assert.Equal(t, []float64{0.5, 1.5, 5, 3}, x)
	calls := 0
	assert.False(t, b.Vertices(x, []int{0, 1}, func([]float64) bool { calls++; return calls < 2 }))
	assert.Equal(t, 2, calls)
}

func TestDescendFindsTheWorstVertexOfALinearFigure(t *testing.T) {
	b := Box{Min: []float64{-1, -1, -1}, Max: []float64{1, 1, 1}}
	x := []float64{0, 0, 0}
	f := func(x []float64) float64 { return 3*x[0] - 2*x[1] + x[2] }
	assert.Equal(t, -6.0, b.Descend(x, f(x), []int{0, 1, 2}, 5, f))
	assert.Equal(t, []float64{-1, 1, -1}, x)
}

func TestInsideFindsAnInteriorMinimum(t *testing.T) {
	b := Box{Min: []float64{0}, Max: []float64{10}}
	x := []float64{0}
	f := func(x []float64) float64 { return (x[0] - 3.3) * (x[0] - 3.3) }
	assert.InDelta(t, 0, b.Inside(x, f(x), []int{0}, 5, f), 0.01)
	assert.InDelta(t, 3.3, x[0], 0.1)
}

func TestFiguresThatDoNotExistAreNeverWorst(t *testing.T) {
	b := Box{Min: []float64{0}, Max: []float64{1}}
	x := []float64{0.5}
	f := func(x []float64) float64 {
		if x[0] == 0 {
			return math.NaN()
		}
		return x[0]
	}
	assert.Equal(t, 1.0, b.Descend(x, math.NaN(), []int{0}, 3, f))
}

func TestBoundaryIsClosedFromBothSides(t *testing.T) {
	in, out := Boundary(0, 8, 40, func(v float64) bool { return v < math.Pi })
	assert.Less(t, in, math.Pi)
	assert.GreaterOrEqual(t, out, math.Pi)
	assert.InDelta(t, in, out, 1e-10)
}

func TestScatterFollowsACurvedBorder(t *testing.T) {
	b := Box{Min: []float64{-1, -1}, Max: []float64{1, 1}}
	f := func(x []float64) float64 { // exists inside the unit circle only: worst at (−0.6, −0.8)
		if x[0]*x[0]+x[1]*x[1] > 1 {
			return math.NaN()
		}
		return 0.6*x[0] + 0.8*x[1]
	}
	x := []float64{0, -1}
	assert.InDelta(t, -1, b.Scatter(x, f(x), []int{0, 1}, 300, 1, f), 0.01)
	y := []float64{0, -1}
	b.Scatter(y, f(y), []int{0, 1}, 300, 1, f)
	assert.Equal(t, x, y)
}

func TestSimplexFollowsAValleyThatNoSingleAxisFollows(t *testing.T) {
	b := Box{Min: []float64{-2, -2, 0}, Max: []float64{2, 2, 1}}
	// H. H. Rosenbrock's valley (Computer Journal 3 (1960), from memory): minimum 0 at (1, 1).
	valley := func(x []float64) float64 {
		return 100*(x[1]-x[0]*x[0])*(x[1]-x[0]*x[0]) + (1-x[0])*(1-x[0])
	}
	x := []float64{0.5, 0.5, 0.3}
	worst := b.Simplex(x, valley(x), b.Between(x, []int{0, 1}), 400, valley)
	assert.InDelta(t, 0, worst, 1e-3)
	assert.InDelta(t, valley(x), worst, 1e-12)
	assert.Equal(t, 0.3, x[2])
}

func TestSimplexStaysInTheBoxAndPassesPanicsOn(t *testing.T) {
	b := Box{Min: []float64{0, 0}, Max: []float64{1, 1}}
	x := []float64{0.5, 0.5}
	worst := b.Simplex(x, 0, []int{0, 1}, 200, func(x []float64) float64 {
		for _, v := range x {
			assert.True(t, v >= 0 && v <= 1)
		}
		return -x[0] - x[1]
	})
	assert.InDelta(t, -2, worst, 1e-6)
	assert.PanicsWithValue(t, "broken", func() {
		b.Simplex([]float64{0.5, 0.5}, 0, []int{0, 1}, 50, func([]float64) float64 { panic("broken") })
	})
}
