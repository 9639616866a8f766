package rules

import (
	"fmt"

	"halfplane/analysis"
)

var phaseMargin = Rule{
	Name:     "phase-margin",
	Group:    Loop,
	Severity: Error,
	Sentence: "The smallest phase margin over all crossovers and corners meets the target.",
	Formula:  "min |arg(−T(j·2π·fc))| over all crossovers fc ≥ target; negative when the closed loop is unstable",
	Source:   "H. Nyquist, \"Regeneration theory\", Bell System Technical Journal 11 (1932); 45° is common practice",
	Policy:   []Threshold{phaseMarginLimit},
	Example:  "targets: {phase-margin: 60 deg}   # the loop has 48°",
	Hint:     "Measured is the smallest margin of all corners and crossovers, nominal the one with nominal parts: the difference is what tolerances cost. Negative means unstable.",
	Reads:    Figures,
	Place:    targetOrGainPart("/targets/phase-margin"),
	Moves:    movedPhase,
	Decide: margin{
		name: "phase margin", unit: "deg", target: "/targets/phase-margin", limit: phaseMarginLimit,
		of: func(k *analysis.Corner) float64 {
			return loopFigure(k, func(k *analysis.Corner) float64 { return k.Loop.PhaseMargin })
		},
		sum: func(k *analysis.Corner) string {
			if len(k.Loop.Crossovers) > 1 {
				return fmt.Sprintf("smallest |arg(−T)| over %d crossovers, at %s, = %s",
					len(k.Loop.Crossovers), number(k.Loop.PhaseMarginFrequency, "Hz"), number(k.Loop.PhaseMargin, "deg"))
			}
			return fmt.Sprintf("180° + arg T at %s = 180° − %s = %s", number(k.Loop.Crossover, "Hz"),
				number(180-k.Loop.PhaseMargin, "deg"), number(k.Loop.PhaseMargin, "deg"))
		},
	}.decide,
	Mend:   otherValues,
	WhyNot: noValues,
}
