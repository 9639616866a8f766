package rules

import (
	"cmp"
	"slices"

	"halfplane/analysis"
	"halfplane/schema"
)

// Severity of a finding; SARIF's level names.
type Severity int

const (
	None Severity = iota + 1
	Note
	Warning
	Error
)

// String is the severity's name in policies and in every output form.
func (s Severity) String() string {
	switch s {
	case None:
		return "none"
	case Note:
		return "note"
	case Warning:
		return "warning"
	case Error:
		return "error"
	}
	return "unknown"
}

// ParseSeverity reads a severity's name.
func ParseSeverity(name string) (Severity, bool) {
	for s := None; s <= Error; s++ {
		if s.String() == name {
			return s, true
		}
	}
	return 0, false
}

// Number is a value with its SI unit symbol ("" for a ratio, "deg", "dB").
type Number struct {
	Value float64
	Unit  string
}

// Finding is one thing that a rule has to say about one file.
type Finding struct {
	Rule        string
	Severity    Severity
	Message     string // one sentence, lower case, no full stop: the measured figure and the limit with units, three significant digits
	Formula     string // with the numbers put in, "" where the rule has none
	Pointer     string
	Doc         *schema.Document
	Start, End  int                // byte range in Doc
	Corner      []analysis.Setting // where it is worst; nil where no corner applies
	CornerWords string             // "9.00 V in, 1.50 A, inductance +20 %, capacitance −20 %"
	Nominal     *Number
	Measured    *Number
	Limit       *Number
	Related     []schema.Related
	Deciders    []string // which parts move the figure most, worded; each is among Related too
	Cause       *Cause   // this finding is a consequence of another in the same list
	About       string   // of not-assessed: the rule that could not be assessed
	Reason      string   // of not-assessed: why
	Mends       []Mend   // repairs, where they were asked for
	Unmended    string   // why there is none, where they were asked for and something is known of that
	Waiver      *Waiver  // the waiver in force that covers it; nil: none does
	Record      *Record  // what a ledger has on record of it; nil: nothing
	Recorded    bool     // it is on record and no worse than that
}

// Live says that a finding counts for the gate: it is neither waived nor on record.
func (f *Finding) Live() bool { return f.Waiver == nil && !f.Recorded }

// Kind tells apart findings of one rule at one place; "" where there is only one. Together with the rule, the file and the
// pointer it names a finding however lines move and figures change.
func (f *Finding) Kind() string { return f.About }

// Waiver is what the file says about a finding that it accepts.
type Waiver struct {
	Reason string
	Until  string // the last day on which it holds, YYYY-MM-DD
}

// Mend is a repair of a finding that was checked by analysing the file with it.
type Mend struct {
	Title string             // a verb phrase: "state 1/3"
	Edits []Edit             // of one text, not overlapping, in order
	After []analysis.Setting // figures of the mended design, by their keys in the JSON of figures
}

// Edit puts a text in the place of the bytes from Start to End of Doc.
type Edit struct {
	Doc        *schema.Document
	Pointer    string
	Start, End int
	Text       string
}

// Cause names the finding that a consequence follows from.
type Cause struct{ Rule, Pointer string }

// Sort orders findings by their place in the text, then by rule, then by message.
func Sort(findings []Finding) {
	slices.SortStableFunc(findings, func(a, b Finding) int {
		return cmp.Or(
			cmp.Compare(a.Start, b.Start),
			cmp.Compare(a.Rule, b.Rule),
			cmp.Compare(a.End, b.End),
			cmp.Compare(a.Message, b.Message),
		)
	})
}

// FromProblems turns what is wrong with a file's text, shape and quantities into findings. Their severity is fixed: a
// file that cannot be read has not been checked.
func FromProblems(problems []schema.Problem) []Finding {
	findings := make([]Finding, 0, len(problems))
	for _, p := range problems {
		findings = append(findings, Finding{
			Rule: p.Rule, Severity: Error, Message: p.Message,
			Pointer: p.Pointer, Doc: p.Doc, Start: p.Start, End: p.End, Related: p.Related,
		})
	}
	Sort(findings)
	return findings
}
