package report

import (
	"io"
	"math"

	"halfplane/rules"
	"halfplane/workspace"
)

// JSONComparison gathers comparisons; Close writes the document (schema: ComparisonSchema).
type JSONComparison struct {
	w   io.Writer
	out comparisonDocument
}

// NewJSONComparison starts a report of what stands on both sides.
func NewJSONComparison(w io.Writer, version, before, after string) *JSONComparison {
	return &JSONComparison{w: w, out: comparisonDocument{Program: Program, Version: version, Old: before, New: after, Designs: []comparedOut{}}}
}

type comparisonDocument struct {
	Program string           `json:"program"`
	Version string           `json:"version"`
	Old     string           `json:"old"`
	New     string           `json:"new"`
	Designs []comparedOut    `json:"designs"`
	Summary ComparisonTotals `json:"summary"`
}

type comparedOut struct {
	Path     string       `json:"path"`
	From     string       `json:"from,omitempty"`
	Change   string       `json:"change"`
	Stable   *stableOut   `json:"stable,omitempty"`
	Figures  []changeOut  `json:"figures,omitempty"`
	Parts    []partOut    `json:"parts,omitempty"`
	Appeared []findingOut `json:"appeared,omitempty"` // findings that are new
	Gone     []findingOut `json:"gone,omitempty"`
	Findings []findingOut `json:"findings,omitempty"` // of what cannot be read
}

type stableOut struct {
	Before *bool `json:"before,omitempty"`
	After  bool  `json:"after"`
}

type changeOut struct {
	Figure  string     `json:"figure"`
	Unit    string     `json:"unit"`
	Before  *boundOut  `json:"before,omitempty"`
	After   *boundOut  `json:"after,omitempty"`
	Verdict string     `json:"verdict"`
	Shares  []shareOut `json:"explained-by,omitempty"`
}

type boundOut struct {
	Value       figure   `json:"value"`
	Limit       *figure  `json:"limit,omitempty"`
	Corner      settings `json:"corner,omitempty"`
	CornerWords string   `json:"corner-words,omitempty"`
}

type shareOut struct {
	Part   string  `json:"part"`
	Effect float64 `json:"effect"`
}

type partOut struct {
	Part   string     `json:"part"`
	Values []valueOut `json:"values"`
}

type valueOut struct {
	Pointer string `json:"pointer"`
	Old     string `json:"old"`
	New     string `json:"new"`
}

// Design adds one design.
func (j *JSONComparison) Design(c workspace.Comparison) {
	j.out.Summary.Add(&c)
	out := comparedOut{Path: clean(c.Path), From: clean(c.From), Change: c.Change.String()}
	if c.Change == workspace.Changed || c.Change == workspace.Added {
		out.Stable = &stableOut{After: c.After.Stable}
		if c.Change == workspace.Changed {
			out.Stable.Before = &c.Before.Stable
		}
	}
	for _, f := range c.Figures {
		entry := changeOut{Figure: f.Figure, Unit: f.Unit, Before: boundOf(f.Before), After: boundOf(f.After), Verdict: f.Verdict.String()}
		for _, s := range f.Shares {
			entry.Shares = append(entry.Shares, shareOut{c.Parts[s.Part].Name, s.Effect})
		}
		out.Figures = append(out.Figures, entry)
	}
	for _, p := range c.Parts {
		part := partOut{Part: p.Name}
		for _, v := range p.Values {
			part.Values = append(part.Values, valueOut(v))
		}
		out.Parts = append(out.Parts, part)
	}
	out.Appeared, out.Gone = findingsOut(c.Appeared), findingsOut(c.Gone)
	out.Findings = findingsOut(unreadFindings(&c))
	j.out.Designs = append(j.out.Designs, out)
}

func findingsOut(all []rules.Finding) []findingOut {
	var out []findingOut
	for _, f := range all {
		out = append(out, shape(f))
	}
	return out
}

func boundOf(b *rules.Bound) *boundOut {
	if b == nil {
		return nil
	}
	out := &boundOut{Value: figure(b.Value), Corner: settings(b.Corner), CornerWords: b.CornerWords}
	if !math.IsNaN(b.Limit) {
		out.Limit = pointer(b.Limit)
	}
	return out
}

// Close writes the document.
func (j *JSONComparison) Close() error { return encode(j.w, j.out) }
