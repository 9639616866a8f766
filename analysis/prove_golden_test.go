package analysis_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/internal/refdata"
)

// Source: independent computation, testdata/reference; its worst margins were found by a search of its own, so that a limit above one must
// be refuted and one well below must be proved.
func TestGoldenDesignsAreProvedBelowTheirWorstMarginAndRefutedAboveIt(t *testing.T) {
	covered := []string{"beacon-boost-type3", "bench-buck-type3", "lab-inverting-type3", "mast-push-pull", "paint-half-bridge",
		"plating-buck-integrator", "pump-flyback-type3", "substation-forward-feedforward"}
	cases, err := refdata.Load()
	require.NoError(t, err)
	seen := 0
	for _, c := range cases {
		if !contains(covered, c.Name) {
			continue
		}
		seen++
		t.Run(c.Name, func(t *testing.T) {
			t.Parallel()
			worst := c.Worst["phase-margin"].Value
			found, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{})
			require.NoError(t, err)
			none := math.NaN()
			for _, limit := range []float64{0.9 * worst, worst + 0.05} {
				p, err := analysis.Prove(context.Background(), c.Design, analysis.Need{PhaseMargin: limit, GainMargin: none, ModulusMargin: none}, analysis.ProveOptions{Found: found})
				require.NoError(t, err)
				k := p.PhaseMargin
				if limit > worst {
					require.Equal(t, analysis.Refuted, k.Verdict, k.Why)
					at, err := analysis.At(c.Design, k.At)
					require.NoError(t, err)
					assert.InDelta(t, k.Value, at.Loop.PhaseMargin, 1e-9)
					assert.Less(t, k.Value, limit)
					continue
				}
				require.Equal(t, analysis.Proved, k.Verdict, k.Why)
				assert.Zero(t, k.Left)
				r := rand.New(rand.NewPCG(21, 8))
				var x []analysis.Setting
				for _, a := range c.Design.Axes {
					x = append(x, analysis.Setting{Path: a.Path})
				}
				for range 500 {
					for i, a := range c.Design.Axes {
						x[i].Value = a.Min + (a.Max-a.Min)*r.Float64()
					}
					at, err := analysis.At(c.Design, x)
					require.NoError(t, err)
					require.True(t, at.Loop.Stable)
					require.GreaterOrEqual(t, at.Loop.PhaseMargin, limit)
				}
			}
		})
	}
	assert.Equal(t, len(covered), seen)
}

func contains(list []string, name string) bool {
	for _, v := range list {
		if v == name {
			return true
		}
	}
	return false
}
