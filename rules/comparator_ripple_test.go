package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestTheHighestESRDecidesTheMarginWithRipple(t *testing.T) {
	c := caseOf(t, "comparator-ripple/highest-esr-only")
	f := only(t, Run(c, RunOptions{}), "comparator-ripple")
	require.NotNil(t, f.Measured)
	averaged := c.Result.Corners[c.Result.Worst.PhaseMargin.Corner]
	assert.Less(t, f.Measured.Value, averaged.Ripple.PhaseMargin-1, "lower than where the averaged margin is worst")
	for _, s := range f.Corner {
		if s.Path == "output-capacitor.esr" {
			assert.Equal(t, 0.025, s.Value)
		}
	}
}
