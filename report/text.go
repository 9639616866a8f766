package report

import (
	"bufio"
	"fmt"
	"io"
	"slices"
	"strings"

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
	w        *bufio.Writer
	o        TextOptions
	totals   Totals
	corner   string // that was told last
	proofs   []string
	partial  int      // designs of which not every extreme was visited
	policies []string // in force for some file, each once
}

// NewText starts a report; Close ends it.
func NewText(w io.Writer, o TextOptions) *Text {
	return &Text{w: bufio.NewWriter(w), o: o}
}

// File adds one file's findings, but for those that are on record in a ledger, which are only counted. A consequence is set in under the finding that it follows from; notes on rules that the same
// reason keeps from being assessed at the same place are one block.
func (t *Text) File(f workspace.File) {
	t.totals.Add(f)
	t.proofs = append(t.proofs, proofLines(f)...)
	if f.Result != nil && !f.Result.Complete {
		t.partial++
	}
	if f.Policy != "" && !slices.Contains(t.policies, f.Policy) {
		t.policies = append(t.policies, f.Policy)
	}
	live := unrecorded(f.Findings)
	under := consequences(live)
	told := make([]bool, len(live))
	for i, found := range live {
		if causeOf(live, i) >= 0 || told[i] {
			continue
		}
		t.finding(f.Path, found, fold(live, i, told))
		for _, j := range under[i] {
			if !told[j] {
				t.consequence(f.Path, live[j], fold(live, j, told))
			}
		}
	}
}

// fold lists the rules that the note at index i and the further ones of the same place, reason and cause are about, and marks
// all of them as told; nil for any other finding.
func fold(all []rules.Finding, i int, told []bool) []string {
	told[i] = true
	first := all[i]
	if first.About == "" {
		return nil
	}
	about := []string{first.About}
	for j := i + 1; j < len(all); j++ {
		f := all[j]
		if f.About != "" && f.Reason == first.Reason && f.Pointer == first.Pointer && f.Severity == first.Severity && (f.Waiver == nil) == (first.Waiver == nil) && causeOf(all, j) == causeOf(all, i) {
			about = append(about, f.About)
			told[j] = true
		}
	}
	return about
}

// Close writes the totals and gives the first error of writing.
func (t *Text) Close() error {
	for _, line := range t.proofs {
		fmt.Fprintln(t.w, line)
	}
	if !t.o.NoSummary {
		if t.partial > 0 {
			fmt.Fprintf(t.w, "not complete: of %s not every extreme of every tolerance was visited\n", plural(t.partial, "design"))
		}
		for _, p := range t.policies {
			fmt.Fprintln(t.w, "policy "+safe(p))
		}
		fmt.Fprintln(t.w, t.totals.Words())
	}
	return t.w.Flush()
}

func (t *Text) finding(path string, f rules.Finding, about []string) {
	const indent = ""
	t.head(indent, path, f, folded(f, about))
	t.line(indent, "rule", f.Rule)
	t.list(indent, about)
	if f.Record != nil {
		t.line(indent, "record", recordWords(f.Record))
	}
	if f.Waiver != nil {
		t.line(indent, "waiver", fmt.Sprintf("until %s: %s", f.Waiver.Until, f.Waiver.Reason))
	}
	t.line(indent, "worst", f.CornerWords)
	t.corner = f.CornerWords
	for _, words := range f.Deciders {
		t.line(indent, "part", words)
	}
	t.line(indent, "mend", f.Unmended)
	for _, m := range f.Mends {
		t.line(indent, "mend", mendWords(m))
	}
	for _, r := range f.Related {
		if r.Doc != nil && r.Doc != f.Doc {
			p := r.Doc.Position(r.Start)
			t.line(indent, "see", fmt.Sprintf("%s:%d:%d: %s", r.Doc.Name, p.Line, p.Column, r.Message))
		}
	}
}

// ruleWidth is the width to which a list of rules is wrapped.
const ruleWidth = 100

// consequence writes what follows from a cause in one line, with its rule, and its corner where that is another than the one
// told last.
func (t *Text) consequence(path string, f rules.Finding, about []string) {
	const indent = "    "
	t.head(indent, path, f, folded(f, about)+" ("+f.Rule+")")
	t.list(indent, about)
	if f.CornerWords != t.corner {
		t.line(indent, "worst", f.CornerWords)
		t.corner = f.CornerWords
	}
}

// folded is a finding's message, that of several notes at once where it stands for them.
func folded(f rules.Finding, about []string) string {
	if len(about) < 2 {
		return f.Message
	}
	return fmt.Sprintf("%d rules are not assessed: %s", len(about), f.Reason)
}

// list writes the rules that a folded note is about.
func (t *Text) list(indent string, about []string) {
	if len(about) < 2 {
		return
	}
	label := "of"
	for _, part := range atCommas(strings.Join(about, ", "), ruleWidth) {
		t.line(indent, label, part)
		label = ""
	}
}

// head writes a finding's first line.
func (t *Text) head(indent, path string, f rules.Finding, message string) {
	at := schema.Position{Line: 1, Column: 1}
	if f.Doc != nil {
		at = f.Doc.Position(f.Start)
	}
	severity := t.paint(severityColor(f.Severity), f.Severity.String())
	if f.Waiver != nil { // to what reads the severity it is a note
		severity = t.paint(severityColor(rules.Note), "note") + ": waived " + f.Severity.String()
	}
	fmt.Fprintf(t.w, "%s%s: %s: %s\n", indent, t.paint("1", fmt.Sprintf("%s:%d:%d", safe(path), at.Line, at.Column)), severity, safe(message))
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
