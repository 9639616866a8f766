package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/schema"
)

func TestAWaiverCoversEveryFindingOfItsRuleUpToItsLastDay(t *testing.T) {
	_, c := edited(t, "waiver-expired/renewed-beside-it")
	for _, tt := range []struct {
		today string
		holds bool
	}{{"2031-06-29", true}, {"2031-06-30", true}, {"2031-07-01", false}, {"2032-01-01", false}, {"", true}} {
		findings := Run(c, RunOptions{Today: tt.today})
		covered := only(t, findings, "spread-missing")
		assert.Equal(t, Note, covered.Severity, "its own severity stays")
		if tt.holds {
			assert.Equal(t, &Waiver{Reason: "the ramp was measured on ten boards", Until: "2031-06-30"}, covered.Waiver, tt.today)
			assert.False(t, covered.Live())
			assert.Len(t, findings, 1)
			continue
		}
		assert.True(t, covered.Live(), tt.today)
		expired := only(t, findings, "waiver-expired")
		assert.Equal(t, Error, expired.Severity)
		assert.Equal(t, "/waivers/0/until", expired.Pointer)
	}
}

func TestOfSeveralWaiversTheOneThatHoldsLongestCounts(t *testing.T) {
	findings, _ := edited(t, "waiver-expired/renewed-beside-it", "waivers:\n", "waivers:\n  - {rule: spread-missing, reason: older, until: 2030-12-31}\n  - {rule: spread-missing, reason: longest, until: 2035-12-31}\n")
	assert.Equal(t, "longest", only(t, findings, "spread-missing").Waiver.Reason)
	assert.Len(t, findings, 1, "none of the others is unused")
}

func TestARuleThatWasNotJudgedLeavesItsWaiverAlone(t *testing.T) {
	_, c := edited(t, "waiver-unused/settled-since")
	assert.Len(t, Run(c, RunOptions{Today: today}), 2)
	assert.Len(t, Run(c, RunOptions{Today: today, Without: []string{"spread-missing"}}), 1)
	assert.Empty(t, Run(c, RunOptions{Today: today, Only: []string{"duty-range", "waiver-unused"}}))
	assert.Empty(t, Run(c, RunOptions{Today: today, Only: []string{"duty-range"}}))
	c.Settings.Severities = map[string]Severity{"spread-missing": None, "phase-margin": None}
	assert.Empty(t, Run(c, RunOptions{Today: today}))
	c.Settings.Severities = map[string]Severity{"waiver-unused": Note}
	assert.Equal(t, Note, Run(c, RunOptions{Today: today})[0].Severity)
}

func TestWaivingACauseDoesNotHideWhatFollowsFromIt(t *testing.T) {
	path := reference + "/charger-buck-no-slope.converter.yaml"
	_, c := check(t, path, Settings{})
	require.Equal(t, "closed-loop-stability", only(t, Run(c, RunOptions{}), "phase-margin").Cause.Rule)
	text := string(c.Spec.Document.Text) + "waivers:\n  - {rule: closed-loop-stability, reason: a trial, until: 2031-01-01}\n"
	findings, _ := checkText(t, path, []byte(text), Settings{})
	assert.NotNil(t, only(t, findings, "closed-loop-stability").Waiver)
	margin := only(t, findings, "phase-margin")
	assert.Nil(t, margin.Cause, "it stands on its own")
	assert.True(t, margin.Live())

	text += "  - {rule: phase-margin, reason: a trial, until: 2031-01-01}\n"
	findings, _ = checkText(t, path, []byte(text), Settings{})
	margin = only(t, findings, "phase-margin")
	assert.NotNil(t, margin.Waiver)
	assert.NotNil(t, margin.Cause, "both are waived: it is listed under its cause")
}

func TestAWaiverNeedsADateThatExists(t *testing.T) {
	for _, date := range []string{"2027-02-30", "2027-13-01", "27-01-01", "tomorrow", "2027-1-1", "20270101"} {
		text := "format: 1\nwaivers:\n  - {rule: phase-margin, reason: a trial, until: " + date + "}\n"
		_, problems := schema.Validate(schema.Read("a.converter.yaml", []byte(text), 0), nil)
		found := false
		for _, p := range problems {
			found = found || p.Pointer == "/waivers/0/until"
		}
		assert.True(t, found, date)
	}
	for _, date := range []string{"2028-02-29", `"2027-03-31"`, "'2027-03-31'"} {
		text := "format: 1\nwaivers:\n  - {rule: phase-margin, reason: a trial, until: " + date + "}\n"
		_, problems := schema.Validate(schema.Read("a.converter.yaml", []byte(text), 0), nil)
		for _, p := range problems {
			assert.NotContains(t, p.Pointer, "/waivers", date)
		}
	}
}
