package workspace

import (
	"bytes"
	"context"
	"math"

	"halfplane/rules"
	"halfplane/schema"
)

// Change is what became of one design.
type Change int

const (
	Unchanged Change = iota + 1 // neither its text nor anything that it is judged with
	Changed
	Added
	Removed
	Incomparable // one side cannot be read
)

// String is the change's name in the output forms.
func (c Change) String() string {
	return [...]string{"", "unchanged", "changed", "added", "removed", "unreadable"}[c]
}

// Verdict is what a change did to a figure that something is asked of.
type Verdict int

const (
	Met       Verdict = iota + 1 // before and after, or nothing is asked
	Fell                         // was met and is not any more
	Missed                       // neither before nor after
	Recovered                    // is met now
)

// String is the verdict's name in the output forms.
func (v Verdict) String() string { return [...]string{"", "met", "fell", "missed", "recovered"}[v] }

// Comparison is one design before and after.
type Comparison struct {
	Pair
	Change        Change
	Before, After File // zero where there is none
	Figures       []FigureChange
	Parts         []PartChange // what was changed in the design
	Appeared      []rules.Finding
	Gone          []rules.Finding
}

// FigureChange is a worst figure before and after; nil where the side does not exist.
type FigureChange struct {
	Figure, Unit  string
	Before, After *rules.Bound
	Verdict       Verdict
	Shares        []Share // what explains it, the largest first
}

// Moved says whether the figure changed by more than what rounding and the search leave: 0.05° or dB, else one part in 500.
func (f FigureChange) Moved() bool {
	if f.Before == nil || f.After == nil {
		return false
	}
	a, b := f.Before.Value, f.After.Value
	if math.IsNaN(a) || math.IsNaN(b) {
		return math.IsNaN(a) != math.IsNaN(b)
	}
	if f.Unit == "deg" || f.Unit == "dB" {
		return math.Abs(b-a) > 0.05
	}
	return math.Abs(b-a) > 0.002*math.Max(math.Abs(a), math.Abs(b))
}

// Fallen says whether a margin fell through its target, or the loop became unstable.
func (c *Comparison) Fallen() bool {
	for _, f := range c.Figures {
		if f.Verdict == Fell {
			return true
		}
	}
	return c.Change == Changed && c.Before.Stable && !c.After.Stable
}

// Compare checks both sides of a pair and says what the change did and which changed part explains it. A pair of which nothing has
// changed is not analysed.
func Compare(ctx context.Context, p Pair, o Options) Comparison {
	out := Comparison{Pair: p, Change: Changed}
	o.Bounds = true
	switch {
	case p.Old == nil:
		out.Change = Added
		out.After = p.New.In.CheckFile(ctx, p.New.Path, o)
	case p.New == nil:
		out.Change = Removed
		return out
	case sameInputs(p, o):
		out.Change = Unchanged
		return out
	default:
		out.Before, out.After = p.Old.In.CheckFile(ctx, p.Old.Path, o), p.New.In.CheckFile(ctx, p.New.Path, o)
	}
	if out.After.Spec == nil || p.Old != nil && out.Before.Spec == nil {
		out.Change = Incomparable
		return out
	}
	out.figures()
	if out.Change == Changed {
		out.Appeared, out.Gone = without(out.After.Findings, out.Before.Findings), without(out.Before.Findings, out.After.Findings)
		out.explain(ctx, o)
	}
	return out
}

// figures puts the worst figures of both sides beside each other.
func (c *Comparison) figures() {
	for i, key := range rules.LoopFigures() {
		f := FigureChange{Figure: key, After: &c.After.Bounds[i], Unit: c.After.Bounds[i].Unit, Verdict: Met}
		if !f.After.Met() {
			f.Verdict = Missed
		}
		if c.Change != Added {
			f.Before = &c.Before.Bounds[i]
			switch {
			case f.Before.Met() && !f.After.Met():
				f.Verdict = Fell
			case !f.Before.Met() && f.After.Met():
				f.Verdict = Recovered
			}
		}
		c.Figures = append(c.Figures, f)
	}
}

// without gives the findings of one list that the other does not have, by rule, place and kind.
func without(all, other []rules.Finding) []rules.Finding {
	type key struct{ rule, pointer, kind string }
	has := map[key]int{}
	for _, f := range other {
		has[key{f.Rule, f.Pointer, f.Kind()}]++
	}
	var rest []rules.Finding
	for _, f := range all {
		k := key{f.Rule, f.Pointer, f.Kind()}
		if has[k]--; has[k] < 0 {
			rest = append(rest, f)
		}
	}
	return rest
}

// sameInputs says whether both sides of a pair are judged by the same texts: their own, those they refer to, and the policy.
func sameInputs(p Pair, o Options) bool {
	a, okA := p.Old.In.inputs(p.Old.Path, o)
	b, okB := p.New.In.inputs(p.New.Path, o)
	if !okA || !okB || len(a) != len(b) {
		return false
	}
	for i := range a {
		if !bytes.Equal(a[i], b[i]) {
			return false
		}
	}
	return true
}

// inputs are the texts that a design is judged by, in the order in which they are met; ok is false where one cannot be read.
func (w *Workspace) inputs(path string, o Options) (texts [][]byte, ok bool) {
	abs := absolute(path)
	seen := map[string]bool{abs: true}
	for next := []string{abs}; len(next) > 0; next = next[1:] {
		doc, err := w.shared(next[0])
		if err != nil {
			return nil, false
		}
		texts = append(texts, doc.Text)
		References(doc.Root, func(reference string) {
			if to, err := w.locate(next[0], reference); err == nil && !seen[to] {
				seen[to] = true
				next = append(next, to)
			}
		})
	}
	p := w.policyOf(abs, o)
	if p.path == "" {
		return append(texts, nil), true
	}
	doc, err := w.shared(absolute(p.path))
	if err != nil {
		return nil, false
	}
	return append(texts, doc.Text), doc.Kind == schema.Policy || o.Policy != ""
}
