package report

import (
	"bufio"
	"fmt"
	"io"
	"math"

	"halfplane/rules"
	"halfplane/workspace"
)

// Mending writes what was mended in one file: the repairs, the margins before and after, and of the rest, as far as asked says, why it is left. A file with nothing to tell is
// left out.
func Mending(w io.Writer, m workspace.Mending, asked func(*rules.Finding) bool) error {
	out := bufio.NewWriter(w)
	var left []string
	for i := range m.After.Findings {
		f := &m.After.Findings[i]
		if f.Severity < rules.Warning || f.Cause != nil || !f.Live() || !asked(f) {
			continue
		}
		line := fmt.Sprintf("    left   %s: %s (%s)", f.Severity, safe(f.Message), f.Rule)
		if f.Unmended != "" {
			line += "\n           " + safe(f.Unmended)
		}
		left = append(left, line)
	}
	if len(m.Applied) == 0 && len(left) == 0 {
		return out.Flush()
	}
	fmt.Fprintf(out, "%s: %s\n", safe(m.Before.Path), plural(len(m.Applied), "repair"))
	for _, a := range m.Applied {
		fmt.Fprintf(out, "    mend   %s (%s)\n", safe(a.Title), a.Rule)
	}
	tab := table{left: 1}
	for i := range m.Before.Bounds {
		before, after := &m.Before.Bounds[i], &m.After.Bounds[i]
		if len(m.Applied) == 0 || math.IsNaN(before.Value) && math.IsNaN(after.Value) {
			continue
		}
		word := ""
		switch {
		case !before.Met() && after.Met():
			word = "met now"
		case !after.Met():
			word = "missed"
		}
		tab.row(figureName(before.Figure), boundText(before), boundText(after), limitText(after), word)
	}
	if len(tab.rows) > 0 {
		tab.rows = append([][]string{{"", "before", "after", "limit", ""}}, tab.rows...)
		if err := tab.write(out, "    "); err != nil {
			return err
		}
	}
	for _, line := range left {
		fmt.Fprintln(out, line)
	}
	return out.Flush()
}
