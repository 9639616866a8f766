package interval

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

const symbols = 4

// drawn is a form with known dependence: its value at a point of the symbols is one of those it encloses.
type drawn struct {
	form Form
	at   func(e []float64) float64
}

func draw(r *rand.Rand) drawn {
	var d drawn
	d.form.Centre = r.NormFloat64() * math.Exp(3*r.NormFloat64())
	for i := range symbols {
		d.form.Coef[i] = 0.3 * d.form.Centre * r.NormFloat64()
	}
	f := d.form
	d.at = func(e []float64) float64 {
		v := f.Centre
		for i := range symbols {
			v += f.Coef[i] * e[i]
		}
		return v
	}
	return d
}

func point(r *rand.Rand) []float64 {
	e := make([]float64, symbols)
	for i := range e {
		if e[i] = 2*r.Float64() - 1; r.IntN(3) == 0 {
			e[i] = math.Copysign(1, e[i])
		}
	}
	return e
}

// holds demands that the form, at that point of the symbols, comes within its rest of the value, but for the rounding of this check.
func holds(t *testing.T, f *Form, e []float64, value float64, what string) {
	t.Helper()
	v := f.Centre
	size := math.Abs(v)
	for i := range e {
		v += f.Coef[i] * e[i]
		size += math.Abs(f.Coef[i])
	}
	if !(math.Abs(v-value) <= f.Rest+4e-16*(size+math.Abs(value))) {
		require.Failf(t, what, "%v is %v away from the form's %v, which allows %v", value, math.Abs(v-value), v, f.Rest)
	}
}

// The definition of an affine form (see Form): whatever exact arithmetic gives at any point of the symbols is enclosed.
func TestEveryOperationEnclosesWhatArithmeticGives(t *testing.T) {
	s := Space{symbols}
	r := rand.New(rand.NewPCG(4, 9))
	done := map[string]int{}
	for range 3000 {
		a, b := draw(r), draw(r)
		k := r.NormFloat64()
		var sum, difference, product, square, scaled, inverse, quotient, root, power Form
		s.Add(&sum, &a.form, &b.form)
		s.Sub(&difference, &a.form, &b.form)
		s.Mul(&product, &a.form, &b.form)
		s.Sqr(&square, &a.form)
		s.Affine(&scaled, &a.form, k, 2, 0)
		canInvert := s.Inverse(&inverse, &a.form)
		canDivide := s.Div(&quotient, &b.form, &a.form)
		canRoot := s.Sqrt(&root, &a.form)
		canPower := s.Exp(&power, &a.form)
		assert.Equal(t, canInvert, canDivide)
		for range 10 {
			e := point(r)
			x, y := a.at(e), b.at(e)
			holds(t, &sum, e, x+y, "sum")
			holds(t, &difference, e, x-y, "difference")
			holds(t, &product, e, x*y, "product")
			holds(t, &square, e, x*x, "square")
			holds(t, &scaled, e, k*x+2, "affine")
			if canInvert {
				holds(t, &inverse, e, 1/x, "inverse")
				holds(t, &quotient, e, y/x, "quotient")
				done["inverse"]++
			}
			if canRoot {
				holds(t, &root, e, math.Sqrt(x), "root")
				done["root"]++
			}
			if canPower {
				holds(t, &power, e, math.Exp(x), "power")
				done["power"]++
			}
			low, high := s.Bounds(&product)
			assert.True(t, low <= x*y && x*y <= high)
		}
	}
	for _, name := range []string{"inverse", "root", "power"} {
		assert.Greater(t, done[name], 3000, name)
	}
}

func TestLogarithmsOfComplexFormsEncloseSizeAndAngle(t *testing.T) {
	s := Space{symbols}
	r := rand.New(rand.NewPCG(1, 2))
	taken := 0
	for range 5000 {
		re, im := draw(r), draw(r)
		for i := range symbols { // narrower: the angle is only known about the centre
			re.form.Coef[i] *= 0.5
			im.form.Coef[i] *= 0.5
		}
		z := Complex{re.form, im.form}
		var magnitude, phase Form
		if !s.LogPolar(&magnitude, &phase, &z, 1) {
			assert.Zero(t, magnitude.Rest)
			continue
		}
		taken++
		least, most := s.Size(&z)
		var back Complex
		canPower := s.ExpPolar(&back, &magnitude, &phase)
		for range 10 {
			e := point(r)
			x := re.form.Centre
			y := im.form.Centre
			for i := range e {
				x += re.form.Coef[i] * e[i]
				y += im.form.Coef[i] * e[i]
			}
			v := complex(x, y)
			holds(t, &magnitude, e, math.Log(cmplx.Abs(v)), "magnitude")
			if canPower {
				holds(t, &back.Re, e, x, "real part of the exponential of the logarithm")
				holds(t, &back.Im, e, y, "imaginary part")
			}
			angle := cmplx.Phase(v)
			angle += 2 * math.Pi * math.Round((phase.Centre-angle)/(2*math.Pi))
			holds(t, &phase, e, angle, "phase")
			assert.True(t, least <= cmplx.Abs(v)*(1+1e-15) && cmplx.Abs(v) <= most*(1+1e-15))
		}
	}
	assert.Greater(t, taken, 1000)
}

func TestWhatCannotBeBoundedIsRefused(t *testing.T) {
	s := Space{1}
	around := Range(-1, 2, 0)
	var d Form
	assert.False(t, s.Inverse(&d, &around))
	assert.False(t, s.Sqrt(&d, &around))
	huge := Range(0, 1e4, 0)
	assert.False(t, s.Exp(&d, &huge))
	z := Complex{around, Const(0.1)}
	assert.False(t, s.LogPolar(&d, &d, &z, 1))
	zero := Complex{}
	assert.False(t, s.LogPolar(&d, &d, &zero, 1))
}

func TestDependenceIsKept(t *testing.T) {
	s := Space{1}
	x := Range(1, 3, 0)
	var d Form
	s.Sub(&d, &x, &x)
	low, high := s.Bounds(&d)
	assert.InDelta(t, 0, low, 1e-14)
	assert.InDelta(t, 0, high, 1e-14)
}

// Rounding alone: a long sum of tenths is not exact, and the enclosure must know it.
func TestRoundingIsCounted(t *testing.T) {
	s := Space{1}
	sum, tenth := Const(0), Const(0.1)
	for range 1000 {
		s.Add(&sum, &sum, &tenth)
	}
	low, high := s.Bounds(&sum)
	exact := 1000 * 0.1 // the rounded product of the same double is within one unit of the exact one
	assert.Less(t, low, exact)
	assert.Greater(t, high, exact)
	assert.Less(t, high-low, 1e-9)
}

func BenchmarkMul(b *testing.B) {
	s := Space{12}
	x, y := Range(1, 2, 0), Range(3, 4, 5)
	var d Form
	for b.Loop() {
		s.Mul(&d, &x, &y)
	}
}
