package report

import (
	"bufio"
	"fmt"
	"io"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// Markdown writes findings as a review comment: the totals, then a table for each file that has any. Consequences are counted under their
// cause.
type Markdown struct {
	w      *bufio.Writer
	totals Totals
	files  []string
	waived []string
}

// NewMarkdown starts a report; Close ends it.
func NewMarkdown(w io.Writer) *Markdown { return &Markdown{w: bufio.NewWriter(w)} }

// File adds one file.
func (m *Markdown) File(f workspace.File) {
	m.totals.Add(f)
	live := unrecorded(f.Findings)
	under := consequences(live)
	var b strings.Builder
	for i, found := range live {
		if found.Waiver != nil {
			m.waived = append(m.waived, fmt.Sprintf("- `%s` in %s until %s: %s. Reason: %s\n", found.Rule, cell(clean(f.Path)), cell(found.Waiver.Until), cell(found.Message), cell(found.Waiver.Reason)))
			continue
		}
		if causeOf(live, i) >= 0 {
			continue
		}
		at := schema.Position{Line: 1, Column: 1}
		if found.Doc != nil {
			at = found.Doc.Position(found.Start)
		}
		words := capital(found.Message) + "."
		for _, d := range found.Deciders {
			words += " " + capital(d) + "."
		}
		if n := len(under[i]); n > 0 {
			words += fmt.Sprintf(" %s from it.", follow(n))
		}
		fmt.Fprintf(&b, "| %d:%d | %s | `%s` | %s | %s |\n", at.Line, at.Column, mark(found.Severity), found.Rule, cell(words), cell(found.CornerWords))
	}
	if b.Len() > 0 {
		m.files = append(m.files, fmt.Sprintf("\n### %s\n\n| place | severity | rule | finding | worst |\n| --- | --- | --- | --- | --- |\n%s", cell(clean(f.Path)), b.String()))
	}
}

// Close writes the document.
func (m *Markdown) Close() error {
	fmt.Fprintf(m.w, "## halfplane: %s\n", m.totals.Words())
	for _, f := range m.files {
		m.w.WriteString(f)
	}
	if len(m.waived) > 0 {
		fmt.Fprintf(m.w, "\n<details><summary>%s waived on record</summary>\n\n%s\n</details>\n", plural(len(m.waived), "finding"), strings.Join(m.waived, ""))
	}
	return m.w.Flush()
}

func follow(n int) string {
	if n == 1 {
		return "1 further finding follows"
	}
	return fmt.Sprintf("%d further findings follow", n)
}

func mark(s rules.Severity) string {
	if s == rules.Error {
		return "**error**"
	}
	return s.String()
}

func capital(s string) string {
	if s == "" || s[0] < 'a' || s[0] > 'z' {
		return s
	}
	return string(s[0]-'a'+'A') + s[1:]
}

// cell is a text in a table's cell: nothing in it is markup.
func cell(s string) string {
	var b strings.Builder
	for _, r := range safe(s) {
		if strings.ContainsRune("\\`*_{}[]<>|#!~&", r) {
			b.WriteByte('\\')
		}
		b.WriteRune(r)
	}
	return b.String()
}
