package rules

import (
	"halfplane/analysis"
	"halfplane/schema"
)

// Group is a rule's place in the catalogue.
type Group int

const (
	Declared Group = iota + 1
	Operating
	Plant
	Loop
	Transient
	Review
	Keeping
)

// String is the group's name in the catalogue.
func (g Group) String() string {
	switch g {
	case Declared:
		return "declared"
	case Operating:
		return "operating"
	case Plant:
		return "plant"
	case Loop:
		return "loop"
	case Transient:
		return "transient"
	case Review:
		return "review"
	case Keeping:
		return "keeping"
	}
	return "unknown"
}

// Sentence says what the rules of the group look at.
func (g Group) Sentence() string {
	switch g {
	case Declared:
		return "the file against itself"
	case Operating:
		return "what each corner asks of the parts"
	case Plant:
		return "what the power stage allows"
	case Loop:
		return "what the closed loop does"
	case Transient:
		return "what the exact switched waveform does"
	case Review:
		return "what reviewers ask for, and what failed on benches"
	case Keeping:
		return "exceptions and limits that are on record"
	}
	return ""
}

// Threshold is one policy key of a rule with its built-in default, in the SI unit (degrees, dB, ratios as such).
// A two-sided threshold is two of them, KEY.min and KEY.max.
type Threshold struct {
	Key     string
	Default float64
	Unit    string // "" ratio, "%" a ratio that is worded per cent, "deg", "dB", "Hz"
}

// Reading says what a rule must know of a corner to judge it; the runner reports the corners that lack it.
type Reading int

const (
	Declaration Reading = iota + 1 // the file alone, no corner
	Operation                      // the operating point of every corner
	Model                          // the small-signal model
	Figures                        // the loop's figures
)

// Rule is one declaration; everything that lists rules is made from it.
type Rule struct {
	Name     string
	Group    Group
	Severity Severity   // the default; a finding of a rule with two severities states its own
	Also     []Severity // the further ones that its findings can have
	Sentence string     // what good looks like
	Formula  string
	Source   string // author, title, year, section; or "common practice"
	Policy   []Threshold
	Example  string // a YAML fragment that breaks it, for the rule's page
	Hint     string // how to read its findings, for the rule's page
	Applies  func(*Case) bool
	Needs    []string // JSON pointers without which it cannot be assessed
	Decide   func(*Case) []Finding
	// Mend proposes ways out of a finding, before they are checked, in attempts from 0 on: the next one is asked for when none of the last held and there
	// are more. nil: none is known.
	Mend func(c *Case, f *Finding, attempt int) (mends []Mend, more bool)
	// WhyNot says what stands in the way where no attempt held, and what would help; nil, "": nothing is known of that.
	WhyNot func(*Case, *Finding) string

	Reads  Reading
	Judges func(*analysis.Corner) bool // the corners that the rule is about; nil: all of them
	Place  func(*Case) string          // JSON pointer of its findings; nil where each finding has its own
	Moves  *Moved                      // the figure of the loop that findings are about; nil: none, or not of the loop alone
	// Unassessed names what else is missing for an assessment, "" when nothing is; nil: nothing ever is.
	Unassessed func(*Case) string
}

// Severities names every severity that the rule's findings can have, the default first.
func (r *Rule) Severities() string {
	words := r.Severity.String()
	for _, s := range r.Also {
		words += " / " + s.String()
	}
	return words
}

// Case is an analysed design, as rules see it. Rules read it and write nothing.
type Case struct {
	Spec     *schema.Spec
	Design   *analysis.Design
	Result   *analysis.Result
	Settings Settings

	every   []*Rule  // the catalogue, for rules that ask what others say
	pointed *pointed // nil: nothing is remembered
	stages  []int    // the corners with distinct power stages; nil: not listed yet
}

// Settings are the severities and thresholds in force for one file; the zero value means the built-in defaults.
// Thresholds holds only what a policy file sets, in the units of the rules' declarations; the two ends of a two-sided
// threshold stand under KEY.min and KEY.max.
type Settings struct {
	Severities map[string]Severity
	Thresholds map[string]float64
}
