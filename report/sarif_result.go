package report

import (
	"crypto/sha256"
	"encoding/hex"
	"net/url"
	"path/filepath"
	"strconv"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// result is one finding. seen counts findings of one identity in the file.
func (s *SARIF) result(f workspace.File, found rules.Finding, seen map[string]int) sarifResult {
	place := s.location(f, found.Doc, found.Start, found.End)
	if found.Pointer != "" {
		place.Logical = []sarifLogical{{FullyQualifiedName: found.Pointer}}
	}
	out := sarifResult{
		RuleID: found.Rule, RuleIndex: s.index[found.Rule], Level: found.Severity.String(), Message: sarifText{sentences(found)},
		Locations:    []sarifLocation{place},
		Fingerprints: map[string]string{fingerprint: s.identity(f, found, seen)},
		Suppressions: suppressions(found),
		Properties: sarifProperties{
			Corner: settings(found.Corner), Measured: number(found.Measured), Limit: number(found.Limit), Nominal: number(found.Nominal), Formula: found.Formula,
		},
	}
	if found.Cause != nil {
		out.Properties.Cause = &causeOut{found.Cause.Rule, found.Cause.Pointer}
	}
	for i, r := range found.Related {
		s.artifact(f, r.Doc, false)
		at := s.location(f, r.Doc, r.Start, r.End)
		at.ID, at.Message = i+1, &sarifText{r.Message}
		out.Related = append(out.Related, at)
	}
	for _, m := range found.Mends {
		out.Fixes = append(out.Fixes, s.fix(f, m))
	}
	return out
}

// sentences is the finding as prose: what is wrong, where it is worst, what decides it.
func sentences(f rules.Finding) string {
	text := capital(safe(f.Message)) + "."
	if f.CornerWords != "" {
		text += " Worst at " + safe(f.CornerWords) + "."
	}
	for _, words := range f.Deciders {
		text += " " + capital(safe(words)) + "."
	}
	return text
}

// identity is the same for the same finding however lines move and figures change, wherever the program runs.
func (s *SARIF) identity(f workspace.File, found rules.Finding, seen map[string]int) string {
	key := strings.Join([]string{found.Rule, addressOf(f, f.Path), found.Pointer, found.Kind()}, "\x00")
	seen[key]++
	sum := sha256.Sum256([]byte(key + "\x00" + strconv.Itoa(seen[key])))
	return hex.EncodeToString(sum[:16])
}

// suppressions says who accepted a finding: the file itself, or the ledger beside it. An empty list says that nobody did.
func suppressions(f rules.Finding) []sarifSuppression {
	switch {
	case f.Waiver != nil:
		return []sarifSuppression{{"inSource", "accepted", f.Waiver.Reason + " (until " + f.Waiver.Until + ")"}}
	case f.Recorded:
		return []sarifSuppression{{"external", "accepted", "on record in the ledger"}}
	}
	return []sarifSuppression{}
}

func (s *SARIF) fix(f workspace.File, m rules.Mend) sarifFix {
	fix := sarifFix{Description: sarifText{m.Title}}
	at := map[*schema.Document]int{}
	for _, e := range m.Edits {
		i, known := at[e.Doc]
		if !known {
			i = len(fix.Changes)
			at[e.Doc] = i
			fix.Changes = append(fix.Changes, sarifChange{Location: sarifAddress{addressOf(f, nameOf(e.Doc)), sourceRoot}})
		}
		fix.Changes[i].Replacements = append(fix.Changes[i].Replacements, sarifReplacement{regionOf(e.Doc, e.Start, e.End), sarifText{e.Text}})
	}
	return fix
}

func (s *SARIF) location(f workspace.File, doc *schema.Document, start, end int) sarifLocation {
	name := nameOf(doc)
	if name == "" {
		name = f.Path
	}
	return sarifLocation{Physical: sarifPhysical{sarifAddress{addressOf(f, name), sourceRoot}, regionOf(doc, start, end)}}
}

func regionOf(doc *schema.Document, start, end int) sarifRegion {
	at := place(doc, start, end)
	return sarifRegion{at.Start.Line, at.Start.Column, at.End.Line, at.End.Column}
}

// addressOf is a file's path relative to the workspace's root, as a URI reference (RFC 3986). A path is as it was given: it
// may be relative to the working folder.
func addressOf(f workspace.File, name string) string {
	path := filepath.FromSlash(name)
	if abs, err := filepath.Abs(path); err == nil && f.Root != "" {
		if rel, err := filepath.Rel(f.Root, abs); err == nil {
			path = rel
		}
	}
	parts := strings.Split(filepath.ToSlash(path), "/")
	for i, p := range parts {
		parts[i] = strings.ReplaceAll(url.PathEscape(p), ":", "%3A") // a colon in the first part would look like a scheme
	}
	return strings.Join(parts, "/")
}
