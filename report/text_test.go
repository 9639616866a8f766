package report

import (
	"bytes"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

const spec = "format: 1\ntitle: µΩ° \"x\"\ninductor: {inductance: 22 µH ± 20 %, resistance: 25 mΩ}\n"

// outcome is one file with an error, its consequence, and a warning that touches a shared file.
func outcome() workspace.File {
	doc := schema.Read("shelf/a.converter.yaml", []byte(spec), 0)
	shared := schema.Read("common/c.compensator.yaml", []byte("format: 1\nfeedback-resistor: 47k\n"), 0)
	at := func(text string) (start, end int) {
		start = bytes.Index(doc.Text, []byte(text))
		return start, start + len(text)
	}
	loop := rules.Finding{
		Rule: "closed-loop-stability", Severity: rules.Error, Message: "the closed loop oscillates", Pointer: "/inductor/inductance", Doc: doc,
		Corner: []analysis.Setting{{Path: "input-voltage", Value: 9}, {Path: "load.current", Value: 1.5}}, CornerWords: "9.00 V in, 1.50 A",
		Measured: &rules.Number{Value: 4900, Unit: "Hz"}, Limit: &rules.Number{Value: 2620, Unit: "Hz"}, Formula: "fc ≤ 2.62 kHz; fc = 4.90 kHz",
	}
	loop.Start, loop.End = at("22 µH ± 20 %")
	margin := rules.Finding{
		Rule: "phase-margin", Severity: rules.Error, Message: "phase margin −5.00°", Pointer: "/inductor/resistance", Doc: doc,
		Cause: &rules.Cause{Rule: "closed-loop-stability", Pointer: "/inductor/inductance"},
	}
	margin.Start, margin.End = at("25 mΩ")
	warning := rules.Finding{
		Rule: "crossover-range", Severity: rules.Warning, Message: "with \x1b[31mred\x07 and \u202eturned\u202c", Pointer: "/title", Doc: doc,
		Related: []schema.Related{{Doc: shared, Pointer: "/feedback-resistor", Start: 29, End: 32, Message: "the value stands here"}},
	}
	warning.Start, warning.End = at("µΩ° \"x\"")
	return workspace.File{Path: "shelf/a.converter.yaml", Document: doc, Status: workspace.Checked, Findings: []rules.Finding{warning, loop, margin}}
}

func TestTextIsFileLineColumnWithConsequencesUnderTheirCause(t *testing.T) {
	var b bytes.Buffer
	require.NoError(t, TextFindings(&b, []workspace.File{outcome()}, TextOptions{}))
	assert.Equal(t, `shelf/a.converter.yaml:2:8: warning: with \x1b[31mred\x07 and \u202eturned\u202c
    rule   crossover-range
    see    common/c.compensator.yaml:2:20: the value stands here
shelf/a.converter.yaml:3:24: error: the closed loop oscillates
    rule   closed-loop-stability
    worst  9.00 V in, 1.50 A
    shelf/a.converter.yaml:3:50: error: phase margin −5.00° (phase-margin)
1 file: 1 error, 1 warning
`, b.String())
}

func TestColourOnlyWhenTold(t *testing.T) {
	var plain, colored bytes.Buffer
	require.NoError(t, TextFindings(&plain, []workspace.File{outcome()}, TextOptions{NoSummary: true}))
	require.NoError(t, TextFindings(&colored, []workspace.File{outcome()}, TextOptions{NoSummary: true, Color: true}))
	assert.NotContains(t, plain.String(), "\x1b")
	assert.NotContains(t, plain.String(), "1 file")
	assert.Contains(t, colored.String(), "\x1b[1;31merror\x1b[0m: ")
	assert.Contains(t, colored.String(), `\x1b[31mred`, "what a file says is never obeyed")
}

func TestTotalsReadAsASentence(t *testing.T) {
	for want, of := range map[string]Totals{
		"0 files: no findings":                          {},
		"1 file: no findings":                           {Files: 1},
		"3 files: 1 error, 2 warnings":                  {Files: 3, Errors: 1, Warnings: 2},
		"2 files (1 not analysed): 3 errors, 1 note":    {Files: 2, Unreadable: 1, Errors: 3, Notes: 1},
		"12 files (2 not analysed): 1 warning, 7 notes": {Files: 12, Unreadable: 2, Warnings: 1, Notes: 7},
	} {
		assert.Equal(t, want, of.Words())
	}
}

func TestCausesWithoutAFirstOneStandAlone(t *testing.T) {
	ring := []rules.Finding{
		{Rule: "a", Cause: &rules.Cause{Rule: "b"}}, {Rule: "b", Cause: &rules.Cause{Rule: "a"}},
		{Rule: "c", Cause: &rules.Cause{Rule: "c"}}, {Rule: "d", Cause: &rules.Cause{Rule: "gone"}},
	}
	for i := range ring {
		assert.Equal(t, -1, causeOf(ring, i), ring[i].Rule)
	}
	chain := []rules.Finding{{Rule: "a", Cause: &rules.Cause{Rule: "b"}}, {Rule: "b", Cause: &rules.Cause{Rule: "c"}}, {Rule: "c"}}
	assert.Equal(t, 2, causeOf(chain, 0))
	assert.Equal(t, 2, causeOf(chain, 1))
	assert.Equal(t, -1, causeOf(chain, 2))
}

func TestWhatATerminalWouldObeyIsShown(t *testing.T) {
	for in, want := range map[string]string{
		"plain µΩ° −20 %": "plain µΩ° −20 %",
		"a\nb\tc":         `a\x0ab\x09c`,
		"\x9b31m":         `\x9b31m`,
		"\u009b31m":       `\u009b31m`,
		"\ufeffx\u2028":   `\ufeffx\u2028`,
		"bad \xff utf":    `bad \xff utf`,
	} {
		assert.Equal(t, want, safe(in))
	}
}

func TestNotesForTheSameReasonAtTheSamePlaceAreOneBlock(t *testing.T) {
	f := outcome()
	note := func(about, reason string) rules.Finding {
		return rules.Finding{
			Rule: "not-assessed", Severity: rules.Note, Message: about + " is not assessed: " + reason, About: about, Reason: reason,
			Pointer: "/title", Doc: f.Document, Start: 10, End: 15,
		}
	}
	f.Findings = []rules.Finding{note("gain-margin", "no model"), note("phase-margin", "no model"), note("divider-setpoint", "reference-voltage is not given")}
	var b bytes.Buffer
	require.NoError(t, TextFindings(&b, []workspace.File{f}, TextOptions{}))
	assert.Equal(t, `shelf/a.converter.yaml:2:1: note: 2 rules are not assessed: no model
    rule   not-assessed
    of     gain-margin, phase-margin
shelf/a.converter.yaml:2:1: note: divider-setpoint is not assessed: reference-voltage is not given
    rule   not-assessed
1 file: 3 notes
`, b.String())
}
