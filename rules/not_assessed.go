package rules

// The notes of this rule are made by the runner: one for each rule that applies but could not be assessed everywhere.
var notAssessed = Rule{
	Name:     "not-assessed",
	Group:    Keeping,
	Severity: Note,
	Sentence: "Every rule that applies can be assessed at every corner.",
	Formula:  "corners assessed = corners analysed",
	Source:   "common practice",
	Example:  "compensator:   # no reference-voltage: divider-setpoint cannot be assessed\n  network: type-2\n  upper-resistor: 30k1\n  lower-resistor: 3k48\n  feedback-resistor: 10k\n  integrator-capacitor: 22n",
	Hint:     "One note for each rule that applies and could not be judged everywhere; it names what is missing. What was judged stands: a rule can be broken at some corners and not assessed at others.",
	Reads:    Declaration,
}
