package report

import (
	"bufio"
	"fmt"
	"io"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// TextOptions say how findings are set as text.
type TextOptions struct {
	Color     bool // with the terminal's colours
	NoSummary bool // findings only, without the line of totals at the end
}

// TextFindings writes the findings of the files in the GNU form file:line:column: and the totals.
func TextFindings(w io.Writer, files []workspace.File, o TextOptions) error {
	t := NewText(w, o)
	for _, f := range files {
		t.File(f)
	}
	return t.Close()
}

// Text writes findings file by file.
type Text struct {
	w      *bufio.Writer
	o      TextOptions
	totals Totals
}

// NewText starts a report; Close ends it.
func NewText(w io.Writer, o TextOptions) *Text {
	return &Text{w: bufio.NewWriter(w), o: o}
}

// File adds one file's findings. A consequence is set in under the finding that it follows from.
func (t *Text) File(f workspace.File) {
	t.totals.Add(f)
	under := consequences(f.Findings)
	for i, found := range f.Findings {
		if causeOf(f.Findings, i) >= 0 {
			continue
		}
		t.finding(f.Path, found, "")
		for _, j := range under[i] {
			t.finding(f.Path, f.Findings[j], "    ")
		}
	}
}

// Close writes the totals and gives the first error of writing.
func (t *Text) Close() error {
	if !t.o.NoSummary {
		fmt.Fprintln(t.w, t.totals.Words())
	}
	return t.w.Flush()
}

func (t *Text) finding(path string, f rules.Finding, indent string) {
	at := schema.Position{Line: 1, Column: 1}
	if f.Doc != nil {
		at = f.Doc.Position(f.Start)
	}
	fmt.Fprintf(t.w, "%s%s: %s: %s\n", indent,
		t.paint("1", fmt.Sprintf("%s:%d:%d", safe(path), at.Line, at.Column)),
		t.paint(severityColor(f.Severity), f.Severity.String()), safe(f.Message))
	t.line(indent, "rule", f.Rule)
	t.line(indent, "worst", f.CornerWords)
	for _, r := range f.Related {
		if r.Doc != nil && r.Doc != f.Doc {
			p := r.Doc.Position(r.Start)
			t.line(indent, "see", fmt.Sprintf("%s:%d:%d: %s", r.Doc.Name, p.Line, p.Column, r.Message))
		}
	}
}

// line writes one of the indented lines under a finding; an empty one is left out.
func (t *Text) line(indent, label, text string) {
	if text != "" {
		fmt.Fprintf(t.w, "%s    %s %s\n", indent, t.paint("2", fmt.Sprintf("%-6s", label)), safe(text))
	}
}

// paint puts an SGR sequence (ECMA-48) around s where colours are wanted.
func (t *Text) paint(sgr, s string) string {
	if !t.o.Color {
		return s
	}
	return "\x1b[" + sgr + "m" + s + "\x1b[0m"
}

func severityColor(s rules.Severity) string {
	switch s {
	case rules.Error:
		return "1;31"
	case rules.Warning:
		return "1;33"
	}
	return "1;36"
}

// consequences maps the index of a finding to those of its consequences, in order.
func consequences(all []rules.Finding) map[int][]int {
	under := map[int][]int{}
	for j := range all {
		if i := causeOf(all, j); i >= 0 {
			under[i] = append(under[i], j)
		}
	}
	return under
}

// causeOf is the index of the finding that finding j follows from in the end, −1 where there is none in the list.
func causeOf(all []rules.Finding, j int) int {
	at := j
	for range all { // no chain of causes is longer than the list
		next := -1
		for i, c := range all {
			if cause := all[at].Cause; cause != nil && c.Rule == cause.Rule && c.Pointer == cause.Pointer {
				next = i
				break
			}
		}
		if next == j {
			return -1 // a ring of causes has no first one
		}
		if next < 0 {
			break
		}
		at = next
	}
	if at == j {
		return -1
	}
	return at
}
