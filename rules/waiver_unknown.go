package rules

// The findings of this rule are made by the runner.
var waiverUnknown = Rule{
	Name:     "waiver-unknown",
	Group:    Keeping,
	Severity: Error,
	Sentence: "Every waiver names a rule that exists.",
	Formula:  "the rule is in the catalogue",
	Source:   "common practice",
	Example:  "waivers:\n  - {rule: esr-zero-sprea, reason: measured over temperature, until: 2031-03-31}",
	Hint:     "The nearest name is suggested; `halfplane rule` lists them all.",
	Reads:    Declaration,
}
