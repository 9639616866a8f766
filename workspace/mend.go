package workspace

import (
	"context"
	"slices"

	"halfplane/rules"
	"halfplane/schema"
)

// Mending is one file with the repairs that hold put in, one after another.
type Mending struct {
	Before, After File // After is Before where nothing was mended
	Applied       []Applied
}

// Applied is one repair that was put in.
type Applied struct{ Rule, Title string }

// mostMends bounds how many repairs are put into one file.
const mostMends = 30

// MendFile puts in repairs until none is left that holds: of the gravest finding first, the smallest change first, each on the text that the last one left and analysed
// again before it is taken. only, where it is not empty, names the rules whose findings are mended. Nothing is written.
func (w *Workspace) MendFile(ctx context.Context, path string, o Options, only []string) Mending {
	o.Mends, o.Bounds = true, true
	f := w.CheckFile(ctx, path, o)
	out := Mending{Before: f, After: f}
	for len(out.Applied) < mostMends && ctx.Err() == nil && out.After.Status == Checked && !out.After.Defect {
		found := gravest(out.After.Findings, only)
		if found == nil {
			break
		}
		doc, ok := Mended(out.After.Document, found.Mends[0].Edits)
		if !ok {
			break
		}
		after := w.CheckDocument(ctx, doc, o)
		if after.Status != Checked || after.Defect || worse(out.After.Findings, after.Findings) {
			break
		}
		out.Applied = append(out.Applied, Applied{found.Rule, found.Mends[0].Title})
		out.After = after
	}
	return out
}

// gravest is the gravest finding that has a repair, the first of equals; a finding that is waived or on record is left as it is.
func gravest(findings []rules.Finding, only []string) *rules.Finding {
	var best *rules.Finding
	for i := range findings {
		f := &findings[i]
		if len(f.Mends) == 0 || !f.Live() || len(only) > 0 && !slices.Contains(only, f.Rule) {
			continue
		}
		if best == nil || f.Severity > best.Severity {
			best = f
		}
	}
	return best
}

// worse says whether there are more findings of some severity or above than there were.
func worse(before, after []rules.Finding) bool {
	for least := rules.Note; least <= rules.Error; least++ {
		if count(after, least) > count(before, least) {
			return true
		}
	}
	return false
}

func count(findings []rules.Finding, least rules.Severity) int {
	n := 0
	for i := range findings {
		if findings[i].Severity >= least {
			n++
		}
	}
	return n
}

// Text is the file with the repairs in.
func (m Mending) Text() *schema.Document { return m.After.Document }
