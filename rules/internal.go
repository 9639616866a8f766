package rules

// Findings of this rule are made where a defect of the program shows itself: by the runner for a rule, by the caller of
// Prepare for the analysis.
var internal = Rule{
	Name:     "internal",
	Group:    Keeping,
	Severity: Error,
	Sentence: "No rule and no analysis fails inside the program.",
	Formula:  "program faults = 0",
	Source:   "common practice",
	Example:  "# no file should ever cause this; report it when you see it",
	Reads:    Declaration,
}
