package rules

import (
	"fmt"
	"strings"
)

// BenchNote is the sentence of care that every rule page carries.
const BenchNote = "A clean check is no substitute for a loop measurement on the bench. Mains and high-voltage parts can kill; " +
	"isolation, creepage and safety approval belong to the local codes and to licensed practice."

// Page is one rule in full, as `halfplane rule NAME` prints it and an editor's hover shows it, in Markdown.
func Page(r *Rule) string {
	var b strings.Builder
	fmt.Fprintf(&b, "# %s\n\n%s\n\n", r.Name, r.Sentence)
	fmt.Fprintf(&b, "- group: %s (%s)\n- severity: %s unless a policy or the finding says otherwise\n", r.Group, r.Group.Sentence(), r.Severities())
	fmt.Fprintf(&b, "- holds when: %s\n- source: %s\n", r.Formula, r.Source)
	for _, p := range r.Defaults() {
		fmt.Fprintf(&b, "- policy key: `%s`, default %s\n", p.Key, p.Value)
	}
	if len(r.Policy) == 0 {
		fmt.Fprintf(&b, "- policy key: none\n")
	}
	fmt.Fprintf(&b, "\n%s\n\nBreaks it:\n\n```yaml\n%s\n```\n\n%s\n", r.Hint, r.Example, BenchNote)
	return b.String()
}

// Catalogue is the page of all rules in Markdown, group by group; each rule's heading is the anchor that links point at.
func Catalogue() string {
	var b strings.Builder
	b.WriteString("# Rules\n\n" + BenchNote + "\n")
	for g := Declared; g <= Keeping; g++ {
		first := true
		for _, r := range list {
			if r.Group != g {
				continue
			}
			if first {
				fmt.Fprintf(&b, "\n## %s: %s\n", g, g.Sentence())
				first = false
			}
			fmt.Fprintf(&b, "\n<a id=\"%s\"></a>\n### %s\n\n%s\n\n", r.Name, r.Name, r.Sentence)
			fmt.Fprintf(&b, "| | |\n| --- | --- |\n| severity | %s |\n| holds when | %s |\n| source | %s |\n", r.Severities(), cell(r.Formula), cell(r.Source))
			for _, p := range r.Defaults() {
				fmt.Fprintf(&b, "| policy key `%s` | default %s |\n", p.Key, p.Value)
			}
			fmt.Fprintf(&b, "\n%s\n\n```yaml\n%s\n```\n", r.Hint, r.Example)
		}
	}
	return b.String()
}

// Default is a policy key with its built-in default, as a person writes both in a policy file.
type Default struct{ Key, Value string }

// Defaults lists a rule's policy keys; the two ends of a two-sided threshold are one key.
func (r *Rule) Defaults() []Default {
	var all []Default
	for i, t := range r.Policy {
		key, end, sided := strings.Cut(t.Key, ".")
		switch {
		case !sided:
			all = append(all, Default{key, t.words()})
		case end == "min" && i+1 < len(r.Policy):
			all = append(all, Default{key, fmt.Sprintf("{min: %s, max: %s}", t.words(), r.Policy[i+1].words())})
		}
	}
	return all
}

// words is a threshold's default as a person writes it in a policy.
func (t Threshold) words() string {
	switch {
	case t.Unit == "":
		return fraction(t.Default)
	case t.Unit == "deg":
		return short(t.Default) + "°"
	case t.Unit == "%":
		return short(t.Default*100) + " %"
	}
	printed := number(t.Default, t.Unit)
	figure, unit, _ := strings.Cut(printed, " ")
	if strings.Contains(figure, ".") {
		figure = strings.TrimRight(strings.TrimRight(figure, "0"), ".")
	}
	return figure + " " + unit
}

// cell makes a text safe inside a Markdown table.
func cell(text string) string {
	return strings.ReplaceAll(text, "|", "\\|")
}
