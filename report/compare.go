package report

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"strings"

	"halfplane/rules"
	"halfplane/workspace"
)

// ComparisonTotals counts what became of the designs.
type ComparisonTotals struct {
	Designs    int `json:"designs"`
	Changed    int `json:"changed"`
	Unchanged  int `json:"unchanged"`
	Added      int `json:"added"`
	Removed    int `json:"removed"`
	Unreadable int `json:"unreadable"`
	Fell       int `json:"fell"`      // margins that fell through their target
	Recovered  int `json:"recovered"` // margins that are met now
	Unstable   int `json:"unstable"`  // designs whose loop became unstable
}

// Add counts one design.
func (t *ComparisonTotals) Add(c *workspace.Comparison) {
	t.Designs++
	switch c.Change {
	case workspace.Changed:
		t.Changed++
	case workspace.Unchanged:
		t.Unchanged++
	case workspace.Added:
		t.Added++
	case workspace.Removed:
		t.Removed++
	case workspace.Incomparable:
		t.Unreadable++
	}
	for _, f := range c.Figures {
		switch f.Verdict {
		case workspace.Fell:
			t.Fell++
		case workspace.Recovered:
			t.Recovered++
		}
	}
	if becameUnstable(c) {
		t.Unstable++
	}
}

func becameUnstable(c *workspace.Comparison) bool {
	return c.Change == workspace.Changed && c.Before.Stable && !c.After.Stable
}

// Words is the line of totals.
func (t ComparisonTotals) Words() string {
	var parts []string
	for _, c := range []struct {
		n    int
		word string
	}{{t.Changed, "changed"}, {t.Added, "added"}, {t.Removed, "removed"}, {t.Unchanged, "unchanged"}, {t.Unreadable, "not comparable"}} {
		if c.n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", c.n, c.word))
		}
	}
	if len(parts) == 0 {
		return "no designs to compare"
	}
	verdict := "no margin fell through its target"
	if t.Fell > 0 {
		verdict = plural(t.Fell, "margin") + " fell through the target"
	}
	if t.Recovered > 0 {
		verdict += fmt.Sprintf(", %d recovered", t.Recovered)
	}
	if t.Unstable > 0 {
		verdict += ", " + plural(t.Unstable, "loop") + " became unstable"
	}
	return plural(t.Designs, "design") + " (" + strings.Join(parts, ", ") + "): " + verdict
}

// TextComparison writes comparisons for a terminal, design by design; Close ends it.
type TextComparison struct {
	w      *bufio.Writer
	totals ComparisonTotals
}

// NewTextComparison starts a report.
func NewTextComparison(w io.Writer) *TextComparison { return &TextComparison{w: bufio.NewWriter(w)} }

// Design adds one design. What did not change is counted only.
func (t *TextComparison) Design(c workspace.Comparison) {
	t.totals.Add(&c)
	if c.Change == workspace.Unchanged {
		return
	}
	fmt.Fprintf(t.w, "%s: %s\n", safe(c.Path), headline(&c))
	for _, f := range unreadFindings(&c) {
		fmt.Fprintf(t.w, "    %s: %s\n", f.Severity, safe(f.Message))
	}
	tab := table{left: 1}
	below := corners(c.Figures)
	for _, f := range c.Figures {
		if !told(f) {
			continue
		}
		tab.row(figureName(f.Figure), boundText(f.Before), boundText(f.After), limitText(f.After), verdictWord(f))
		below = append(below, explained(&c, f)...)
	}
	if len(tab.rows) > 0 {
		tab.rows = append([][]string{{"", "before", "after", "limit", ""}}, tab.rows...)
		_ = tab.write(t.w, "    ")
	}
	for _, line := range below {
		fmt.Fprintf(t.w, "    %s\n", safe(line))
	}
	for _, list := range []struct {
		word string
		all  []rules.Finding
	}{{"new", c.Appeared}, {"gone", c.Gone}} {
		for _, f := range list.all {
			if f.Cause == nil {
				fmt.Fprintf(t.w, "    %-6s %s: %s (%s)\n", list.word, f.Severity, safe(f.Message), f.Rule)
			}
		}
	}
	fmt.Fprintln(t.w)
}

// Close writes the totals.
func (t *TextComparison) Close() error {
	fmt.Fprintln(t.w, t.totals.Words())
	return t.w.Flush()
}

// unreadFindings say why a design cannot be compared.
func unreadFindings(c *workspace.Comparison) []rules.Finding {
	if c.Change != workspace.Incomparable {
		return nil
	}
	var all []rules.Finding
	for _, side := range []workspace.File{c.Before, c.After} {
		if side.Spec == nil {
			all = append(all, side.Findings...)
		}
	}
	return all
}

