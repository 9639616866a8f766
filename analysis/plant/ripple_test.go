package plant

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// networkOf writes a golden design's compensator straight from the table of spec-format.md (type-1 and type-3 with and without amplifier data).
func networkOf(t *testing.T, spec tree) func(complex128) complex128 {
	n := child(spec, "compensator")
	q := func(key string) complex128 { return complex(nominal(t, n[key]), 0) }
	r1, rl, r2, r3 := q("upper-resistor"), q("lower-resistor"), q("feedback-resistor"), q("lead-resistor")
	c1, c2, c3 := q("integrator-capacitor"), q("rolloff-capacitor"), q("lead-capacitor")
	amplifier := child(n, "amplifier")
	return func(s complex128) complex128 {
		yi := 1 / r1
		if c3 != 0 {
			yi += 1 / (r3 + 1/(s*c3))
		}
		zf := 1 / (1/(r2+1/(s*c1)) + s*c2)
		h := zf * yi
		if amplifier != nil {
			bandwidth := complex(2*math.Pi*nominal(t, amplifier["gain-bandwidth"]), 0)
			gain := decibels(t, text(amplifier, "open-loop-gain"))
			a := gain / (1 + s*gain/bandwidth)
			noise := yi
			if rl != 0 {
				noise += 1 / rl
			}
			h /= 1 + (1+zf*noise)/a
		}
		return h
	}
}

func decibels(t *testing.T, text string) complex128 {
	db := nominal(t, strings.TrimSuffix(text, " dB"))
	return complex(math.Pow(10, db/20), 0)
}

// Source: independent computation, testdata/reference, "ripple-corrected-nominal"; the crossover there makes |T| = 1 and the margin its phase.
func TestRippleAtTheComparatorOfGoldenDesigns(t *testing.T) {
	tested := 0
	for _, g := range readGolden(t) {
		kind := text(child(g.Spec, "compensator"), "network")
		if g.Ripple == nil || (kind != "type-1" && kind != "type-3") {
			continue
		}
		tested++
		t.Run(g.Name, func(t *testing.T) {
			c := circuitOf(t, g.Spec)
			var out Solution
			require.NoError(t, Solve(&c, &out))
			network := networkOf(t, g.Spec)
			s := Reflect(&c)
			x := s.steady(out.Duty)
			r := s.comparatorRipple(&c, &x, s.average(&x), network)
			near(t, g.Ripple, "ripple-at-turn-off", r.at, 1e-4)

			control, factor, ok := WithRipple(&c, &out, network)
			require.True(t, ok)
			loop := func(w float64) complex128 {
				jw := complex(0, w)
				return network(jw) * complex(out.ModulatorGain, 0) * control.Eval(jw) * cmplx.Exp(-jw*complex(c.Modulator.Delay, 0))
			}
			crossover, _ := figure(g.Ripple, "crossover")
			margin, _ := figure(g.Ripple, "phase-margin")
			T := loop(2 * math.Pi * crossover)
			assert.InDelta(t, 1, cmplx.Abs(T), 1e-3)
			assert.InDelta(t, margin, 180+cmplx.Phase(T)*180/math.Pi, 0.05)
			// At high frequency only the scaling remains.
			high := 1e4 * out.FilterFrequency
			assert.InEpsilon(t, factor, cmplx.Abs(control.At(high)/out.Control.At(high)), 1e-3)
		})
	}
	assert.Equal(t, 10, tested)
}

// Source: theory.md section 11, checked there against an exact switched simulation: this boost oscillates although the averaged margin is 46.7°.
func TestRippleTurnsAnAmplePhaseMarginNegative(t *testing.T) {
	for _, g := range readGolden(t) {
		if g.Name != "beacon-boost-type3" {
			continue
		}
		spec := g.Spec
		spec["output-capacitor"].(tree)["esr"] = 0.0165
		spec["rectifier"] = tree{"forward-drop": "0.45 V"}
		for key, v := range map[string]any{"feedback-resistor": "10k", "integrator-capacitor": "47n", "rolloff-capacitor": "220p",
			"lead-resistor": "1k", "lead-capacitor": "1n", "amplifier": tree{"gain-bandwidth": "3 MHz", "open-loop-gain": "80 dB"}} {
			spec["compensator"].(tree)[key] = v
		}
		c := circuitOf(t, spec)
		margins := func() (averaged, rippled float64) {
			var out Solution
			require.NoError(t, Solve(&c, &out))
			network := networkOf(t, spec)
			control, _, ok := WithRipple(&c, &out, network)
			require.True(t, ok)
			phase := func(plant func(float64) complex128) float64 {
				at := func(w float64) complex128 { return network(complex(0, w)) * complex(out.ModulatorGain, 0) * plant(w) }
				low, high := 1e3, 1e5
				for range 100 {
					if mid := math.Sqrt(low * high); cmplx.Abs(at(mid)) > 1 {
						low = mid
					} else {
						high = mid
					}
				}
				return 180 + cmplx.Phase(at(low))*180/math.Pi
			}
			averaged, rippled = phase(out.Control.At), phase(control.At)
			return averaged, rippled - 360*math.Round(rippled/360)
		}
		averaged, rippled := margins()
		assert.InDelta(t, 46.7, averaged, 0.06)
		assert.InDelta(t, -0.9, rippled, 0.06)
		c.Banks[0].ESR = 0.012
		averaged, rippled = margins()
		assert.InDelta(t, 45.8, averaged, 0.06)
		assert.InDelta(t, 11.1, rippled, 0.06)
		return
	}
	t.Fatal("the design is missing")
}

func TestRippleDoesNotApplyInCurrentModeAndDiscontinuousConduction(t *testing.T) {
	for _, g := range readGolden(t) {
		c := circuitOf(t, g.Spec)
		var out Solution
		require.NoError(t, Solve(&c, &out))
		if c.Modulator.Scheme == PeakCurrentMode || out.Mode == Discontinuous {
			_, _, ok := WithRipple(&c, &out, func(complex128) complex128 { return 1 })
			assert.False(t, ok, g.Name)
		}
	}
}
