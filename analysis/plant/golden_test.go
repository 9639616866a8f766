package plant

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// Source of all figures here: independent computation, testdata/reference (NumPy state-space models); tolerances from its README.

func TestEveryGoldenCornerOfThePlant(t *testing.T) {
	for _, g := range readGolden(t) {
		t.Run(g.Name, func(t *testing.T) {
			var out Solution // reused on purpose: nothing of one corner may reach the next
			for _, corner := range g.Corners {
				t.Run(strings.ReplaceAll(corner.Name, ", ", "_"), func(t *testing.T) {
					c := circuitOf(t, g.Spec)
					assign(t, &c, corner.At)
					require.NoError(t, Solve(&c, &out))
					compareCorner(t, &c, &corner, &out)
				})
			}
		})
	}
}

// near asserts a figure within a relative tolerance; a null in the golden file means NaN here.
func near(t *testing.T, n tree, path string, got, tolerance float64) {
	t.Helper()
	want, ok := figure(n, path)
	if !ok {
		assert.True(t, math.IsNaN(got), "%s: %v where no figure exists", path, got)
		return
	}
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		assert.Fail(t, "figure differs", "%s: got %.9g, want %.9g (%.2g relative)", path, got, want, got/want-1)
	}
}

func compareCorner(t *testing.T, c *Circuit, corner *goldenCorner, out *Solution) {
	f := corner.Figures
	assert.Equal(t, corner.Mode, out.Mode.String())
	near(t, f, "duty", out.Duty, 1e-6)
	near(t, f, "turns-ratio", out.TurnsRatio, 1e-8)
	near(t, f, "effective-inductance", out.EffectiveInductance, 1e-8)
	near(t, f, "inductor-current", out.InductorCurrent, 1e-5)
	near(t, f, "inductor-ripple", out.InductorRipple, 1e-5)
	near(t, f, "second-inductor-current", out.SecondCurrent, 1e-5)
	near(t, f, "second-inductor-ripple", out.SecondRipple, 1e-5)
	near(t, f, "plant.control-gain", out.ControlGain, 1e-5)
	near(t, f, "plant.line-gain", out.LineGain, 1e-5)
	near(t, f, "plant.output-resistance", out.OutputResistance, 1e-5)
	near(t, f, "plant.resonance", out.Resonance, 1e-4)
	near(t, f, "plant.quality", out.Quality, 1e-4)
	near(t, f, "plant.esr-zero", out.ESRZero, 1e-4)
	near(t, f, "plant.rhp-zero", out.RHPZero, 1e-4)
	sameRoots(t, "poles", child(f, "plant")["poles"], out.Control.Poles)
	sameRoots(t, "zeros", child(f, "plant")["zeros"], out.Control.Zeros)
	if _, ok := f["ideal"]; ok { // only the operating corners carry it
		compareIdeal(t, c, f)
	}
	if want, ok := f["current-loop"].(tree); ok {
		require.NotNil(t, out.Current)
		near(t, want, "on-slope", out.Current.OnSlope, 1e-5)
		near(t, want, "external-slope", out.Current.ExternalSlope, 1e-8)
		near(t, want, "slope-ratio", out.Current.SlopeRatio, 1e-5)
		near(t, want, "mc-times-off-duty", out.Current.OffDutyProduct, 1e-5)
		near(t, want, "sampling-quality", out.Current.HalfFrequencyQuality, 1e-4)
	} else {
		assert.Nil(t, out.Current)
	}
	if want, ok := f["input-filter"].(tree); ok {
		require.NotNil(t, out.Input)
		// The golden ratios are the highest of a frequency grid; ours are the refined maxima, so never below and a little above.
		near(t, want, "zo-over-zn", out.Input.ZoOverZn, 5e-4)
		near(t, want, "zo-over-zd", out.Input.ZoOverZd, 5e-4)
		sampled, _ := figure(want, "zo-over-zd")
		assert.GreaterOrEqual(t, out.Input.ZoOverZd, sampled*(1-1e-6))
	} else if c.Filter.Capacitance == 0 {
		assert.Nil(t, out.Input)
	}
}

func compareIdeal(t *testing.T, c *Circuit, f tree) {
	ideal := IdealOf(c)
	near(t, f, "ideal.duty", ideal.Duty, 1e-7)
	near(t, f, "ideal.control-gain", ideal.ControlGain, 1e-7)
	near(t, f, "ideal.line-gain", ideal.LineGain, 1e-7)
	near(t, f, "ideal.resonance", ideal.Resonance, 1e-7)
	near(t, f, "ideal.quality", ideal.Quality, 1e-7)
	near(t, f, "ideal.rhp-zero", ideal.RHPZero, 1e-7)
	near(t, f, "ideal.esr-zero", ideal.ESRZero, 1e-7)
	if !c.Topology.HasDutyPeak() {
		// The golden files write 1 for "no peak".
		assert.True(t, math.IsNaN(DutyPeak(c)))
		return
	}
	near(t, f, "duty-peak", DutyPeak(c), 1e-6)
}

func sameRoots(t *testing.T, what string, want any, got []complex128) {
	t.Helper()
	w, g := roots(want), sorted(got)
	if !assert.Len(t, g, len(w), "%s: got %v, want %v", what, g, w) {
		return
	}
	for i := range w {
		if !(cmplx.Abs(g[i]-w[i]) <= 1e-4*cmplx.Abs(w[i])) {
			assert.Fail(t, "root differs", "%s: got %v, want %v", what, g, w)
			return
		}
	}
}

// The golden files give the boundary for synchronous designs too, where it has no effect; the exported figure is NaN there.
func TestCriticalCurrentOfGoldenDesigns(t *testing.T) {
	for _, g := range readGolden(t) {
		c := circuitOf(t, g.Spec)
		synchronous := c.Synchronous
		if synchronous {
			assert.True(t, math.IsNaN(CriticalCurrent(&c)))
			c.Synchronous = false
		}
		assert.InEpsilon(t, g.CriticalCurrent, CriticalCurrent(&c), 1e-6, g.Name)
	}
}
