package report

import (
	"bufio"
	"fmt"
	"io"
	"strings"

	"halfplane/workspace"
)

// MarkdownComparison writes comparisons as a review comment: first what fell and what moved in one table, then what explains
// it, folded.
type MarkdownComparison struct {
	w       *bufio.Writer
	before  string
	after   string
	totals  ComparisonTotals
	rows    []string
	details []string
}

// NewMarkdownComparison starts a comment on what stands on both sides.
func NewMarkdownComparison(w io.Writer, before, after string) *MarkdownComparison {
	return &MarkdownComparison{w: bufio.NewWriter(w), before: before, after: after}
}

// Design adds one design.
func (m *MarkdownComparison) Design(c workspace.Comparison) {
	m.totals.Add(&c)
	if c.Change == workspace.Unchanged {
		return
	}
	name := cell(clean(c.Path))
	if c.From != "" {
		name += " (was " + cell(clean(c.From)) + ")"
	}
	rows := 0
	for _, f := range c.Figures {
		if !told(f) {
			continue
		}
		rows++
		cause := cell(shareWords(&c, f))
		m.rows = append(m.rows, fmt.Sprintf("| %s | %s | %s | %s | %s | %s | %s |\n", name, figureName(f.Figure), boundText(f.Before), boundText(f.After), limitText(f.After), verdictMark(f), cause))
		name = ""
	}
	if rows == 0 {
		m.rows = append(m.rows, fmt.Sprintf("| %s | | | | | %s | |\n", name, cell(headline(&c))))
	}
	m.detail(&c)
}

func verdictMark(f workspace.FigureChange) string {
	if f.Verdict == workspace.Fell {
		return "**fell**"
	}
	return verdictWord(f)
}

// detail is what is folded away: the corners, and the findings that came and went.
func (m *MarkdownComparison) detail(c *workspace.Comparison) {
	var b strings.Builder
	for _, f := range c.Figures {
		if f.After != nil && f.After.CornerWords != "" && told(f) {
			fmt.Fprintf(&b, "- %s is worst at %s\n", figureName(f.Figure), cell(f.After.CornerWords))
		}
	}
	for _, f := range c.Appeared {
		if f.Cause == nil {
			fmt.Fprintf(&b, "- new %s `%s`: %s\n", mark(f.Severity), f.Rule, cell(f.Message))
		}
	}
	for _, f := range c.Gone {
		if f.Cause == nil {
			fmt.Fprintf(&b, "- gone %s `%s`: %s\n", f.Severity, f.Rule, cell(f.Message))
		}
	}
	for _, f := range unreadFindings(c) {
		fmt.Fprintf(&b, "- %s `%s`: %s\n", mark(f.Severity), f.Rule, cell(f.Message))
	}
	if b.Len() > 0 {
		m.details = append(m.details, fmt.Sprintf("\n<details><summary>%s: %s</summary>\n\n%s\n</details>\n", cell(clean(c.Path)), cell(headline(c)), b.String()))
	}
}

// Close writes the comment.
func (m *MarkdownComparison) Close() error {
	fmt.Fprintf(m.w, "## halfplane: %s → %s\n\n%s\n", cell(m.before), cell(m.after), capital(m.totals.Words())+".")
	if len(m.rows) > 0 {
		fmt.Fprintf(m.w, "\n| design | figure | before | after | limit | | because of |\n| --- | --- | ---: | ---: | ---: | --- | --- |\n%s", strings.Join(m.rows, ""))
	}
	for _, d := range m.details {
		m.w.WriteString(d)
	}
	return m.w.Flush()
}
