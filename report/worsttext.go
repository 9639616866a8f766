package report

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"

	"halfplane/analysis"
)

// cornerWidth is the width to which the words of a corner are wrapped: with the columns before it about 120 characters.
const cornerWidth = 86

// worst lists the worst figures, each with the corner that it was found at.
func (p *figurePage) worst() error {
	if p.o.At != nil {
		return nil
	}
	w := &p.file.Result.Worst
	t := table{left: 3}
	line := func(label string, of analysis.Worst, unit string) {
		if of.Corner < 0 || math.IsNaN(of.Value) {
			t.row(label, "–", "")
			return
		}
		for i, part := range atCommas("at "+p.words(p.file.Result.Corners[of.Corner].At), cornerWidth) {
			if i == 0 {
				t.row(label, shown(of.Value, unit), part)
			} else {
				t.row("", "", "   "+part)
			}
		}
	}
	line("phase margin", w.PhaseMargin, "deg")
	line("gain margin", w.GainMargin, "dB")
	if w.GainReductionMargin.Corner >= 0 {
		line("gain reduction", w.GainReductionMargin, "dB")
	}
	line("modulus margin", w.ModulusMargin, "")
	line("crossover, highest", w.Crossover, "Hz")
	line("crossover, lowest", w.CrossoverLow, "Hz")
	if w.RHPZero.Corner >= 0 {
		line("RHP zero, lowest", w.RHPZero, "Hz")
		line("crossover / RHP zero", w.CrossoverOverRHPZero, "")
		if r := w.HighestCrossoverOverLowestRHPZero; !math.IsNaN(r) {
			t.row("", shown(r, ""), "the highest crossover of all over the lowest zero of all, for information")
		}
	}
	fmt.Fprintf(p.w, "\n%s\n", p.bold("Worst figures ("+p.file.Result.Method+")"))
	if err := t.write(p.w, "  "); err != nil || p.file.Result.Complete {
		return err
	}
	_, err := fmt.Fprintln(p.w, "  not complete: not every extreme of every tolerance was visited"+p.deeper())
	return err
}

// atCommas breaks a list behind commas so that no part is longer than width where that is possible.
func atCommas(list string, width int) []string {
	var parts []string
	for _, item := range strings.Split(list, ", ") {
		last := len(parts) - 1
		if last >= 0 && utf8.RuneCountInString(parts[last])+2+utf8.RuneCountInString(item) <= width {
			parts[last] += ", " + item
			continue
		}
		if last >= 0 {
			parts[last] += ","
		}
		parts = append(parts, item)
	}
	return parts
}

// deeper says what would visit more.
func (p *figurePage) deeper() string {
	if p.file.Result.Depth == analysis.Quick {
		return "; --depth full looks further"
	}
	return ""
}
