package report

import (
	"bytes"
	"encoding/json"
	"errors"
	"io"
	"math"
	"path/filepath"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// Program is the name that the outputs carry.
const Program = "halfplane"

// JSON gathers findings file by file; Close writes the document (schema: FindingsSchema).
type JSON struct {
	w      io.Writer
	out    findingsDocument
	totals Totals
}

// NewJSON starts a report of the given program version.
func NewJSON(w io.Writer, version string) *JSON {
	return &JSON{w: w, out: findingsDocument{Program: Program, Version: version, Files: []fileOut{}}}
}

// File adds one file's findings.
func (j *JSON) File(f workspace.File) {
	j.totals.Add(f)
	out := fileOut{Path: clean(f.Path), SHA256: hashOf(f), Status: f.Status.String(), Policy: clean(f.Policy), Findings: []findingOut{}, Proof: proofOf(f.Proof), Outcomes: outcomesOf(f.Outcomes)}
	if f.Result != nil {
		out.Complete = &f.Result.Complete
	}
	for _, found := range f.Findings {
		out.Findings = append(out.Findings, shape(found))
	}
	j.out.Files = append(j.out.Files, out)
}

// Close writes the document.
func (j *JSON) Close() error {
	j.out.Summary = j.totals
	return encode(j.w, j.out)
}

type findingsDocument struct {
	Program string    `json:"program"`
	Version string    `json:"version"`
	Files   []fileOut `json:"files"`
	Summary Totals    `json:"summary"`
}

type fileOut struct {
	Path     string       `json:"path"`
	SHA256   string       `json:"sha-256,omitempty"`
	Status   string       `json:"status"`
	Policy   string       `json:"policy,omitempty"`
	Complete *bool        `json:"complete,omitempty"`
	Findings []findingOut `json:"findings"`
	Proof    *proofOut    `json:"proof,omitempty"`
	Outcomes []outcomeOut `json:"outcomes,omitempty"`
}

type outcomeOut struct {
	Rule    string `json:"rule"`
	Outcome string `json:"outcome"`
	Reason  string `json:"reason,omitempty"`
}

// outcomesOf is what became of each rule.
func outcomesOf(all []rules.Outcome) []outcomeOut {
	var out []outcomeOut
	for _, o := range all {
		out = append(out, outcomeOut{o.Rule.Name, o.Status.Key(), o.Reason})
	}
	return out
}

type findingOut struct {
	Rule     string       `json:"rule"`
	Severity string       `json:"severity"`
	Message  string       `json:"message"`
	Pointer  string       `json:"pointer"`
	Range    rangeOut     `json:"range"`
	Corner   settings     `json:"corner,omitempty"`
	Measured *numberOut   `json:"measured,omitempty"`
	Limit    *numberOut   `json:"limit,omitempty"`
	Nominal  *numberOut   `json:"nominal,omitempty"`
	Formula  string       `json:"formula,omitempty"`
	Related  []relatedOut `json:"related,omitempty"`
	Cause    *causeOut    `json:"cause,omitempty"`
	Words    string       `json:"corner-words,omitempty"`
	Deciders []string     `json:"deciders,omitempty"`
	About    string       `json:"about,omitempty"`
	Reason   string       `json:"reason,omitempty"`
	Mends    []mendOut    `json:"mends,omitempty"`
	Unmended string       `json:"unmended,omitempty"`
	Waiver   *waiverOut   `json:"waiver,omitempty"`
	Recorded bool         `json:"recorded,omitempty"`
	Record   *recordOut   `json:"record,omitempty"`
}

type recordOut struct {
	Severity string     `json:"severity"`
	Measured *numberOut `json:"measured,omitempty"`
	Limit    *numberOut `json:"limit,omitempty"`
}

type mendOut struct {
	Title string    `json:"title"`
	Edits []editOut `json:"edits"`
	After settings  `json:"after,omitempty"`
}

type editOut struct {
	Path    string   `json:"path,omitempty"` // where the edit is in another file than the finding
	Pointer string   `json:"pointer"`
	Range   rangeOut `json:"range"`
	Text    string   `json:"text"`
}

type waiverOut struct {
	Reason string `json:"reason"`
	Until  string `json:"until"`
}

type rangeOut struct {
	Start positionOut `json:"start"`
	End   positionOut `json:"end"`
}

type positionOut struct {
	Line   int `json:"line"`
	Column int `json:"column"`
}

type numberOut struct {
	Value float64 `json:"value"`
	Unit  string  `json:"unit"`
}

type relatedOut struct {
	Path    string   `json:"path"`
	Pointer string   `json:"pointer"`
	Range   rangeOut `json:"range"`
	Message string   `json:"message"`
}

type causeOut struct {
	Rule    string `json:"rule"`
	Pointer string `json:"pointer"`
}

func shape(f rules.Finding) findingOut {
	out := findingOut{
		Rule:     f.Rule,
		Severity: f.Severity.String(),
		Message:  f.Message,
		Pointer:  f.Pointer,
		Range:    place(f.Doc, f.Start, f.End),
		Corner:   settings(f.Corner),
		Measured: number(f.Measured),
		Limit:    number(f.Limit),
		Nominal:  number(f.Nominal),
		Formula:  f.Formula,
		Words:    f.CornerWords,
		Deciders: f.Deciders,
		About:    f.About,
		Reason:   f.Reason,
		Unmended: f.Unmended,
	}
	for _, r := range f.Related {
		out.Related = append(out.Related, relatedOut{
			Path: nameOf(r.Doc), Pointer: r.Pointer, Range: place(r.Doc, r.Start, r.End), Message: r.Message,
		})
	}
	if f.Cause != nil {
		out.Cause = &causeOut{f.Cause.Rule, f.Cause.Pointer}
	}
	for _, m := range f.Mends {
		out.Mends = append(out.Mends, mendShape(f, m))
	}
	if f.Waiver != nil {
		out.Waiver = &waiverOut{f.Waiver.Reason, f.Waiver.Until}
	}
	out.Recorded = f.Recorded
	if r := f.Record; r != nil {
		out.Record = &recordOut{r.Severity.String(), number(&rules.Number{Value: r.Measured, Unit: r.Unit}), number(&rules.Number{Value: r.Limit, Unit: r.Unit})}
	}
	return out
}

func mendShape(f rules.Finding, m rules.Mend) mendOut {
	out := mendOut{Title: m.Title, Edits: []editOut{}, After: settings(m.After)}
	for _, e := range m.Edits {
		path := ""
		if e.Doc != f.Doc {
			path = nameOf(e.Doc)
		}
		out.Edits = append(out.Edits, editOut{Path: path, Pointer: e.Pointer, Range: place(e.Doc, e.Start, e.End), Text: e.Text})
	}
	return out
}

// place is a byte range in code points from 1; without a text it is the file's first position.
func place(doc *schema.Document, start, end int) rangeOut {
	if doc == nil {
		return rangeOut{positionOut{1, 1}, positionOut{1, 1}}
	}
	a, b := doc.Position(start), doc.Position(end)
	return rangeOut{positionOut{a.Line, a.Column}, positionOut{b.Line, b.Column}}
}

func nameOf(doc *schema.Document) string {
	if doc == nil {
		return ""
	}
	return clean(doc.Name)
}

// clean is a path with '/' between its parts.
func clean(path string) string { return filepath.ToSlash(path) }

// number leaves out what JSON cannot hold: a figure that does not exist has no key.
func number(n *rules.Number) *numberOut {
	if n == nil || math.IsNaN(n.Value) || math.IsInf(n.Value, 0) {
		return nil
	}
	return &numberOut{n.Value, n.Unit}
}

// settings is an assignment of spec fields; as JSON an object in the order of the design's own axes.
type settings []analysis.Setting

// MarshalJSON keeps the order, which a map would lose.
func (s settings) MarshalJSON() ([]byte, error) {
	o := make(object, 0, len(s))
	for _, at := range s {
		o = append(o, member{at.Path, figure(at.Value)})
	}
	return o.MarshalJSON()
}

// UnmarshalJSON reads an object in its order; null is a figure that does not exist.
func (s *settings) UnmarshalJSON(text []byte) error {
	d := json.NewDecoder(bytes.NewReader(text))
	if open, err := d.Token(); err != nil || open != json.Delim('{') {
		return errors.Join(errors.New("expected an object of figures"), err)
	}
	for d.More() {
		key, err := d.Token()
		if err != nil {
			return err
		}
		var value *float64
		if err := d.Decode(&value); err != nil {
			return err
		}
		at := analysis.Setting{Path: key.(string), Value: math.NaN()}
		if value != nil {
			at.Value = *value
		}
		*s = append(*s, at)
	}
	return nil
}

// object is a JSON object whose members keep their order.
type object []member

type member struct {
	key   string
	value any
}

// MarshalJSON writes the members in their order.
func (o object) MarshalJSON() ([]byte, error) {
	out := []byte{'{'}
	for i, m := range o {
		if i > 0 {
			out = append(out, ',')
		}
		key, err := json.Marshal(m.key)
		if err != nil {
			return nil, err
		}
		value, err := json.Marshal(m.value)
		if err != nil {
			return nil, err
		}
		out = append(append(append(out, key...), ':'), value...)
	}
	return append(out, '}'), nil
}

// figure is a number that may not exist: NaN and the infinities become null.
type figure float64

// MarshalJSON writes null where there is no finite number.
func (f figure) MarshalJSON() ([]byte, error) {
	if math.IsNaN(float64(f)) || math.IsInf(float64(f), 0) {
		return []byte("null"), nil
	}
	return json.Marshal(float64(f))
}

func encode(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	return e.Encode(v)
}
