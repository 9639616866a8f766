package rules

var reflectedInductance = Rule{
	Name:     "reflected-inductance",
	Group:    Declared,
	Severity: Error,
	Sentence: "The stated effective inductance is the one on the output side, and no stated figure is off by a slip of reflection.",
	Formula:  "L on the output side = n² · L on the primary; |stated − recomputed| ≤ stated-tolerance · recomputed",
	Source:   "common practice",
	Policy:   []Threshold{statedTolerance},
	Example:  "turns: {primary: 18, secondary: 6}\ninductor: {inductance: 90 uH, side: primary}\nstated: {effective-inductance: 30 uH}   # n for n²: it is 10 uH on the output side",
	Hint:     "Measured is what the file states, the limit is what follows from the parts. An inductance crosses the transformer with n², and the right-half-plane zero and the resonance take it along.",
	Reads:    Declaration,
	Applies: func(c *Case) bool {
		return c.Spec.Has("/stated/effective-inductance") || c.Design.Nominal.Circuit.Topology.Isolated() && anyStated(c)
	},
	Unassessed: statedGap,
	Decide:     func(c *Case) []Finding { return judgeStated(c, "reflected-inductance") },
	Mend:       stateRecomputed,
}
