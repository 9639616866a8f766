package analysis_test

import (
	"context"
	"fmt"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/internal/refdata"
	"halfplane/analysis/loop"
)

// golden reads the reference designs. Source of every figure in this file: independent computation, testdata/reference/README.md,
// with the tolerances that it suggests.
func golden(t testing.TB) []refdata.Case {
	cases, err := refdata.Load()
	require.NoError(t, err)
	require.Len(t, cases, 20)
	return cases
}

// few is every fourth of the designs in short mode (the race detector's), else all of them.
func few(designs []refdata.Case) (list []refdata.Case) {
	for i, c := range designs {
		if !testing.Short() || i%4 == 0 {
			list = append(list, c)
		}
	}
	return list
}

// close compares a figure that may be null.
func within(t *testing.T, want *float64, got, tolerance float64, name string) {
	t.Helper()
	if want == nil {
		assert.True(t, math.IsNaN(got), "%s: %v, want none", name, got)
		return
	}
	assert.InDelta(t, *want, got, tolerance, name)
}

func sameLoop(t *testing.T, want *refdata.Loop, got *loop.Figures) {
	t.Helper()
	if want == nil || got == nil {
		assert.True(t, want == nil && got == nil, "loop %v, want %v", got, want)
		return
	}
	assert.Equal(t, want.Stable, got.Stable, "stable")
	if assert.Len(t, got.Crossovers, len(want.Crossovers)) {
		for i, f := range want.Crossovers {
			assert.InEpsilon(t, f, got.Crossovers[i], 1e-3, "crossover %d", i)
		}
	}
	if want.Crossover != nil {
		assert.InEpsilon(t, *want.Crossover, got.Crossover, 1e-3)
	}
	within(t, want.PhaseMargin, got.PhaseMargin, 0.05, "phase margin")
	within(t, want.GainMargin, got.GainMargin, 0.02, "gain margin")
	within(t, want.GainReductionMargin, got.GainReductionMargin, 0.02, "gain reduction margin")
	within(t, want.ModulusMargin, got.ModulusMargin, 5e-4, "modulus margin")
}

func TestEveryGoldenCornerHasItsLoopFigures(t *testing.T) {
	for _, c := range golden(t) {
		for i := range c.Corners {
			corner := &c.Corners[i]
			t.Run(c.Name+"/"+corner.Name, func(t *testing.T) {
				got, err := analysis.At(c.Design, corner.Settings())
				require.NoError(t, err)
				assert.Equal(t, corner.Mode, got.Plant.Mode.String())
				assert.InEpsilon(t, corner.Duty, got.Plant.Duty, 1e-5)
				sameLoop(t, corner.Loop, got.Loop)
			})
		}
	}
}

func TestGoldenNominalWithRipple(t *testing.T) {
	for _, c := range golden(t) {
		if c.Ripple == nil || c.Ripple.Crossover == nil {
			continue
		}
		t.Run(c.Name, func(t *testing.T) {
			got, err := analysis.At(c.Design, c.Corners[0].Settings())
			require.NoError(t, err)
			require.NotNil(t, got.Ripple)
			assert.InEpsilon(t, *c.Ripple.Crossover, got.Ripple.Crossover, 1e-3)
			within(t, c.Ripple.PhaseMargin, got.Ripple.PhaseMargin, 0.05, "phase margin")
			within(t, c.Ripple.GainMargin, got.Ripple.GainMargin, 0.02, "gain margin")
			within(t, c.Ripple.ModulusMargin, got.Ripple.ModulusMargin, 5e-4, "modulus margin")
			assert.Equal(t, c.Ripple.Stable, got.Ripple.Stable)
		})
	}
}

// The reference searched vertices, 2000 random points inside, the conduction boundary and refined locally; a search here must
// find at least as bad a corner.
func TestFullAnalysisIsAtLeastAsBadAsTheGoldenSearch(t *testing.T) {
	for _, c := range few(golden(t)) {
		t.Run(c.Name, func(t *testing.T) {
			r, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: analysis.Full})
			require.NoError(t, err)
			miss := ""
			check := func(key string, got analysis.Worst, slack float64, low bool) {
				want, ok := c.Worst[key]
				if !ok {
					return
				}
				excess := got.Value - want.Value
				if !low {
					excess = -excess
				}
				if !(excess <= slack) {
					miss += fmt.Sprintf("%s %v, golden %v; ", key, got.Value, want.Value)
				}
			}
			w := &r.Worst
			check("phase-margin", w.PhaseMargin, 0.2, true)
			check("gain-margin", w.GainMargin, 0.1, true)
			check("modulus-margin", w.ModulusMargin, 2e-3, true)
			check("rhp-zero", w.RHPZero, 1e-3*math.Abs(w.RHPZero.Value), true)
			check("crossover", w.Crossover, 1e-3*w.Crossover.Value, false)
			check("crossover-low", w.CrossoverLow, 1e-3*w.CrossoverLow.Value, true)
			check("crossover-over-rhp", w.CrossoverOverRHPZero, 1e-3*w.CrossoverOverRHPZero.Value, false)
			assert.Empty(t, miss, r.Method)
			t.Log(r.Method)
		})
	}
}
