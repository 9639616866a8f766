package rules

import (
	"fmt"
	"strings"

	"halfplane/analysis"
)

var severalCrossovers = Rule{
	Name:     "several-crossovers",
	Group:    Loop,
	Severity: Warning,
	Sentence: "The loop gain crosses one once at every corner.",
	Formula:  "number of frequencies with |T| = 1 is one",
	Source:   "common practice",
	Example:  "input-filter: {inductance: 22 uH, capacitance: 10 uF}   # its dip cuts the gain through one twice more",
	Hint:     "Measured is the count at the worst corner; the frequencies are listed. Every one of them has a margin, and the highest can jump from one to another with a small change of gain.",
	Reads:    Figures,
	Place:    gainPart,
	Decide: func(c *Case) []Finding {
		corner, count := c.worst(func(k *analysis.Corner) float64 {
			return loopFigure(k, func(k *analysis.Corner) float64 { return float64(len(k.Loop.Crossovers)) })
		})
		if corner == nil || count <= 1 {
			return nil
		}
		var list []string
		for _, fc := range corner.Loop.Crossovers {
			list = append(list, number(fc, "Hz"))
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("the loop gain crosses one %.0f times, at %s (limit 1): the crossover that counts moves from one to the other", count, strings.Join(list, ", "))
		f.Formula = "|T| = 1 at " + strings.Join(list, ", ")
		f.Measured, f.Limit = asNumber(count, ""), asNumber(1, "")
		if nominal := c.nominal().Loop; nominal != nil {
			f.Nominal = asNumber(float64(len(nominal.Crossovers)), "")
		}
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}
