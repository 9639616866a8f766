package workspace

import (
	"context"
	"sync"

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

// String gives the name that the JSON output uses.
func (s Status) String() string {
	if s == Unreadable {
		return "unreadable"
	}
	return "checked"
}

// File is the outcome for one file.
type File struct {
	Path     string // as it is shown: as given, else relative to the working folder, with '/'
	Root     string // absolute path of the workspace's folder
	Document *schema.Document
	SHA256   string // of the text, where it is not at hand any more and there was one
	StandIn  bool   // the document has the shape of the text and not the text itself
	Status   Status
	Spec     *schema.Spec     // nil when unreadable
	Result   *analysis.Result // nil when unreadable
	Findings []rules.Finding  // sorted by position, then rule
	Outcomes []rules.Outcome  // what became of each rule that was chosen; nil when unreadable
	Policy   string           // the policy file in force, as it is shown; "": none

	Bounds []rules.Bound // the worst figures with what is asked of them, where the options asked for them
	Stable bool          // likewise: at every corner

	Sensitivities *analysis.Sensitivities // these three where the options asked for them
	Yield         *analysis.Yield
	Proof         *analysis.Proof

	Defect bool // a rule or the analysis failed inside the program (exit 3)
}

// Workspace is one tree of spec files with a fixed root: references are followed inside it and nowhere else. Texts that
// an editor has open lie over the files on disk. It is safe for concurrent use.
type Workspace struct {
	root string // absolute, cleaned
	real string // root with its symbolic links followed

	mu       sync.RWMutex
	overlays map[string]*schema.Document // by absolute path
	disk     map[string]kept             // documents of shared files, by absolute path
	links    map[string]linked           // what each file refers to, by absolute path

	past *past // the files of a revision instead of the disk's; nil: the disk

	// prepare is rules.Prepare; a test puts a failing one in its place.
	prepare func(context.Context, *schema.Document, schema.Resolver, rules.Settings, analysis.Options) (*rules.Case, []schema.Problem, error)
}

// Open gives the workspace whose root is the given folder. Nothing is read before it is asked for.
func Open(root string) *Workspace {
	abs := absolute(root)
	return &Workspace{
		root:     abs,
		real:     follow(abs),
		overlays: map[string]*schema.Document{},
		disk:     map[string]kept{},
		links:    map[string]linked{},
		prepare:  rules.Prepare,
	}
}

// Root is the absolute path of the workspace's folder.
func (w *Workspace) Root() string { return w.root }

// Overlay puts an unsaved text over the file at path; nil takes it away. Later checks, of designs that refer to the
// file too, read that text instead of the disk.
func (w *Workspace) Overlay(path string, doc *schema.Document) {
	key := absolute(path)
	w.mu.Lock()
	defer w.mu.Unlock()
	if doc == nil {
		delete(w.overlays, key)
		return
	}
	w.overlays[key] = doc
}

// overlay returns the text that lies over the absolute path, nil if none does.
func (w *Workspace) overlay(key string) *schema.Document {
	w.mu.RLock()
	defer w.mu.RUnlock()
	return w.overlays[key]
}
