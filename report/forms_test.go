package report

import (
	"bytes"
	"encoding/csv"
	"encoding/xml"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/rules"
	"halfplane/workspace"
)

// judged is outcome with what became of some rules.
func judged() workspace.File {
	f := outcome()
	for _, o := range []struct {
		name   string
		status rules.Status
		reason string
	}{
		{"closed-loop-stability", rules.Broken, ""}, {"phase-margin", rules.Broken, ""}, {"crossover-range", rules.Broken, ""},
		{"gain-margin", rules.Holds, ""}, {"input-filter", rules.NotApplicable, ""}, {"output-ripple", rules.NotAssessed, "esr is not given"},
	} {
		f.Outcomes = append(f.Outcomes, rules.Outcome{Rule: rules.Find(o.name), Status: o.status, Reason: o.reason})
	}
	return f
}

func unreadableFile() workspace.File {
	return workspace.File{Path: "b.converter.yaml", Status: workspace.Unreadable, Findings: []rules.Finding{{Rule: "spec-syntax", Severity: rules.Error, Message: "=SUM(A1) is no mapping"}}}
}

func TestJUnitCountsFailuresAtTheGateAndSkipsWhatCouldNotBeAssessed(t *testing.T) {
	var b bytes.Buffer
	j := NewJUnit(&b, rules.Error)
	j.File(judged())
	j.File(unreadableFile())
	require.NoError(t, j.Close())
	var got junitSuites
	require.NoError(t, xml.Unmarshal(b.Bytes(), &got))
	assert.Equal(t, [4]int{6, 1, 1, 1}, [4]int{got.Tests, got.Failures, got.Errors, got.Skipped})
	require.Len(t, got.Suites, 2)
	status := map[string]string{}
	for _, c := range got.Suites[0].Cases {
		switch {
		case len(c.Failure) > 0:
			status[c.Name] = "failure"
			assert.Equal(t, "the closed loop oscillates", c.Failure[0].Message)
			assert.Contains(t, c.Failure[0].Text, "shelf/a.converter.yaml:3:24: error: the closed loop oscillates\nworst 9.00 V in, 1.50 A")
		case c.Skipped != nil:
			status[c.Name] = "skipped: " + c.Skipped.Message
		case c.Output != "":
			status[c.Name] = "output"
		default:
			status[c.Name] = "pass"
		}
	}
	assert.Equal(t, map[string]string{
		"closed-loop-stability": "failure", "phase-margin": "output", "crossover-range": "output", "gain-margin": "pass",
		"output-ripple": "skipped: esr is not given",
	}, status)

	b.Reset()
	j = NewJUnit(&b, rules.None)
	j.File(judged())
	require.NoError(t, j.Close())
	got = junitSuites{}
	require.NoError(t, xml.Unmarshal(b.Bytes(), &got))
	assert.Zero(t, got.Failures, "nothing fails where no finding does")
}

func TestCSVHoldsOneLineForEachFindingAndNoFormula(t *testing.T) {
	var b bytes.Buffer
	c := NewCSV(&b)
	c.File(outcome())
	c.File(unreadableFile())
	require.NoError(t, c.Close())
	lines, err := csv.NewReader(&b).ReadAll()
	require.NoError(t, err)
	require.Len(t, lines, 5)
	assert.Equal(t, "path", lines[0][0])
	assert.Equal(t, []string{"shelf/a.converter.yaml", "3", "24", "error", "closed-loop-stability", "the closed loop oscillates", "4900", "2620", "", "Hz", "9.00 V in, 1.50 A", "", "", ""}, lines[2])
	assert.Equal(t, "closed-loop-stability", lines[3][11], "the cause of a consequence")
	assert.Equal(t, "'=SUM(A1) is no mapping", lines[4][5])
	assert.NotContains(t, lines[1][5], "\x1b")

	b.Reset()
	require.NoError(t, NewCSV(&b).Close())
	assert.Contains(t, b.String(), "path,line,column", "the head stands also over nothing")
}

func TestMarkdownHasATableForEachFileAndNoMarkupFromIt(t *testing.T) {
	var b bytes.Buffer
	m := NewMarkdown(&b)
	f := outcome()
	f.Findings[1].Deciders = []string{"lead-capacitor decides: 1 % less costs 0.338°"}
	f.Findings[1].Message = "the <b>loop</b> | oscillates"
	m.File(f)
	m.File(workspace.File{Path: "quiet.converter.yaml", Status: workspace.Checked})
	require.NoError(t, m.Close())
	got := b.String()
	assert.Contains(t, got, "## halfplane: 2 files: 1 error, 1 warning\n")
	assert.Contains(t, got, "| 3:24 | **error** | `closed-loop-stability` | The \\<b\\>loop\\</b\\> \\| oscillates. Lead-capacitor decides: 1 % less costs 0.338°. 1 further finding follows from it. | 9.00 V in, 1.50 A |")
	assert.NotContains(t, got, "quiet")
}
