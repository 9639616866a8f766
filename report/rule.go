package report

import (
	"fmt"
	"io"
	"strings"

	"halfplane/rules"
)

// Care stands on every page that could be taken for an approval.
const Care = "A clean check is no substitute for a loop measurement on the bench; mains and high-voltage parts can kill; " +
	"isolation, creepage and safety approval belong to the local codes and licensed practice."

// Catalogue lists the rules by group, one line each.
func Catalogue(w io.Writer, all []*rules.Rule) error {
	var b strings.Builder
	width := 0
	for _, r := range all {
		width = max(width, len(r.Name))
	}
	group := rules.Group(0)
	for _, r := range all {
		if r.Group != group {
			if group != 0 {
				b.WriteByte('\n')
			}
			group = r.Group
			fmt.Fprintf(&b, "%s\n", group)
		}
		fmt.Fprintf(&b, "  %-*s  %-7s  %s\n", width, r.Name, r.Severity, r.Sentence)
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// RulePage writes one rule in full.
func RulePage(w io.Writer, r *rules.Rule) error {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\n%s\n\n", r.Name, wrap(r.Sentence, 96, ""))
	line := func(label, text string) {
		if text != "" {
			fmt.Fprintf(&b, "%-10s%s\n", label, wrap(text, 86, strings.Repeat(" ", 10)))
		}
	}
	line("group", r.Group.String())
	line("severity", r.Severities())
	line("formula", r.Formula)
	line("source", r.Source)
	label := "policy"
	for _, p := range r.Defaults() {
		line(label, fmt.Sprintf("%s (default %s)", p.Key, p.Value))
		label = ""
	}
	line("finding", r.Hint)
	if r.Example != "" {
		fmt.Fprintf(&b, "\nA file that breaks it has, for example:\n\n%s\n", indent(strings.Trim(r.Example, "\n"), "    "))
	}
	fmt.Fprintf(&b, "\n%s\n", wrap(Care, 96, ""))
	_, err := io.WriteString(w, b.String())
	return err
}

// wrap breaks a text at blanks so that no line is longer than width where that is possible; further lines start with indent.
func wrap(text string, width int, indent string) string {
	var b strings.Builder
	column := 0
	for i, word := range strings.Fields(text) {
		n := len([]rune(word))
		switch {
		case i == 0:
		case column+1+n > width:
			b.WriteString("\n" + indent)
			column = 0
		default:
			b.WriteByte(' ')
			column++
		}
		b.WriteString(word)
		column += n
	}
	return b.String()
}

func indent(text, with string) string {
	return with + strings.ReplaceAll(text, "\n", "\n"+with)
}
