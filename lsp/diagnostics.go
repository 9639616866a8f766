package lsp

import (
	"fmt"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"halfplane/rules"
	"halfplane/schema"
)

// source names the server, in every diagnostic and to the client.
const source = "halfplane"

func rawParams(body []byte) jsonrpc2.RawMessage { return body }

// diagnostics turns findings into the protocol's form, in their order. The caller holds the lock.
func (s *server) diagnostics(d *desk, snap *snapshot, findings []rules.Finding) []protocol.Diagnostic {
	places := places{s: s, own: d, snap: snap, texts: map[*schema.Document]*text{}}
	out := make([]protocol.Diagnostic, 0, len(findings))
	for i := range findings {
		if findings[i].Severity > rules.None {
			out = append(out, s.diagnostic(&places, findings, i))
		}
	}
	return out
}

// diagnostic is one finding. A consequence of another is a hint: one cause shows one error, and the consequence, at its
// own place, points to it.
func (s *server) diagnostic(at *places, findings []rules.Finding, i int) protocol.Diagnostic {
	f := &findings[i]
	out := protocol.Diagnostic{
		Range:    at.finding(f),
		Severity: severity(f),
		Code:     protocol.String(f.Rule),
		Source:   protocol.NewOptional(source),
		Message:  protocol.String(f.Message),
	}
	if f.Waiver != nil {
		out.Severity = protocol.DiagnosticSeverityHint
		out.Message = protocol.String(fmt.Sprintf("waived until %s (%s): %s", f.Waiver.Until, f.Waiver.Reason, f.Message))
	}
	if page := s.settings.page(f.Rule); page != "" && s.can.codeLinks {
		out.CodeDescription = protocol.CodeDescription{Href: uri.URI(page)}
	}
	if f.Rule == "waiver-unused" && s.can.tags {
		out.Tags = protocol.NewDiagnosticTags(protocol.DiagnosticTagUnnecessary)
	}
	if s.can.related {
		out.RelatedInformation = related(at, findings, f, out.Range)
	}
	return out
}

func severity(f *rules.Finding) protocol.DiagnosticSeverity {
	switch {
	case f.Cause != nil:
		return protocol.DiagnosticSeverityHint
	case f.Severity == rules.Error:
		return protocol.DiagnosticSeverityError
	case f.Severity == rules.Warning:
		return protocol.DiagnosticSeverityWarning
	}
	return protocol.DiagnosticSeverityInformation
}

// related gives the places that belong to a finding: its cause, the corner where it is worst (at its own place, since a
// corner has none), and the other values that decide it.
func related(at *places, findings []rules.Finding, f *rules.Finding, own protocol.Range) []protocol.DiagnosticRelatedInformation {
	var out []protocol.DiagnosticRelatedInformation
	add := func(where protocol.Location, message string) {
		out = append(out, protocol.DiagnosticRelatedInformation{Location: where, Message: message})
	}
	if f.Cause != nil {
		for i := range findings {
			if c := &findings[i]; c.Rule == f.Cause.Rule && c.Pointer == f.Cause.Pointer {
				add(at.location(c.Doc, c.Start, c.End), fmt.Sprintf("follows from %s: %s", c.Rule, c.Message))
				break
			}
		}
	}
	if f.Doc != nil && !at.mine(f.Doc) {
		add(at.location(f.Doc, f.Start, f.End), "here")
	}
	if f.CornerWords != "" {
		add(protocol.Location{URI: uri.URI(at.own.uri), Range: own}, "worst at "+f.CornerWords)
	}
	for _, r := range f.Related {
		if r.Doc != nil {
			add(at.location(r.Doc, r.Start, r.End), r.Message)
		}
	}
	return out
}

// places turns offsets in documents into places for the client. It lives for one publish.
type places struct {
	s     *server
	own   *desk
	snap  *snapshot
	texts map[*schema.Document]*text // of other documents, indexed when first needed
}

// mine tells whether doc is the document that was checked.
func (p *places) mine(doc *schema.Document) bool {
	return doc == p.snap.parsed.doc
}

// finding is the range of a finding in its own document; one that lies elsewhere stands at the top and is related.
func (p *places) finding(f *rules.Finding) protocol.Range {
	if f.Doc == nil || !p.mine(f.Doc) {
		return protocol.Range{}
	}
	return p.snap.text.area(f.Start, f.End, p.s.columns)
}

// location is a place in any document, under the client's own address where it has the document open.
func (p *places) location(doc *schema.Document, start, end int) protocol.Location {
	if p.mine(doc) {
		return protocol.Location{URI: uri.URI(p.own.uri), Range: p.snap.text.area(start, end, p.s.columns)}
	}
	t := p.texts[doc]
	if t == nil {
		t = newText(doc.Text)
		p.texts[doc] = t
	}
	return protocol.Location{URI: uri.URI(p.s.address(doc.Name)), Range: t.area(start, end, p.s.columns)}
}
