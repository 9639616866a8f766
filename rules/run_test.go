package rules

import (
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/schema"
)

// caseOf analyses a file of the shelf.
func caseOf(t testing.TB, name string) *Case {
	t.Helper()
	_, c := check(t, shelf+"/"+name+".converter.yaml", Settings{})
	require.NotNil(t, c)
	return c
}

// edited analyses a file of the shelf after text replacements (old, new, old, new, …).
func edited(t testing.TB, name string, changes ...string) ([]Finding, *Case) {
	t.Helper()
	path := shelf + "/" + name + ".converter.yaml"
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	for i := 0; i < len(changes); i += 2 {
		require.Contains(t, string(text), changes[i])
	}
	return checkText(t, path, []byte(strings.NewReplacer(changes...).Replace(string(text))), Settings{})
}

// only gives the one finding of a rule.
func only(t testing.TB, findings []Finding, rule string) Finding {
	t.Helper()
	var of []Finding
	for _, f := range findings {
		if f.Rule == rule {
			of = append(of, f)
		}
	}
	require.Len(t, of, 1, "findings of %s", rule)
	return of[0]
}

func outcomeOf(t testing.TB, c *Case, rule string) Outcome {
	t.Helper()
	for _, o := range Outcomes(c) {
		if o.Rule.Name == rule {
			return o
		}
	}
	require.Fail(t, "no outcome of "+rule)
	return Outcome{}
}

func TestEveryRuleHasOneOfFourOutcomes(t *testing.T) {
	c := caseOf(t, "rhp-zero-crossover/crosses-too-high")
	outcomes := Outcomes(c)
	require.Len(t, outcomes, len(All()))
	assert.Equal(t, Broken, outcomeOf(t, c, "rhp-zero-crossover").Status)
	assert.Equal(t, Holds, outcomeOf(t, c, "phase-margin").Status)
	assert.Equal(t, NotApplicable, outcomeOf(t, c, "input-filter").Status)
	assert.Equal(t, NotApplicable, outcomeOf(t, c, "slope-compensation").Status)
	assert.Equal(t, NotAssessed, outcomeOf(t, caseOf(t, "divider-setpoint/no-reference"), "divider-setpoint").Status)
}

func TestARuleCanBeBrokenAndUnassessedAtOnce(t *testing.T) {
	_, c := edited(t, "not-assessed/sepic-at-light-load", "45 deg", "75 deg")
	out := outcomeOf(t, c, "phase-margin")
	assert.Equal(t, Broken, out.Status)
	assert.Contains(t, out.Reason, "no model for discontinuous conduction of a sepic")
	findings := Run(c, RunOptions{Only: []string{"phase-margin", "not-assessed"}})
	rules := []string{findings[0].Rule, findings[1].Rule}
	assert.ElementsMatch(t, []string{"phase-margin", "not-assessed"}, rules)
}

func TestPanicInsideARuleIsReportedAndTheRestStillRuns(t *testing.T) {
	c := caseOf(t, "phase-margin/target-missed")
	broken := &Rule{Name: "phase-margin", Group: Loop, Severity: Error, Reads: Declaration, Decide: func(c *Case) []Finding {
		var nothing *analysis.Corner
		return []Finding{c.atCorner("", nothing)}
	}}
	out := decide(c, broken)
	assert.Equal(t, NotAssessed, out.Status)
	assert.Contains(t, out.Panic, "nil pointer")
	assert.Regexp(t, `\(rules/[a-z]+\.go:\d+\)$`, out.Panic, "the line where it arose, without the machine's folders")

	// Through Run: a case whose analysis is missing makes every rule that reads corners fail; each says so, none stops the others.
	hollow := &Case{Spec: c.Spec, Design: c.Design, Result: &analysis.Result{}}
	findings := Run(hollow, RunOptions{})
	assert.True(t, slices.ContainsFunc(findings, func(f Finding) bool { return f.Rule == "internal" && strings.Contains(f.Message, "inductor-ripple") }))
	first := only(t, Run(hollow, RunOptions{Only: []string{"inductor-ripple", "internal"}}), "internal")
	assert.Equal(t, Error, first.Severity)
	assert.Equal(t, "format", string(first.Doc.Text[first.Start:first.End]))
}

