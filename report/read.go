package report

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"github.com/santhosh-tekuri/jsonschema/v5"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// Read reads what JSON wrote, so that results of several runs can be joined and written in any form. The texts that the
// findings are about are not needed. The error says what does not fit the schema, and where.
func Read(name string, text []byte) (files []workspace.File, version string, err error) {
	text = bytes.TrimPrefix(text, []byte("\ufeff"))
	var plain any
	if err := json.Unmarshal(text, &plain); err != nil {
		return nil, "", fmt.Errorf("%s%s: this is no JSON: %w", name, placeOf(text, err), err)
	}
	if err := matchesSchema(plain); err != nil {
		return nil, "", fmt.Errorf("%s: this is not what 'halfplane check --as json' writes: %w", name, err)
	}
	var document findingsDocument
	if err := json.Unmarshal(text, &document); err != nil {
		return nil, "", fmt.Errorf("%s: %w", name, err)
	}
	for _, f := range document.Files {
		file, err := f.file()
		if err != nil {
			return nil, "", fmt.Errorf("%s: %s: %w", name, f.Path, err)
		}
		files = append(files, file)
	}
	return files, document.Version, nil
}

// placeOf is ":line:column" of a mistake in JSON, "" where it is not known.
func placeOf(text []byte, err error) string {
	var wrong *json.SyntaxError
	if !errors.As(err, &wrong) {
		return ""
	}
	before := text[:min(int(wrong.Offset), len(text))]
	line := bytes.Count(before, []byte("\n")) + 1
	return fmt.Sprintf(":%d:%d", line, len([]rune(string(before[bytes.LastIndexByte(before, '\n')+1:]))))
}

// matchesSchema compares a document with the schema and gives the first thing that is wrong, with its JSON pointer.
func matchesSchema(v any) error {
	c := jsonschema.NewCompiler()
	if err := c.AddResource("findings.json", bytes.NewReader(findingsSchema)); err != nil {
		return err
	}
	s, err := c.Compile("findings.json")
	if err != nil {
		return err
	}
	err = s.Validate(v)
	var wrong *jsonschema.ValidationError
	if !errors.As(err, &wrong) {
		return err
	}
	for len(wrong.Causes) > 0 {
		wrong = wrong.Causes[0]
	}
	return fmt.Errorf("at %q %s", wrong.InstanceLocation, wrong.Message)
}

// file is one file's entry as the check gave it.
func (f fileOut) file() (workspace.File, error) {
	out := workspace.File{Path: f.Path, Root: workspace.RootOf(f.Path), SHA256: f.SHA256, StandIn: true, Status: workspace.Checked, Policy: f.Policy, Proof: f.Proof.proof()}
	if f.Status == workspace.Unreadable.String() {
		out.Status = workspace.Unreadable
	}
	if f.Complete != nil {
		out.Result = &analysis.Result{Complete: *f.Complete}
	}
	for _, o := range f.Outcomes {
		if rule := rules.Find(o.Rule); rule != nil {
			out.Outcomes = append(out.Outcomes, rules.Outcome{Rule: rule, Status: statusOf(o.Outcome), Reason: o.Reason})
		}
	}
	docs, err := f.texts()
	if err != nil {
		return out, err
	}
	out.Document = docs[f.Path]
	for _, found := range f.Findings {
		back, err := found.finding(f.Path, docs)
		if err != nil {
			return out, err
		}
		out.Findings = append(out.Findings, back)
		out.Defect = out.Defect || found.Rule == "internal"
	}
	return out, nil
}

// texts are stand-ins for every text that the findings of a file point into.
func (f fileOut) texts() (map[string]*schema.Document, error) {
	s := shapes{}
	if err := s.reach(f.Path, positionOut{1, 1}); err != nil {
		return nil, err
	}
	for _, found := range f.Findings {
		places := []spot{{f.Path, found.Range}}
		for _, r := range found.Related {
			if r.Path != "" {
				places = append(places, spot{r.Path, r.Range})
			}
		}
		for _, m := range found.Mends {
			for _, e := range m.Edits {
				places = append(places, spot{e.in(f.Path), e.Range})
			}
		}
		for _, p := range places {
			if err := errors.Join(s.reach(p.path, p.at.Start), s.reach(p.path, p.at.End)); err != nil {
				return nil, err
			}
		}
	}
	return s.standIns()
}

// spot is a range in a file.
type spot struct {
	path string
	at   rangeOut
}

// in is the file that an edit is in.
func (e editOut) in(own string) string {
	if e.Path != "" {
		return e.Path
	}
	return own
}

func statusOf(key string) rules.Status {
	for s := rules.Holds; s <= rules.NotAssessed; s++ {
		if s.Key() == key {
			return s
		}
	}
	return rules.NotAssessed
}

// finding is one finding as the rule gave it.
func (f findingOut) finding(path string, docs map[string]*schema.Document) (rules.Finding, error) {
	severity, _ := rules.ParseSeverity(f.Severity)
	out := rules.Finding{
		Rule: f.Rule, Severity: severity, Message: f.Message, Formula: f.Formula, Pointer: f.Pointer, Doc: docs[path],
		Corner: f.Corner, CornerWords: f.Words, Nominal: f.Nominal.number(), Measured: f.Measured.number(), Limit: f.Limit.number(),
		Deciders: f.Deciders, About: f.About, Reason: f.Reason, Recorded: f.Recorded, Unmended: f.Unmended,
	}
	if rules.Find(f.Rule) == nil {
		return out, fmt.Errorf("there is no rule %q in this version of the program", f.Rule)
	}
	out.Start, out.End = bytesOf(out.Doc, f.Range)
	for _, r := range f.Related {
		back := schema.Related{Doc: docs[r.Path], Pointer: r.Pointer, Message: r.Message}
		if back.Doc != nil {
			back.Start, back.End = bytesOf(back.Doc, r.Range)
		}
		out.Related = append(out.Related, back)
	}
	if f.Cause != nil {
		out.Cause = &rules.Cause{Rule: f.Cause.Rule, Pointer: f.Cause.Pointer}
	}
	if f.Waiver != nil {
		out.Waiver = &rules.Waiver{Reason: f.Waiver.Reason, Until: f.Waiver.Until}
	}
	if f.Record != nil {
		out.Record = f.Record.record(out, path)
	}
	for _, m := range f.Mends {
		mend := rules.Mend{Title: m.Title, After: m.After}
		for _, e := range m.Edits {
			doc := docs[e.in(path)]
			start, end := bytesOf(doc, e.Range)
			mend.Edits = append(mend.Edits, rules.Edit{Doc: doc, Pointer: e.Pointer, Start: start, End: end, Text: e.Text})
		}
		out.Mends = append(out.Mends, mend)
	}
	return out, nil
}

func (n *numberOut) number() *rules.Number {
	if n == nil {
		return nil
	}
	return &rules.Number{Value: n.Value, Unit: n.Unit}
}

// SameFile says whether two entries for one path say the same.
func SameFile(a, b workspace.File) bool {
	print := func(f workspace.File) string {
		var out strings.Builder
		j := NewJSON(&out, "")
		j.File(f)
		if j.Close() != nil {
			return ""
		}
		return out.String()
	}
	return print(a) == print(b)
}
