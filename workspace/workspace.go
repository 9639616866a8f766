package workspace

import (
	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// Status says whether a file could be analysed.
type Status int

const (
	Checked    Status = iota + 1
	Unreadable        // could not be read, parsed or validated
)

// File is the outcome for one file.
type File struct {
	Path     string // as it is shown: as given, else relative to the working folder, with '/'
	Document *schema.Document
	Status   Status
	Spec     *schema.Spec     // nil when unreadable
	Result   *analysis.Result // nil when unreadable
	Findings []rules.Finding  // sorted by position, then rule
	Defect   bool             // a rule or the analysis failed inside the program (exit 3)
}
