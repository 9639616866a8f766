package lsp

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/rules"
)

// moves says what one per cent more of the part at a pointer does to the worst figures. The full check finds that out; until it has
// looked at this text there is nothing to say.
func (p *place) moves(pointer string) []string {
	o, stale := p.figures()
	if o == nil || o.file.Sensitivities == nil || o.file.Spec == nil {
		return nil
	}
	c := rules.Case{Spec: o.file.Spec, Result: o.file.Result}
	s := o.file.Sensitivities
	var told []string
	for _, f := range []struct {
		words, unit string
		scale       float64
		effects     []analysis.Effect
	}{
		{"the worst phase margin", "deg", 1, s.PhaseMargin},
		{"the worst gain margin", "dB", 1, s.GainMargin},
		{"the highest crossover", "%", 0.01, s.Crossover},
	} {
		for _, e := range f.effects {
			if _, at := c.PartWords(e.Path); at == pointer && math.Abs(e.PerPercent) > 1e-6 {
				told = append(told, fmt.Sprintf("%s by %s", f.words, moved(e.PerPercent*f.scale, f.unit)))
			}
		}
	}
	if len(told) == 0 {
		return nil
	}
	return []string{"1 % more moves " + strings.Join(told, ", ") + stale}
}

// moved is a figure with its sign.
func moved(v float64, unit string) string {
	s := figure(math.Abs(v), unit)
	if v < 0 {
		return "−" + s
	}
	return "+" + s
}
