package report

import (
	"encoding/csv"
	"io"
	"strconv"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// CSV writes one line for each finding, for a spreadsheet (RFC 4180). Consequences are there too, with their cause.
type CSV struct {
	w     *csv.Writer
	begun bool
}

// NewCSV starts a report; Close ends it.
func NewCSV(w io.Writer) *CSV { return &CSV{w: csv.NewWriter(w)} }

// File adds one file's findings.
func (c *CSV) File(f workspace.File) {
	c.head()
	for _, found := range f.Findings {
		at := schema.Position{Line: 1, Column: 1}
		if found.Doc != nil {
			at = found.Doc.Position(found.Start)
		}
		cause, until, recorded := "", "", ""
		if found.Waiver != nil {
			until = found.Waiver.Until
		}
		if found.Recorded {
			recorded = "yes"
		}
		if found.Cause != nil {
			cause = found.Cause.Rule
		}
		c.line(clean(f.Path), strconv.Itoa(at.Line), strconv.Itoa(at.Column), found.Severity.String(), found.Rule, found.Message,
			value(found.Measured), value(found.Limit), value(found.Nominal), unit(found), found.CornerWords, cause, until, recorded)
	}
}

// Close writes what is held and gives the first error of writing.
func (c *CSV) Close() error {
	c.head()
	c.w.Flush()
	return c.w.Error()
}

func (c *CSV) head() {
	if !c.begun {
		c.begun = true
		c.line("path", "line", "column", "severity", "rule", "message", "measured", "limit", "nominal", "unit", "corner", "cause", "waived-until", "recorded")
	}
}

// line writes fields that no spreadsheet takes for a formula: one that begins like one gets an apostrophe in front.
func (c *CSV) line(fields ...string) {
	for i, f := range fields {
		f = safe(f)
		if f != "" && strings.ContainsRune("=+-@", rune(f[0])) && !isNumber(f) {
			f = "'" + f
		}
		fields[i] = f
	}
	_ = c.w.Write(fields) // the writer keeps its first error
}

func isNumber(s string) bool {
	_, err := strconv.ParseFloat(s, 64)
	return err == nil
}

func value(n *rules.Number) string {
	if number(n) == nil {
		return ""
	}
	return strconv.FormatFloat(n.Value, 'g', -1, 64)
}

func unit(f rules.Finding) string {
	for _, n := range []*rules.Number{f.Measured, f.Limit, f.Nominal} {
		if n != nil {
			return n.Unit
		}
	}
	return ""
}
