package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/schema"
)

const station = `format: 1
severity: {spread-missing: none, conduction-mode: warning}
thresholds: {rhp-zero-fraction: 1/4, phase-margin: 50 deg, ripple-band: {min: 0.1, max: 0.7}, setpoint-tolerance: 3 %}
paths:
  - match: "legacy/**"
    severity: {spread-missing: note, phase-margin: warning}
    thresholds: {phase-margin: 40 deg}
  - match: "legacy/boats/*.yaml"
    severity: {phase-margin: none}
`

func TestLaterPathsWinAndOthersKeepWhatHoldsForAll(t *testing.T) {
	doc := schema.Read("halfplane.yaml", []byte(station), 0)
	_, problems := schema.Validate(doc, nil)
	require.Empty(t, problems)

	all := PolicySettings(doc, "buoys/lamp.converter.yaml")
	assert.Equal(t, map[string]Severity{"spread-missing": None, "conduction-mode": Warning}, all.Severities)
	assert.Equal(t, map[string]float64{"rhp-zero-fraction": 0.25, "phase-margin": 50, "ripple-band.min": 0.1, "ripple-band.max": 0.7, "setpoint-tolerance": 0.03}, all.Thresholds)

	legacy := PolicySettings(doc, "legacy/deep/lamp.converter.yaml")
	assert.Equal(t, Note, legacy.Severities["spread-missing"])
	assert.Equal(t, Warning, legacy.Severities["phase-margin"])
	assert.Equal(t, 40.0, legacy.Thresholds["phase-margin"])
	assert.Equal(t, 0.25, legacy.Thresholds["rhp-zero-fraction"])

	boats := PolicySettings(doc, "legacy/boats/lamp.converter.yaml")
	assert.Equal(t, None, boats.Severities["phase-margin"])
	assert.Equal(t, 40.0, boats.Thresholds["phase-margin"])
}

// Every key that the policy's schema allows is one that some rule reads, by the same name, or a two-sided one by its ends.
func TestEveryThresholdOfARuleCanBeSet(t *testing.T) {
	for _, r := range All() {
		for _, limit := range r.Policy {
			key := limit.Key
			for _, end := range []string{".min", ".max"} {
				if len(key) > len(end) && key[len(key)-len(end):] == end {
					key = key[:len(key)-len(end)]
				}
			}
			_, known := schema.LookupField(schema.Policy, "/thresholds/"+key)
			assert.True(t, known, "%s of %s", limit.Key, r.Name)
		}
	}
}
