package rules

var turnsRatio = Rule{
	Name:     "turns-ratio",
	Group:    Declared,
	Severity: Error,
	Sentence: "The stated turns ratio is secondary over primary, and no stated figure is off by a slip of the ratio.",
	Formula:  "n = turns.secondary / turns.primary; |stated − recomputed| ≤ stated-tolerance · recomputed",
	Source:   "common practice",
	Policy:   []Threshold{statedTolerance},
	Example:  "turns: {primary: 18, secondary: 6}\nstated: {turns-ratio: 3}   # primary over secondary; it is 1/3",
	Hint:     "Measured is what the file states, the limit is what follows from the parts at nominal input and full load. The slip that explains the difference is named when only one fits within 2 %.",
	Reads:    Declaration,
	Applies: func(c *Case) bool {
		return c.Spec.Has("/stated/turns-ratio") || c.Design.Nominal.Circuit.Topology.Isolated() && anyStated(c)
	},
	Unassessed: statedGap,
	Decide:     func(c *Case) []Finding { return judgeStated(c, "turns-ratio") },
	Mend:       stateRecomputed,
}
