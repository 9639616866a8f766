package report

import (
	"io"
	"strings"
	"unicode/utf8"

	"halfplane/schema"
)

// shown prints a figure with its unit to three significant digits; its sign is the minus of prose, U+2212.
func shown(value float64, unit string) string {
	printed := schema.Format(value, unit)
	if after, negative := strings.CutPrefix(printed, "-"); negative {
		return "−" + after
	}
	return printed
}

// table sets cells in columns: the first to the left, the others to the right, two blanks between.
type table struct {
	rows [][]string
	left int // so many columns at the left are set to the left
}

func (t *table) row(cells ...string) { t.rows = append(t.rows, cells) }

// write sets the table; an empty last cell leaves no blanks at the end of its line.
func (t *table) write(w io.Writer, indent string) error {
	var widths []int
	for _, row := range t.rows {
		for i, cell := range row {
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], utf8.RuneCountInString(cell))
		}
	}
	var b strings.Builder
	for _, row := range t.rows {
		var line strings.Builder
		for i, cell := range row {
			blanks := strings.Repeat(" ", widths[i]-utf8.RuneCountInString(cell))
			if i > 0 {
				line.WriteString("  ")
			}
			if i < t.left {
				line.WriteString(cell + blanks)
			} else {
				line.WriteString(blanks + cell)
			}
		}
		b.WriteString(strings.TrimRight(indent+line.String(), " ") + "\n")
	}
	_, err := io.WriteString(w, b.String())
	return err
}
