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
	Example:  "title: no file should ever cause this",
	Hint:     "It is a defect of the program, not of the design; the exit status is 3. Everything else was still checked. Report it with the file.",
	Reads:    Declaration,
}
