package rules

import (
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// planted are the defects of the one reference design that has any (testdata/reference/README.md), with what follows from
// them: an inner loop that is unstable peaks at half the switching frequency.
var planted = map[string]Severity{
	"slope-compensation": Error, "closed-loop-stability": Error, "phase-margin": Error, "gain-margin": Error, "modulus-margin": Warning,
	"switching-crossover": Warning, "several-crossovers": Warning, "amplifier-bandwidth": Note,
	"spread-missing": Note, // of the sense gain
}

// warned are the warnings that healthy reference designs deserve: the damped input filter of the lamp regulator comes within
// 4.4 dB of the converter's input impedance at light load, and the house limit is 6 dB.
var warned = map[string][]string{"lighthouse-buck-damped-filter": {"input-filter"}}

func TestReferenceDesignsGetWhatIsPlantedInThem(t *testing.T) {
	files, err := filepath.Glob(reference + "/*.converter.yaml")
	require.NoError(t, err)
	require.Len(t, files, 20)
	for _, path := range files {
		name := strings.TrimSuffix(filepath.Base(path), ".converter.yaml")
		t.Run(name, func(t *testing.T) {
			findings, c := check(t, path, Settings{})
			require.NotNil(t, c)
			if name == "charger-buck-no-slope" {
				got := map[string]Severity{}
				for _, f := range findings {
					got[f.Rule] = f.Severity
				}
				assert.Equal(t, planted, got)
				assert.Equal(t, "closed-loop-stability", only(t, findings, "phase-margin").Cause.Rule)
				assert.InDelta(t, 0.345, only(t, findings, "slope-compensation").Measured.Value, 5e-4, "README: mc D' = 0.345")
				return
			}
			for _, f := range findings {
				assert.True(t, f.Severity == Note || f.Severity == Warning && slices.Contains(warned[name], f.Rule), "%s: %s: %s", f.Rule, f.Severity, f.Message)
				assert.NotEqual(t, "not-assessed", f.Rule)
			}
		})
	}
}
