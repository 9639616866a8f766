package main

import (
	"bytes"
	"testing"

	"github.com/stretchr/testify/assert"

	"halfplane/rules"
	"halfplane/workspace"
)

func TestStatusOfAFile(t *testing.T) {
	of := func(severities ...rules.Severity) []rules.Finding {
		var out []rules.Finding
		for _, s := range severities {
			out = append(out, rules.Finding{Severity: s})
		}
		return out
	}
	for _, c := range []struct {
		name   string
		file   workspace.File
		failAt string
		want   status
	}{
		{"nothing", workspace.File{Status: workspace.Checked}, "note", clean},
		{"a note below the gate", workspace.File{Status: workspace.Checked, Findings: of(rules.Note)}, "warning", clean},
		{"a note at the gate", workspace.File{Status: workspace.Checked, Findings: of(rules.Note)}, "note", found},
		{"a warning below the gate", workspace.File{Status: workspace.Checked, Findings: of(rules.Warning, rules.Note)}, "error", clean},
		{"an error above the gate", workspace.File{Status: workspace.Checked, Findings: of(rules.Note, rules.Error)}, "warning", found},
		{"no gate", workspace.File{Status: workspace.Checked, Findings: of(rules.Error)}, "never", clean},
		{"not read, no gate", workspace.File{Status: workspace.Unreadable, Findings: of(rules.Error)}, "never", usage},
		{"the program failed", workspace.File{Status: workspace.Checked, Defect: true}, "never", defect},
		{"the program failed on what it could not read", workspace.File{Status: workspace.Unreadable, Defect: true}, "error", defect},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, (&checkCommand{failAt: &choice{value: c.failAt}}).statusOf(c.file))
		})
	}
}

// failingOutput stands for a program that fails where nobody expected it.
type failingOutput struct{ cause any }

func (f failingOutput) Write([]byte) (int, error) { panic(f.cause) }

func TestAFailureOfTheProgramIsSaidAndExitsThree(t *testing.T) {
	var errs bytes.Buffer
	assert.Equal(t, int(defect), run([]string{"rule"}, nil, failingOutput{"a wrong index"}, &errs))
	assert.Contains(t, errs.String(), "defect of the program")
	assert.Contains(t, errs.String(), "a wrong index")
	assert.Contains(t, errs.String(), "please report it")
}

func TestVerdictOnAnExhibit(t *testing.T) {
	planted := exhibit{file: "x", rule: "phase-margin"}
	healthy := exhibit{file: "y"}
	margin := rules.Finding{Rule: "phase-margin", Severity: rules.Error}
	other := rules.Finding{Rule: "gain-margin", Severity: rules.Warning}
	note := rules.Finding{Rule: "preferred-value", Severity: rules.Note}
	follows := rules.Finding{Rule: "gain-margin", Severity: rules.Error, Cause: &rules.Cause{Rule: "phase-margin"}}
	for _, c := range []struct {
		name     string
		of       exhibit
		findings []rules.Finding
		want     bool
	}{
		{"found", planted, []rules.Finding{margin}, true},
		{"found with a note", planted, []rules.Finding{margin, note}, true},
		{"found with what follows from it", planted, []rules.Finding{margin, follows}, true},
		{"not found", planted, nil, false},
		{"found with something else", planted, []rules.Finding{margin, other}, false},
		{"healthy", healthy, []rules.Finding{note}, true},
		{"healthy and something found", healthy, []rules.Finding{other}, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, ok := c.of.verdict(workspace.File{Findings: c.findings})
			assert.Equal(t, c.want, ok)
		})
	}
	_, ok := healthy.verdict(workspace.File{Defect: true})
	assert.False(t, ok, "the program failed")
}
