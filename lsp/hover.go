package lsp

import (
	"context"
	"encoding/json"
	"strings"
	"time"

	"go.lsp.dev/protocol"

	"halfplane/rules"
	"halfplane/schema"
)

// hoverPatience is how long a hover waits for the quick check of the text that it was asked about. The check usually
// takes less; when it does not, what is known without it is shown at once.
const hoverPatience = 10 * time.Millisecond

// place is what a hover is about: one offset in one snapshot, and what is known there.
type place struct {
	*page
	doc     *schema.Document
	pointer string // of the innermost value at the offset
	onKey   bool
	offset  int
	fresh   *outcome // the check of this very text, nil: there is none yet
	good    *outcome // the newest check that had figures, perhaps of an older text; nil: none
}

// hover shows what stands at a place: a quantity with what it sets, a rule's entry in the catalogue, the rule of a finding.
func (s *server) hover(raw json.RawMessage) (answer, error) {
	var p placeParams
	if err := decode(raw, &p); err != nil {
		return nil, err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	d := s.desks[*p.Document.URI]
	if d == nil || !d.served || d.lost {
		return nothing, nil
	}
	snap := d.current
	return func(ctx context.Context) (any, error) {
		offset := snap.text.offset(*p.Position, s.columns)
		at := &place{page: &page{markdown: s.can.markdown}, doc: snap.document(), offset: offset}
		at.pointer, at.onKey = at.doc.PointerAt(offset)
		if err := s.await(ctx, snap); err != nil {
			return nil, err
		}
		s.mu.Lock()
		at.fresh, at.good = snap.outcome, d.good
		s.mu.Unlock()
		start, end, ok := at.write()
		if !ok {
			return nil, nil
		}
		area := snap.text.area(start, end, s.columns)
		return &protocol.Hover{Contents: at.contents(), Range: &area}, nil
	}, nil
}

func nothing(context.Context) (any, error) { return nil, nil }

// await waits a little for a snapshot's quick check.
func (s *server) await(ctx context.Context, snap *snapshot) error {
	timer := time.NewTimer(hoverPatience)
	defer timer.Stop()
	select {
	case <-snap.ready:
	case <-timer.C:
	case <-ctx.Done():
	}
	return ctx.Err()
}

// write fills the page and gives the range that it is about; ok is false where there is nothing to say.
func (p *place) write() (start, end int, ok bool) {
	start, end, known := p.subject()
	if known {
		p.aboutValue()
	}
	for _, f := range p.findings() {
		if !known {
			start, end = f.Start, f.End
		}
		p.aboutFinding(f)
	}
	return start, end, !p.empty()
}

// subject is the key or value at the offset; known is false between values, in a comment, and inside a mapping.
func (p *place) subject() (start, end int, known bool) {
	if entry := p.doc.FindEntry(p.pointer); p.onKey && entry != nil {
		return entry.KeyStart, entry.KeyEnd, true
	}
	n := p.doc.Find(p.pointer)
	if n == nil || n.Kind != schema.Scalar || p.offset < n.Start || p.offset > n.End {
		return 0, 0, false
	}
	return n.Start, n.End, true
}

// aboutValue writes what the catalogue, the schema and the figures have to say of the key or value.
func (p *place) aboutValue() {
	if rule := p.namedRule(); rule != nil {
		p.aboutRule(rule)
		return
	}
	info, pointer, ok := p.field()
	if !ok {
		return
	}
	p.aboutField(info, pointer)
	if pointer == "/topology" {
		p.aboutTopology()
	}
}

// field looks up the field that the place belongs to: the one itself, or for a part of a quantity's long form (its min,
// its tolerance) the quantity.
func (p *place) field() (schema.FieldInfo, string, bool) {
	for pointer := p.pointer; pointer != ""; pointer = parent(pointer) {
		info, ok := schema.LookupField(p.doc.Kind, pointer)
		if !ok {
			continue
		}
		if above, ok := schema.LookupField(p.doc.Kind, parent(pointer)); ok && above.Dimension != 0 {
			continue
		}
		return info, pointer, true
	}
	return schema.FieldInfo{}, "", false
}

func parent(pointer string) string { return pointer[:max(0, strings.LastIndexByte(pointer, '/'))] }

// findings gives those of this very text that stand at the offset, causes before consequences, at most four.
func (p *place) findings() []*rules.Finding {
	if p.fresh == nil {
		return nil
	}
	var out []*rules.Finding
	for _, consequence := range []bool{false, true} {
		for i := range p.fresh.file.Findings {
			f := &p.fresh.file.Findings[i]
			if f.Doc == p.doc && f.Start <= p.offset && p.offset <= f.End && (f.Cause != nil) == consequence && len(out) < 4 {
				out = append(out, f)
			}
		}
	}
	return out
}
