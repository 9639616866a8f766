package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// A boost whose copper and silicon eat its lowest input: no duty gives 48 V at 6 V in and full load.
const hollowBoost = `format: 1
title: Winch brake booster
topology: boost
switching-frequency: 100 kHz
input-voltage: {min: 6 V, nominal: 16 V, max: 20 V}
output-voltage: 48 V
load: {current: {min: 0.5 A, nominal: 0.8 A, max: 1.5 A}}
inductor: {inductance: 47 uH ± 20 %, resistance: {min: 60 mΩ, nominal: 80 mΩ, max: 140 mΩ}, saturation-current: 25 A}
output-capacitor: {capacitance: 470 uF ± 20 %, esr: {min: 20 mΩ, nominal: 30 mΩ, max: 45 mΩ}}
switch: {on-resistance: 25 mΩ}
rectifier: {resistance: 10 mΩ, synchronous: true}
modulator: {scheme: voltage-mode, ramp-amplitude: 2 V ± 5 %, duty-limit: {min: 0, max: 0.85}}
compensator: {network: type-1, upper-resistor: 100k, integrator-capacitor: 1 uF}
`

func TestWhatOnlyTheEdgeOfReachBreaksFollowsFromDutyRange(t *testing.T) {
	findings, c := checkText(t, "winch.converter.yaml", []byte(hollowBoost), Settings{})
	require.NotNil(t, c)
	reach := only(t, findings, "duty-range")
	assert.Contains(t, reach.Message, "no duty reaches")
	assert.Nil(t, reach.Cause)
	consequences := 0
	for _, f := range findings {
		if f.Rule != "duty-range" && f.Severity == Error {
			require.NotNil(t, f.Cause, "%s: %s", f.Rule, f.Message)
			consequences++
		}
	}
	assert.Positive(t, consequences, "the corners beside the edge do break something")
}

func TestAnInnerLoopThatDoublesItsPeriodIsTheOneError(t *testing.T) {
	findings, _ := check(t, reference+"/charger-buck-no-slope.converter.yaml", Settings{})
	for _, f := range findings {
		switch f.Rule {
		case "slope-compensation":
			assert.Nil(t, f.Cause)
		case "amplifier-bandwidth":
			assert.Nil(t, f.Cause, "the amplifier is slow whatever the ramp")
		default:
			if Find(f.Rule).Group != Declared {
				require.NotNil(t, f.Cause, "%s: %s", f.Rule, f.Message)
			}
		}
	}
}

func TestTheOutcomesCoverEveryRuleOnce(t *testing.T) {
	_, c := check(t, reference+"/charger-buck-no-slope.converter.yaml", Settings{})
	j := Judge(c, RunOptions{})
	require.Len(t, j.Outcomes, len(All()))
	for i, rule := range All() {
		assert.Same(t, rule, j.Outcomes[i].Rule)
		assert.Equal(t, j.Outcomes[i].Status == Broken, broken(j.Findings, rule) != nil, rule.Name)
	}
	assert.Len(t, Judge(c, RunOptions{Only: []string{"phase-margin"}}).Outcomes, 1)
}
