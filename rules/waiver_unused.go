package rules

// The findings of this rule are made by the runner, which knows what the others found.
var waiverUnused = Rule{
	Name:     "waiver-unused",
	Group:    Keeping,
	Severity: Warning,
	Sentence: "Every waiver still covers a finding.",
	Formula:  "findings that the waiver covers ≥ 1",
	Source:   "common practice",
	Example:  "waivers:\n  - {rule: inductor-ripple, reason: the core runs warm and is known, until: 2031-03-31}   # the ripple is within the band now",
	Hint:     "What it covered is settled: take the waiver out, or it will hide the next finding of that rule unseen. A rule that was left out, or could not be assessed, is not counted; of the loop's figures full depth decides.",
	Reads:    Declaration,
}
