package workspace

import (
	"fmt"
	"os"
	"path/filepath"

	"halfplane/rules"
	"halfplane/schema"
)

// policyName is the name that makes a file the policy of the designs at and below its folder.
const policyName = "halfplane.yaml"

// policy is what is in force for one file.
type policy struct {
	path     string // as it is shown, "" without a policy
	settings rules.Settings
	problems []schema.Problem // it cannot be read as a policy: nothing may be judged by it
}

// policyOf finds the policy of the file at the absolute path: the one that the options name, else the nearest halfplane.yaml in the file's folder or
// above it, not above the workspace's root. An unsaved text wins over the disk.
func (w *Workspace) policyOf(abs string, o Options) policy {
	at := o.Policy
	if at != "" {
		at = absolute(at)
	} else {
		at = w.nearestPolicy(filepath.Dir(abs))
	}
	if at == "" {
		return policy{settings: o.Settings}
	}
	p := policy{path: shown(at)}
	doc, err := w.shared(at)
	if err != nil {
		p.problems = []schema.Problem{{Rule: "spec-syntax", Message: err.Error(), Doc: schema.Read(p.path, nil, 0)}}
		return p
	}
	if doc.Kind != schema.Policy { // --policy may name a file that is called otherwise
		renamed := *doc
		renamed.Kind = schema.Policy
		doc = &renamed
	}
	if _, p.problems = schema.Validate(doc, w); len(p.problems) > 0 {
		return p
	}
	rel, err := filepath.Rel(filepath.Dir(at), abs)
	if err != nil {
		rel = filepath.Base(abs)
	}
	p.settings = rules.PolicySettings(doc, filepath.ToSlash(rel))
	return p
}

// unusable is the problem that a design has with a policy that cannot be read: it is not judged. It stands at the design's first key; the
// policy's own first mistake is related.
func (p policy) unusable(design *schema.Document) schema.Problem {
	first := p.problems[0]
	out := schema.Problem{
		Rule: "spec-shape", Doc: design,
		Message: fmt.Sprintf("the policy %s cannot be used, and without it this design is not judged: %s", p.path, first.Message),
		Related: []schema.Related{{Doc: first.Doc, Pointer: first.Pointer, Start: first.Start, End: first.End, Message: first.Message}},
	}
	if design.Root != nil && len(design.Root.Entries) > 0 {
		out.Start, out.End = design.Root.Entries[0].KeyStart, design.Root.Entries[0].KeyEnd
	}
	return out
}

// isFile says whether there is a file at an absolute path.
func (w *Workspace) isFile(abs string) bool {
	if w.past != nil {
		return w.past.has(abs)
	}
	info, err := os.Stat(abs)
	return err == nil && info.Mode().IsRegular()
}

// nearestPolicy is the absolute path of the nearest policy at or above a folder, "" where there is none up to the root.
func (w *Workspace) nearestPolicy(folder string) string {
	for within(w.root, folder) || within(w.real, folder) {
		at := filepath.Join(folder, policyName)
		if w.overlay(at) != nil {
			return at
		}
		if w.isFile(at) {
			return at
		}
		above := filepath.Dir(folder)
		if above == folder {
			break
		}
		folder = above
	}
	return ""
}
