package rules

import (
	"fmt"

	"halfplane/analysis"
)

var modulusMargin = Rule{
	Name:     "modulus-margin",
	Group:    Loop,
	Severity: Warning,
	Sentence: "The loop gain keeps its distance from −1 at every frequency and corner.",
	Formula:  "min |1 + T(j·2π·f)| ≥ limit",
	Source:   "common practice: a sensitivity peak of at most 2, which alone guarantees 29° and 6 dB",
	Policy:   []Threshold{modulusMarginLimit},
	Example:  "targets: {modulus-margin: 0.7}   # the loop comes as close as 0.55",
	Hint:     "Measured is the shortest distance to −1, which bounds phase and gain margin together: 0.5 alone guarantees 29° and 6 dB. It finds loops that pass both yet come close in between.",
	Reads:    Figures,
	Place:    targetOrGainPart("/targets/modulus-margin"),
	Moves:    movedModulus,
	Decide: margin{
		name: "modulus margin", unit: "", target: "/targets/modulus-margin", limit: modulusMarginLimit,
		of: func(k *analysis.Corner) float64 {
			return loopFigure(k, func(k *analysis.Corner) float64 { return k.Loop.ModulusMargin })
		},
		sum: func(k *analysis.Corner) string {
			return fmt.Sprintf("|1 + T| at %s = %s", number(k.Loop.ModulusFrequency, "Hz"), number(k.Loop.ModulusMargin, ""))
		},
	}.decide,
	Mend:   otherValues,
	WhyNot: noValues,
}
