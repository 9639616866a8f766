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

// Threshold is one policy key of a rule with its built-in default, in the SI unit (degrees, dB, ratios as such).
type Threshold struct {
	Key     string
	Default float64
	Unit    string // "" ratio, "deg", "dB", "%"
}

// Rule is one declaration; everything that lists rules is made from it.
type Rule struct {
	Name     string
	Group    Group
	Severity Severity
	Sentence string // what good looks like
	Formula  string
	Source   string // author, title, year, section; or "common practice"
	Policy   []Threshold
	Example  string // a YAML fragment that breaks it, for the rule's page
	Applies  func(*Case) bool
	Needs    []string // JSON pointers without which it cannot be assessed
	Decide   func(*Case) []Finding
}

// Case is an analysed design, as rules see it. Rules read it and write nothing.
type Case struct {
	Spec     *schema.Spec
	Design   *analysis.Design
	Result   *analysis.Result
	Settings Settings
}

// Settings are the severities and thresholds in force for one file; the zero value means the built-in defaults.
type Settings struct {
	Severities map[string]Severity
	Thresholds map[string]float64
}