func TestOnlyAndWithoutChooseRules(t *testing.T) {
	c := caseOf(t, "closed-loop-stability/too-much-gain")
	assert.Len(t, Run(c, RunOptions{Only: []string{"gain-margin"}}), 1)
	for _, f := range Run(c, RunOptions{Without: []string{"gain-margin"}}) {
		assert.NotEqual(t, "gain-margin", f.Rule)
	}
}

func TestMarginsFollowFromInstabilityAtTheSameCorner(t *testing.T) {
	c := caseOf(t, "closed-loop-stability/too-much-gain")
	findings := Run(c, RunOptions{})
	cause := only(t, findings, "closed-loop-stability")
	assert.Nil(t, cause.Cause)
	for _, name := range []string{"phase-margin", "gain-margin", "modulus-margin"} {
		f := only(t, findings, name)
		assert.Equal(t, &Cause{Rule: "closed-loop-stability", Pointer: "/compensator/integrator-capacitor"}, f.Cause)
		assert.Equal(t, cause.Corner, f.Corner)
		assert.True(t, slices.ContainsFunc(f.Related, func(r schema.Related) bool { return r.Start == cause.Start && r.End == cause.End }))
	}
	// Without the cause in the list there is no consequence.
	alone := only(t, Run(c, RunOptions{Only: []string{"phase-margin"}}), "phase-margin")
	assert.Nil(t, alone.Cause)
}

func TestWhatCannotBeReachedIsNotAssessedBecauseOfDutyRange(t *testing.T) {
	findings, _ := edited(t, "duty-range/out-of-reach")
	duty := only(t, findings, "duty-range")
	assert.Contains(t, duty.Message, "no duty reaches the output voltage 24.0 V")
	assert.Nil(t, duty.Measured)
	notes := 0
	for _, f := range findings {
		if f.Rule == "not-assessed" {
			notes++
			assert.Equal(t, &Cause{Rule: "duty-range", Pointer: "/modulator/duty-limit/max"}, f.Cause)
			assert.Equal(t, Note, f.Severity)
		}
	}
	assert.GreaterOrEqual(t, notes, 8)
}

func TestSettingsChangeSeverityAndThresholds(t *testing.T) {
	c := caseOf(t, "rhp-zero-crossover/crosses-too-high")
	c.Settings.Severities = map[string]Severity{"rhp-zero-crossover": Warning}
	assert.Equal(t, Warning, only(t, Run(c, RunOptions{Without: []string{"spread-missing"}}), "rhp-zero-crossover").Severity)
	c.Settings.Severities = map[string]Severity{"rhp-zero-crossover": None}
	assert.Empty(t, Run(c, RunOptions{Without: []string{"spread-missing"}}))
	c.Settings = Settings{Thresholds: map[string]float64{"rhp-zero-fraction": 1.0 / 4}}
	assert.Empty(t, Run(c, RunOptions{Without: []string{"spread-missing"}}))
	c.Settings = Settings{Thresholds: map[string]float64{"rhp-zero-fraction": 1.0 / 8}}
	f := only(t, Run(c, RunOptions{Without: []string{"spread-missing"}}), "rhp-zero-crossover")
	assert.Contains(t, f.Message, "above 1/8 of the right-half-plane zero")
}

