package rules

const statedFigureName = "stated-figure"

var statedFigureRule = Rule{
	Name:     statedFigureName,
	Group:    Declared,
	Severity: Warning,
	Sentence: "Every stated figure is the one that follows from the parts at nominal input, full load and nominal values.",
	Formula:  "|stated − recomputed| ≤ stated-tolerance · recomputed",
	Source:   "common practice",
	Policy:   []Threshold{statedTolerance},
	Example:  "stated: {duty: 0.495, rhp-zero: 176 kHz}   # 1 − D for D; radians per second for hertz",
	Hint:     "Measured is what the file states, the limit is what follows from the parts, losses included. A slip of the trade that explains the difference is named when exactly one fits within 2 %; slips of the turns ratio and of reflection are reported by turns-ratio and reflected-inductance.",
	Reads:    Declaration,
	Applies: func(c *Case) bool {
		for _, figure := range statedFigures() {
			if ownerOf(figure.key) == "" && c.Spec.Has(statedPointer(figure.key)) {
				return true
			}
		}
		return false
	},
	Unassessed: statedGap,
	Decide:     func(c *Case) []Finding { return judgeStated(c, statedFigureName) },
	Mend:       stateRecomputed,
}
