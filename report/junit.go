package report

import (
	"encoding/xml"
	"fmt"
	"io"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// JUnit writes the XML that continuous integration reads as test results: a suite for each file, a case for each rule that applies. A finding at
// or above the gate is a failure, one below it output; a rule that could not be assessed is skipped; a file that cannot be
// read is an error. A finding that is waived or on record is skipped, with the reason.
type JUnit struct {
	w    io.Writer
	gate rules.Severity
	out  junitSuites
}

// NewJUnit starts a report; findings of at least the gate's severity are failures, with rules.None none is.
func NewJUnit(w io.Writer, gate rules.Severity) *JUnit {
	return &JUnit{w: w, gate: gate, out: junitSuites{Name: Program}}
}

type junitSuites struct {
	XMLName  xml.Name     `xml:"testsuites"`
	Name     string       `xml:"name,attr"`
	Tests    int          `xml:"tests,attr"`
	Failures int          `xml:"failures,attr"`
	Errors   int          `xml:"errors,attr"`
	Skipped  int          `xml:"skipped,attr"`
	Suites   []junitSuite `xml:"testsuite"`
}

type junitSuite struct {
	Name     string      `xml:"name,attr"`
	Tests    int         `xml:"tests,attr"`
	Failures int         `xml:"failures,attr"`
	Errors   int         `xml:"errors,attr"`
	Skipped  int         `xml:"skipped,attr"`
	Cases    []junitCase `xml:"testcase"`
}

type junitCase struct {
	Class   string      `xml:"classname,attr"`
	Name    string      `xml:"name,attr"`
	Failure []junitText `xml:"failure"`
	Error   []junitText `xml:"error"`
	Skipped *junitText  `xml:"skipped"`
	Output  string      `xml:"system-out,omitempty"`
}

type junitText struct {
	Message string `xml:"message,attr"`
	Type    string `xml:"type,attr,omitempty"`
	Text    string `xml:",chardata"`
}

// File adds one file.
func (j *JUnit) File(f workspace.File) {
	s := junitSuite{Name: safe(clean(f.Path))}
	by := map[string][]rules.Finding{}
	var order []string
	for _, found := range f.Findings {
		if by[found.Rule] == nil {
			order = append(order, found.Rule)
		}
		by[found.Rule] = append(by[found.Rule], found)
	}
	for _, o := range f.Outcomes {
		if o.Status == rules.NotApplicable {
			continue
		}
		c := j.judged(&s, f, o.Rule.Name, by[o.Rule.Name])
		if o.Status == rules.NotAssessed && len(c.Failure)+len(c.Error) == 0 {
			c.Skipped = &junitText{Message: safe(o.Reason)}
		}
		s.add(c)
		delete(by, o.Rule.Name)
	}
	for _, name := range order { // of files without outcomes, and of rules of the runner
		if list := by[name]; list != nil {
			s.add(j.judged(&s, f, name, list))
		}
	}
	j.out.Suites = append(j.out.Suites, s)
	j.out.Tests, j.out.Failures, j.out.Errors, j.out.Skipped = j.out.Tests+s.Tests, j.out.Failures+s.Failures, j.out.Errors+s.Errors, j.out.Skipped+s.Skipped
}

func (s *junitSuite) add(c junitCase) {
	s.Tests++
	switch {
	case len(c.Error) > 0:
		s.Errors++
	case len(c.Failure) > 0:
		s.Failures++
	case c.Skipped != nil:
		s.Skipped++
	}
	s.Cases = append(s.Cases, c)
}

// judged is one rule's case.
func (j *JUnit) judged(s *junitSuite, f workspace.File, rule string, list []rules.Finding) junitCase {
	c := junitCase{Class: s.Name, Name: rule}
	var output []string
	for _, found := range list {
		if why := accepted(found); why != "" && f.Status != workspace.Unreadable {
			c.Skipped = &junitText{Message: safe(why)}
			output = append(output, safeLines(whole(f, found)))
			continue
		}
		text := junitText{Message: safe(found.Message), Type: found.Severity.String(), Text: safeLines(whole(f, found))}
		switch {
		case f.Status == workspace.Unreadable:
			c.Error = append(c.Error, text)
		case found.Cause == nil && j.gate != rules.None && found.Severity >= j.gate:
			c.Failure = append(c.Failure, text)
		default:
			output = append(output, text.Text)
		}
	}
	c.Output = strings.Join(output, "\n")
	if len(c.Failure)+len(c.Error) > 0 {
		c.Skipped = nil
	}
	return c
}

// whole is a finding in lines: its place, its sentence, its corner.
func whole(f workspace.File, found rules.Finding) string {
	at := schema.Position{Line: 1, Column: 1}
	if found.Doc != nil {
		at = found.Doc.Position(found.Start)
	}
	lines := []string{fmt.Sprintf("%s:%d:%d: %s: %s", clean(f.Path), at.Line, at.Column, found.Severity, found.Message)}
	if found.CornerWords != "" {
		lines = append(lines, "worst "+found.CornerWords)
	}
	for _, words := range found.Deciders {
		lines = append(lines, "part "+words)
	}
	return strings.Join(lines, "\n")
}

// safeLines is safe for each line.
func safeLines(s string) string {
	lines := strings.Split(s, "\n")
	for i := range lines {
		lines[i] = safe(lines[i])
	}
	return strings.Join(lines, "\n")
}

// Close writes the document.
func (j *JUnit) Close() error {
	if _, err := io.WriteString(j.w, xml.Header); err != nil {
		return err
	}
	e := xml.NewEncoder(j.w)
	e.Indent("", "  ")
	if err := e.Encode(j.out); err != nil {
		return err
	}
	_, err := io.WriteString(j.w, "\n")
	return err
}
