package plant

import (
	"math"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// goldenCircuit is the nominal circuit of one golden design.
func goldenCircuit(t testing.TB, name string) Circuit {
	for _, g := range readGolden(t) {
		if g.Name == name {
			return circuitOf(t, g.Spec)
		}
	}
	require.Fail(t, "no such design", name)
	return Circuit{}
}

func TestSecondOrderSolveAllocatesNothingInSteadyState(t *testing.T) {
	for _, design := range []string{"beacon-boost-type3", "bench-buck-type3", "pump-flyback-type3", "paint-half-bridge"} {
		c := goldenCircuit(t, design)
		var out Solution
		require.NoError(t, Solve(&c, &out))
		assert.Zero(t, testing.AllocsPerRun(100, func() {
			if Solve(&c, &out) != nil {
				t.Fail()
			}
		}), design)
	}
}

func benchmarkSolve(b *testing.B, design string) {
	c := goldenCircuit(b, design)
	var out Solution
	b.ReportAllocs()
	for b.Loop() {
		if err := Solve(&c, &out); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkSolveSecondOrder(b *testing.B) {
	benchmarkSolve(b, "beacon-boost-type3")
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/floor(), "x-floor")
}
func BenchmarkSolveCurrentMode(b *testing.B)   { benchmarkSolve(b, "charger-buck-no-slope") }
func BenchmarkSolveTwoInductors(b *testing.B)  { benchmarkSolve(b, "winch-sepic-current-mode") }
func BenchmarkSolveFilter(b *testing.B)        { benchmarkSolve(b, "lighthouse-buck-damped-filter") }
func BenchmarkSolveDiscontinuous(b *testing.B) { benchmarkSolve(b, "railway-flyback-optocoupler") }

func BenchmarkWithRipple(b *testing.B) {
	c := goldenCircuit(b, "beacon-boost-type3")
	var out Solution
	require.NoError(b, Solve(&c, &out))
	for b.Loop() {
		if _, _, ok := WithRipple(&c, &out, func(s complex128) complex128 { return 1e4 / s }); !ok {
			b.Fatal("no result")
		}
	}
}

func BenchmarkFloor(b *testing.B) {
	for b.Loop() {
		sink = bareBoost(12, 1)
	}
}

var sink [8]float64

// floor measures the bare arithmetic in ns.
func floor() float64 {
	const n = 1 << 20
	start := time.Now()
	for i := range n {
		sink = bareBoost(12+float64(i&1), 1)
	}
	return float64(time.Since(start).Nanoseconds()) / n
}

// bareBoost is the boost's duty, poles, zeros and gain written out by hand for one fixed circuit (all losses, one bank).
//
//go:noinline
func bareBoost(vg, amps float64) (r [8]float64) {
	const v, l, c, rc, rl, ron, rd = 24, 22e-6, 440e-6, 0.00825, 0.025, 0.015, 0.012
	// V D'² − Vg D' + I (rL + Ron + (rD − Ron + rc) D' − rc D'²) = 0
	a, b, k := v-amps*rc, vg-amps*(rd-ron+rc), amps*(rl+ron)
	off := (b + math.Sqrt(b*b-4*a*k)) / (2 * a)
	d := 1 - off
	g := amps / v
	alpha := 1 / (1 + g*rc)
	i := amps / off
	a11, a12 := -(rl+d*ron+off*rd+alpha*rc*off)/l, -alpha*off/l
	a21, a22 := alpha*off/c, -alpha*g/c
	c1, c2 := alpha*rc*off, alpha
	e := -alpha * rc * i
	b1, b2 := (v+alpha*rc*(i-amps)+(rd-ron)*i)/l, -alpha*i/c
	trace, det := a11+a22, a11*a22-a12*a21
	n0 := c1*(a12*b2-a22*b1) + c2*(a21*b1-a11*b2) + e*det
	n1 := c1*b1 + c2*b2 - e*trace
	w := math.Sqrt(n1*n1 - 4*e*n0)
	q := -0.5 * (n1 + math.Copysign(w, n1))
	return [8]float64{d, trace / 2, math.Sqrt(math.Abs(trace*trace/4 - det)), q / e, n0 / q, n0 / det, i, (vg - (rl+ron)*i) / l * d * 4e-6}
}

func TestBareArithmeticOfTheBenchmarkIsTheSameSolution(t *testing.T) {
	c := goldenCircuit(t, "beacon-boost-type3")
	var out Solution
	require.NoError(t, Solve(&c, &out))
	r := bareBoost(12, 1)
	assert.InEpsilon(t, out.Duty, r[0], 1e-12)
	assert.InEpsilon(t, real(out.Control.Poles[0]), r[1], 1e-9)
	assert.InEpsilon(t, imag(out.Control.Poles[0]), r[2], 1e-9)
	assert.InEpsilon(t, out.Control.Gain, r[5], 1e-9)
	assert.InEpsilon(t, out.InductorRipple, r[7], 1e-9)
}
