package report

import (
	"crypto/sha256"
	"encoding/hex"
	"strconv"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// fingerprint names the way in which results are told apart; another way gets another number.
const fingerprint = "halfplane/v1"

// result is one finding.
func (s *SARIF) result(f workspace.File, found rules.Finding) sarifResult {
	place := s.location(f, found.Doc, found.Start, found.End)
	place.Logical = logical(found.Pointer)
	out := sarifResult{
		RuleID: found.Rule, RuleIndex: s.index[found.Rule], Kind: "fail", Level: found.Severity.String(), Message: sarifText{sentences(found)},
		Locations:    []sarifLocation{place},
		Fingerprints: map[string]string{fingerprint: s.identity(f, found)},
		Suppressions: suppressions(found),
		Properties:   propertiesOf(found),
	}
	for i, r := range found.Related {
		at := s.location(f, r.Doc, r.Start, r.End)
		s.artifacts.add(at.Physical.Address, "")
		at.ID, at.Logical, at.Message = i+1, logical(r.Pointer), &sarifText{escapedMessage(safe(r.Message))}
		out.Related = append(out.Related, at)
	}
	for _, m := range found.Mends {
		out.Fixes = append(out.Fixes, s.fix(f, m))
	}
	return out
}

// identity is the same for the same finding however lines move and figures change, wherever the program runs. Findings that
// nothing else tells apart are numbered.
func (s *SARIF) identity(f workspace.File, found rules.Finding) string {
	key := strings.Join([]string{found.Rule, s.addresses.of(f.Root, f.Path).URI, found.Pointer, found.Kind()}, "\x00")
	s.seen[key]++
	sum := sha256.Sum256([]byte(key + "\x00" + strconv.Itoa(s.seen[key])))
	return hex.EncodeToString(sum[:16])
}

// sentences is the finding as prose: what is wrong, where it is worst, what decides it, what it follows from.
func sentences(f rules.Finding) string {
	words := []string{f.Message}
	if f.CornerWords != "" {
		words = append(words, "worst at "+f.CornerWords)
	}
	words = append(words, f.Deciders...)
	if f.Cause != nil {
		words = append(words, "follows from "+f.Cause.Rule)
	}
	if f.Record != nil && !f.Recorded {
		words = append(words, recordWords(f.Record))
	}
	for i := range words {
		words[i] = sentence(words[i])
	}
	return strings.Join(words, " ")
}

// sentence is a text with a capital and a full stop, as a message.
func sentence(text string) string { return escapedMessage(capital(safe(text))) + "." }

// escapedMessage keeps a text from being more than text: braces would be places to put arguments (3.11.5), and a bracket before
// a parenthesis a link (3.11.6).
func escapedMessage(text string) string {
	return strings.NewReplacer("{", "{{", "}", "}}", "](", `\](`).Replace(text)
}

// suppressions says who accepted a finding: the file itself, or the ledger beside it. An empty list says that nobody did.
func suppressions(f rules.Finding) []sarifSuppression {
	switch {
	case f.Waiver != nil:
		return []sarifSuppression{{"inSource", "accepted", safe(f.Waiver.Reason) + " (until " + safe(f.Waiver.Until) + ")"}}
	case f.Recorded:
		return []sarifSuppression{{"external", "accepted", "on record in the ledger"}}
	}
	return []sarifSuppression{}
}

// propertiesOf is the finding's numbers and ties, as in the JSON form.
func propertiesOf(f rules.Finding) sarifProperties {
	one := shape(f)
	return sarifProperties{
		Corner: one.Corner, Measured: one.Measured, Limit: one.Limit, Nominal: one.Nominal, Formula: one.Formula,
		About: one.About, Cause: one.Cause, Record: one.Record,
	}
}

// fix is a repair: what it comes to, and the edits of each file.
func (s *SARIF) fix(f workspace.File, m rules.Mend) sarifFix {
	fix := sarifFix{Description: sarifText{escapedMessage(safe(mendWords(m)))}}
	if len(m.After) > 0 {
		fix.Properties = &sarifFixBag{settings(m.After)}
	}
	at := map[*schema.Document]int{}
	for _, e := range m.Edits {
		i, known := at[e.Doc]
		if !known {
			i = len(fix.Changes)
			at[e.Doc] = i
			fix.Changes = append(fix.Changes, sarifChange{Location: s.location(f, e.Doc, 0, 0).Physical.Address})
		}
		fix.Changes[i].Replacements = append(fix.Changes[i].Replacements, sarifReplacement{*regionOf(e.Doc, e.Start, e.End), sarifText{e.Text}})
	}
	return fix
}

// location is a range in a text; without one it is the start of the file that was checked.
func (s *SARIF) location(f workspace.File, doc *schema.Document, start, end int) sarifLocation {
	name := nameOf(doc)
	if name == "" {
		name = f.Path
	}
	return sarifLocation{Physical: sarifPhysical{s.addresses.of(f.Root, name), regionOf(doc, start, end)}}
}

func regionOf(doc *schema.Document, start, end int) *sarifRegion {
	at := place(doc, start, end)
	return &sarifRegion{at.Start.Line, at.Start.Column, at.End.Line, at.End.Column}
}

// logical is the place inside the data: the JSON pointer, and the key that it ends in. An item of a list has no key.
func logical(pointer string) []sarifLogical {
	if pointer == "" {
		return nil
	}
	out := sarifLogical{FullyQualifiedName: pointer}
	key := strings.NewReplacer("~1", "/", "~0", "~").Replace(pointer[strings.LastIndexByte(pointer, '/')+1:])
	if _, err := strconv.Atoi(key); err != nil {
		out.Name, out.Kind = key, "property"
	}
	return []sarifLogical{out}
}
