package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

var gainMargin = Rule{
	Name:     "gain-margin",
	Group:    Loop,
	Severity: Error,
	Sentence: "The smallest gain margin over all corners meets the target.",
	Formula:  "−20·log10 |T| where T is real and negative ≥ target; a loop without such a frequency holds",
	Source:   "H. Nyquist, \"Regeneration theory\", Bell System Technical Journal 11 (1932); 8 dB is common practice",
	Policy:   []Threshold{gainMarginLimit},
	Example:  "targets: {gain-margin: 12 dB}   # the loop has 9 dB",
	Hint:     "Measured is how much more gain the worst corner bears. A loop whose phase never reaches −180° has none and holds.",
	Reads:    Figures,
	Place:    targetOrGainPart("/targets/gain-margin"),
	Moves:    movedGain,
	Decide: margin{
		name: "gain margin", unit: "dB", target: "/targets/gain-margin", limit: gainMarginLimit,
		of: func(k *analysis.Corner) float64 {
			return loopFigure(k, func(k *analysis.Corner) float64 { return k.Loop.GainMargin })
		},
		sum: func(k *analysis.Corner) string {
			g := math.Pow(10, -k.Loop.GainMargin/20)
			return fmt.Sprintf("−20·log10 |T| at %s = −20·log10(%s) = %s", number(k.Loop.GainMarginFrequency, "Hz"), short(g), number(k.Loop.GainMargin, "dB"))
		},
	}.decide,
	Mend:   otherValues,
	WhyNot: noValues,
}