// headline says in a few words what became of a design.
func headline(c *workspace.Comparison) string {
	var words []string
	switch {
	case c.Change == workspace.Incomparable:
		words = append(words, "cannot be compared: it cannot be read")
	case c.Change != workspace.Changed:
		words = append(words, c.Change.String())
	}
	if becameUnstable(c) {
		words = append(words, "the closed loop became unstable")
	}
	for _, v := range []workspace.Verdict{workspace.Fell, workspace.Recovered} {
		var names []string
		for _, f := range c.Figures {
			if f.Verdict == v {
				names = append(names, figureName(f.Figure))
			}
		}
		if len(names) > 0 {
			words = append(words, strings.Join(names, ", ")+map[workspace.Verdict]string{workspace.Fell: " fell through the target", workspace.Recovered: " recovered"}[v])
		}
	}
	if len(words) == 0 {
		words = append(words, "changed, and every margin stays on its side of the target")
	}
	if c.From != "" {
		words = append(words, "was "+safe(c.From))
	}
	return strings.Join(words, "; ")
}

// told says whether a figure is worth a line: it exists on one side.
func told(f workspace.FigureChange) bool {
	return f.Before != nil && !math.IsNaN(f.Before.Value) || f.After != nil && !math.IsNaN(f.After.Value)
}

// corners says where the margins are worst now, those of one corner together.
func corners(figures []workspace.FigureChange) []string {
	var order []string
	at := map[string][]string{}
	for _, f := range figures {
		if f.After == nil || f.After.CornerWords == "" || math.IsNaN(f.After.Limit) {
			continue
		}
		words := f.After.CornerWords
		if at[words] == nil {
			order = append(order, words)
		}
		at[words] = append(at[words], figureName(f.Figure))
	}
	var lines []string
	for _, words := range order {
		lines = append(lines, fmt.Sprintf("worst  %s at %s", strings.Join(at[words], ", "), words))
	}
	return lines
}

func figureName(key string) string {
	switch key {
	case "crossover-over-rhp-zero":
		return "crossover / RHP zero"
	case "crossover":
		return "highest crossover"
	case "crossover-low":
		return "lowest crossover"
	}
	return strings.ReplaceAll(key, "-", " ")
}

func boundText(b *rules.Bound) string {
	switch {
	case b == nil:
		return "–"
	case math.IsNaN(b.Value):
		return "none"
	}
	return shown(b.Value, b.Unit)
}

func limitText(b *rules.Bound) string {
	if b == nil || math.IsNaN(b.Limit) {
		return ""
	}
	if b.AtMost {
		return "≤ " + shown(b.Limit, b.Unit)
	}
	return "≥ " + shown(b.Limit, b.Unit)
}

func verdictWord(f workspace.FigureChange) string {
	switch {
	case f.Verdict == workspace.Met && f.Before != nil && !f.Moved():
		return "the same"
	case f.Verdict == workspace.Met:
		return ""
	}
	return f.Verdict.String()
}

// explained is what is told below the table of a figure that moved: which change did it.
func explained(c *workspace.Comparison, f workspace.FigureChange) []string {
	if f.After == nil {
		return nil
	}
	var lines []string
	name := figureName(f.Figure)
	if words := shareWords(c, f); words != "" {
		lines = append(lines, "part   "+name+": "+words)
	}
	if f.Before != nil && f.Before.Limit != f.After.Limit && !math.IsNaN(f.Before.Limit) && !math.IsNaN(f.After.Limit) {
		lines = append(lines, fmt.Sprintf("limit  %s: was %s, is %s", name, limitText(f.Before), limitText(f.After)))
	}
	return lines
}

// shareWords says which changed parts explain a figure's change.
func shareWords(c *workspace.Comparison, f workspace.FigureChange) string {
	if f.Before == nil || len(c.Parts) == 0 || !f.Moved() {
		return ""
	}
	if len(f.Shares) == 0 {
		return "no single change explains it"
	}
	total := f.After.Value - f.Before.Value
	var parts []string
	for _, s := range f.Shares {
		words := partWords(c.Parts[s.Part])
		if s.Effect*total < 0 {
			words = "against it " + words
		}
		if len(c.Parts) > 1 {
			words += " " + signed(s.Effect, f.Unit)
		}
		parts = append(parts, words)
	}
	out := strings.Join(parts, "; ")
	if len(c.Parts) > 1 {
		out += " (of " + signed(total, f.Unit) + ")"
	}
	return out
}

// partWords is a changed part with its values: "feedback-resistor 7k87 → 15k".
func partWords(p workspace.PartChange) string {
	const most = 3
	var values []string
	for i, v := range p.Values {
		if i == most {
			values = append(values, fmt.Sprintf("and %d more", len(p.Values)-most))
			break
		}
		words := orNone(v.Old) + " → " + orNone(v.New)
		if last := v.Pointer[strings.LastIndexByte(v.Pointer, '/')+1:]; last != p.Name && "load "+last != p.Name {
			words = last + " " + words
		}
		values = append(values, words)
	}
	return p.Name + " " + strings.Join(values, ", ")
}

func orNone(s string) string {
	if s == "" {
		return "nothing"
	}
	return s
}
