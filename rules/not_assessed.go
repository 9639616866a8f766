package rules

// The notes of this rule are made by the runner: one for each rule that applies but could not be assessed everywhere.
var notAssessed = Rule{
	Name:     "not-assessed",
	Group:    Keeping,
	Severity: Note,
	Sentence: "Every rule that applies can be assessed at every corner.",
	Formula:  "corners assessed = corners analysed",
	Source:   "common practice",
	Example:  "compensator: {network: type-2, upper-resistor: 30k1, lower-resistor: 3k48}   # no reference-voltage: divider-setpoint cannot be assessed",
	Reads:    Declaration,
}
