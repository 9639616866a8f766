package rules

// The findings of this rule are made by the runner, which knows the day.
var waiverExpired = Rule{
	Name:     "waiver-expired",
	Group:    Keeping,
	Severity: Error,
	Sentence: "No waiver is past its last day.",
	Formula:  "today ≤ until",
	Source:   "common practice",
	Example:  "waivers:\n  - {rule: esr-zero-spread, reason: measured over temperature on the first board, until: 2024-03-31}",
	Hint:     "A waiver holds up to and including the day that it names, by the local date (`--today` sets another). After it the finding that it covered counts again: settle it, or renew the waiver with a reason that still holds.",
	Reads:    Declaration,
}
