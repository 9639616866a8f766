package rules

import (
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
	Cause       *Cause // this finding is a consequence of another in the same list
}

// Cause names the finding that a consequence follows from.
type Cause struct{ Rule, Pointer string }
