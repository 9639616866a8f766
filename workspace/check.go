package workspace

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// Options say how files are checked.
type Options struct {
	Rules    rules.RunOptions
	Settings rules.Settings // where no policy file is in force
	Policy   string         // path of the policy file for all designs, "": each design's nearest halfplane.yaml
	Depth    analysis.Depth
	Jobs     int // at once, over files and corners together; 0: as many as the machine runs
	Study    Study
	Mends    bool // compute the repairs of findings, each checked by another analysis
	Bounds   bool // File.Bounds
	KeepAll  bool // every point analysed is in the result, not only those that show or decide something
}

// CheckFile reads, validates, analyses and judges one file. A file that cannot be read has a finding that says so.
func (w *Workspace) CheckFile(ctx context.Context, path string, o Options) (f File) {
	defer isolate(&f, filepath.ToSlash(path), nil)
	if doc := w.overlay(absolute(path)); doc != nil {
		f = w.CheckDocument(ctx, doc, o)
		f.Path = filepath.ToSlash(path)
		return f
	}
	text, err := w.text(absolute(path))
	if err != nil {
		f = unreadable(path, err)
		f.Root = w.root
		return f
	}
	return w.CheckDocument(ctx, schema.Read(filepath.ToSlash(path), text, 0), o)
}

// unreadable is the outcome for a file without text.
func unreadable(path string, err error) File {
	doc := schema.Read(filepath.ToSlash(path), nil, 0)
	problem := schema.Problem{Rule: "spec-syntax", Message: err.Error(), Doc: doc}
	return File{
		Path:     doc.Name,
		Document: doc,
		Status:   Unreadable,
		Findings: rules.FromProblems([]schema.Problem{problem}),
	}
}

// CheckDocument validates, analyses and judges a text that is at hand. Compensator, parts and policy files are validated
// on their own. Whatever fails inside the program becomes a finding of the rule `internal` and never a panic.
func (w *Workspace) CheckDocument(ctx context.Context, doc *schema.Document, o Options) (f File) {
	f = File{Path: filepath.ToSlash(doc.Name), Root: w.root, Document: doc, Status: Checked}
	defer isolate(&f, f.Path, doc)
	settings := o.Settings
	if doc.Kind == schema.Design {
		p := w.policyOf(absolute(doc.Name), o)
		if f.Policy = p.path; len(p.problems) > 0 {
			f.Status = Unreadable
			f.Findings = rules.FromProblems([]schema.Problem{p.unusable(doc)})
			return f
		}
		settings = p.settings
	}
	c, problems, err := w.prepare(ctx, doc, w, settings, analysis.Options{Depth: o.Depth, Jobs: o.Jobs, KeepAll: o.KeepAll})
	switch {
	case len(problems) > 0:
		f.Status = Unreadable
		f.Findings = rules.FromProblems(problems)
	case err != nil && ctx.Err() == nil:
		f.fails(doc, err.Error())
	case c != nil:
		if err = o.Study.prove(ctx, c, &f, o.Jobs); err == nil {
			f.Spec, f.Result = c.Spec, c.Result
			judged := rules.Judge(c, always(o.Rules))
			f.Findings, f.Outcomes = append(judged.Findings, rules.Unproved(c, f.Proof, o.Rules.Today)...), judged.Outcomes
			rules.Sort(f.Findings)
			if o.Bounds {
				f.Bounds, f.Stable = c.Bounds(), c.Stable()
			}
			if o.Mends {
				w.mend(ctx, c, &f, o)
			}
			err = o.Study.further(ctx, c, &f, o.Jobs)
		}
		if err != nil && ctx.Err() == nil {
			f.fails(doc, err.Error())
		}
		for _, found := range f.Findings {
			f.Defect = f.Defect || found.Rule == defect
		}
	}
	return f
}

// always keeps a choice of rules from hiding that one of them failed inside the program.
func always(o rules.RunOptions) rules.RunOptions {
	if len(o.Only) > 0 {
		o.Only = append(slices.Clone(o.Only), defect)
	}
	o.Without = slices.DeleteFunc(slices.Clone(o.Without), func(name string) bool { return name == defect })
	return o
}

// defect is the rule under which failures of the program itself are reported.
const defect = "internal"

// isolate turns a panic of the program into a finding of the one file that it happened on. It is deferred.
func isolate(f *File, path string, doc *schema.Document) {
	if cause := recover(); cause != nil {
		f.Path = path
		f.fails(doc, fmt.Sprint(cause))
	}
}

// fails records a failure of the program itself; the finding stands at the top of the file.
func (f *File) fails(doc *schema.Document, cause string) {
	f.Defect = true
	if f.Status == 0 {
		f.Status = Unreadable
	}
	f.Findings = append(f.Findings, rules.Internal(doc, "the program itself failed on this file: "+cause))
	rules.Sort(f.Findings)
}
