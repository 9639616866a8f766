package workspace

import (
	"cmp"
	"context"
	"math"
	"slices"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// mend puts on each finding the repairs that its rule proposes and that hold: the file with the repair is analysed again, the
// finding is gone, and no other has come or got worse.
func (w *Workspace) mend(ctx context.Context, c *rules.Case, f *File, o Options) {
	o.Mends, o.Study = false, Study{}
	tried := map[string]File{} // by text: one repair may answer several findings
	for i := range f.Findings {
		found := &f.Findings[i]
		rule := rules.Find(found.Rule)
		if rule == nil || rule.Mend == nil {
			continue
		}
		for attempt, more := 0, true; more && len(found.Mends) == 0 && ctx.Err() == nil; attempt++ {
			var proposed []rules.Mend
			proposed, more = rule.Mend(c, found, attempt)
			for _, m := range proposed {
				text, ok := Mended(f.Document, m.Edits)
				if !ok {
					continue
				}
				after, known := tried[string(text.Text)]
				if !known {
					after = w.CheckDocument(ctx, text, o)
					tried[string(text.Text)] = after
				}
				if after.Status != Checked || after.Defect || !cures(*found, f.Findings, after.Findings) {
					continue
				}
				m.After = append(slices.Clone(m.After), moved(f.Result, after.Result)...)
				found.Mends = append(found.Mends, m)
			}
		}
		if len(found.Mends) == 0 && rule.WhyNot != nil {
			found.Unmended = rule.WhyNot(c, found)
		}
	}
}

// Mended is a document with edits in place; ok is false where one is in another file or two overlap.
func Mended(doc *schema.Document, edits []rules.Edit) (mended *schema.Document, ok bool) {
	edits = slices.SortedFunc(slices.Values(edits), func(a, b rules.Edit) int { return cmp.Compare(a.Start, b.Start) })
	var text []byte
	at := 0
	for _, e := range edits {
		if e.Doc != doc || e.Start < at || e.End < e.Start || e.End > len(doc.Text) {
			return nil, false
		}
		text = append(append(text, doc.Text[at:e.Start]...), e.Text...)
		at = e.End
	}
	return schema.Read(doc.Name, append(text, doc.Text[at:]...), doc.Version), len(edits) > 0
}

// cures says that one finding is gone and none is new or more severe.
func cures(found rules.Finding, before, after []rules.Finding) bool {
	type key struct{ rule, pointer, kind string }
	of := func(f rules.Finding) key { return key{f.Rule, f.Pointer, f.Kind()} }
	had := map[key]rules.Severity{}
	for _, f := range before {
		had[of(f)] = max(had[of(f)], f.Severity)
	}
	for _, f := range after {
		if of(f) == of(found) || f.Severity > had[of(f)] {
			return false
		}
	}
	return true
}

// moved lists the worst figures that a repair has changed.
func moved(before, after *analysis.Result) []analysis.Setting {
	if before == nil || after == nil {
		return nil
	}
	var out []analysis.Setting
	for _, figure := range []struct {
		key      string
		old, new analysis.Worst
	}{
		{"crossover", before.Worst.Crossover, after.Worst.Crossover},
		{"phase-margin", before.Worst.PhaseMargin, after.Worst.PhaseMargin},
		{"gain-margin", before.Worst.GainMargin, after.Worst.GainMargin},
		{"modulus-margin", before.Worst.ModulusMargin, after.Worst.ModulusMargin},
	} {
		if !math.IsNaN(figure.new.Value) && figure.new.Value != figure.old.Value {
			out = append(out, analysis.Setting{Path: figure.key, Value: figure.new.Value})
		}
	}
	return out
}