func TestATargetReplacesADefaultButNotAStricterHouseLimit(t *testing.T) {
	for _, tt := range []struct {
		name   string
		target string
		policy map[string]float64
		want   float64 // 0: holds
	}{
		{"default", "", nil, 0},
		{"target above default", "46 deg", nil, 46},
		{"target below default", "30 deg", nil, 0},
		{"house limit without target", "", map[string]float64{"phase-margin": 50}, 50},
		{"house limit above target", "30 deg", map[string]float64{"phase-margin": 50}, 50},
		{"target above house limit", "60 deg", map[string]float64{"phase-margin": 50}, 60},
		{"lenient house limit without target", "", map[string]float64{"phase-margin": 40}, 0},
	} {
		t.Run(tt.name, func(t *testing.T) {
			change := "targets: {gain-margin"
			if tt.target != "" {
				change = "targets: {phase-margin: " + tt.target + ", gain-margin"
			}
			_, c := edited(t, "internal/healthy-boost", "targets: {phase-margin: 45 deg, gain-margin", change)
			c.Settings.Thresholds = tt.policy
			findings := Run(c, RunOptions{Only: []string{"phase-margin"}})
			if tt.want == 0 {
				assert.Empty(t, findings)
				return
			}
			assert.Equal(t, &Number{tt.want, "deg"}, only(t, findings, "phase-margin").Limit)
		})
	}
}

func TestAFindingCarriesAllThatAReaderNeeds(t *testing.T) {
	findings, c := edited(t, "rhp-zero-crossover/crosses-too-high")
	f := only(t, findings, "rhp-zero-crossover")
	assert.Equal(t, "/compensator/feedback-resistor", f.Pointer)
	assert.Equal(t, Error, f.Severity)
	assert.Contains(t, f.CornerWords, "9.00 V in, 1.50 A, inductance +20 %, capacitance −20 %, ESR 25.0 mΩ")
	assert.InEpsilon(t, c.Result.Worst.CrossoverOverRHPZero.Value, f.Measured.Value/(f.Limit.Value*5), 1e-9, "the ratio of one corner")
	assert.Equal(t, "Hz", f.Measured.Unit)
	assert.NotNil(t, f.Nominal)
	assert.Equal(t, len(c.Design.Axes), len(f.Corner))
	var words []string
	for _, r := range f.Related {
		words = append(words, r.Message)
	}
	assert.Contains(t, words, "inductance sets the right-half-plane zero")
	assert.Contains(t, strings.Join(words, "\n"), "highest crossover of all over the lowest zero of all")
}

func TestASharedValueIsReportedAtBothPlaces(t *testing.T) {
	findings, _ := edited(t, "rhp-zero-crossover/shared-compensator")
	f := only(t, findings, "rhp-zero-crossover")
	assert.Equal(t, "/compensator/use", f.Pointer)
	require.NotEmpty(t, f.Related)
	shared := f.Related[0]
	assert.True(t, strings.HasSuffix(shared.Doc.Name, "lamp.compensator.yaml"))
	assert.Equal(t, "10k ± 1 %", string(shared.Doc.Text[shared.Start:shared.End]))
}

func TestFindingsAreTheSameEveryTimeAndSorted(t *testing.T) {
	c := caseOf(t, "input-filter/unstable-with-it")
	first := Run(c, RunOptions{})
	assert.Equal(t, first, Run(c, RunOptions{}))
	assert.True(t, slices.IsSortedFunc(first, func(a, b Finding) int { return a.Start - b.Start }))
}

func TestNaNNeverPassesALimit(t *testing.T) {
	// A margin that does not exist at a stable corner holds; at an unstable one it is broken without a figure.
	c := caseOf(t, "closed-loop-stability/unstable-by-itself")
	f := only(t, Run(c, RunOptions{}), "gain-margin")
	assert.Nil(t, f.Measured)
	assert.Equal(t, "no gain margin of 8.00 dB: the closed loop is unstable", f.Message)
	low, high := crossoverLimits(caseOf(t, "crossover-range/too-low"))
	assert.Equal(t, 2e3, low)
	assert.True(t, math.IsInf(high, 1))
}
