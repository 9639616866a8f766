package lsp

import (
	"encoding/json"
	"fmt"

	"go.lsp.dev/jsonrpc2"
)

// opened takes a document from the client. Opening one that is open replaces its text.
func (s *server) opened(raw json.RawMessage) error {
	var p openParams
	if err := decode(raw, &p); err != nil {
		return err
	}
	uri := *p.Document.URI
	version := int32(0)
	if p.Document.Version != nil {
		version = *p.Document.Version
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if old := s.desks[uri]; old != nil {
		old.leave()
	}
	d := s.newDesk(uri)
	s.desks[uri] = d
	d.renew(s.root, newSnapshot(d, newText([]byte(*p.Document.Text)), version))
	if d.served {
		go s.work(d)
	}
	return nil
}

// changed applies content changes to an open document. A change that cannot be read is refused whole; the document is
// then out of step, and nothing is said about it until its whole text comes again.
func (s *server) changed(raw json.RawMessage) error {
	var p changeParams
	err := decode(raw, &p)
	s.mu.Lock()
	defer s.mu.Unlock()
	if err != nil {
		if d := s.desks[reads[string](raw, "textDocument", "uri")]; d != nil {
			s.lose(d)
		}
		return err
	}
	d := s.desks[*p.Document.URI]
	if d == nil {
		return notOpen(*p.Document.URI)
	}
	if d.lost {
		if p.Changes = fromWhole(p.Changes); len(p.Changes) == 0 {
			return fmt.Errorf("%s is out of step, its whole text is needed", d.uri)
		}
		d.lost = false
	}
	version := d.current.version
	if p.Document.Version != nil {
		version = *p.Document.Version
	}
	s.shed(d.current.text)
	d.renew(s.root, newSnapshot(d, d.current.text.changed(p.Changes, s.columns), version))
	return nil
}

// fromWhole gives the changes from the first one that is a whole text.
func fromWhole(changes []change) []change {
	for i, c := range changes {
		if c.Range == nil {
			return changes[i:]
		}
	}
	return nil
}

// lose marks a document as out of step and takes its diagnostics away, which would point at the wrong places.
func (s *server) lose(d *desk) {
	d.lost = true
	d.stop()
	s.clear(d)
}

// closed forgets a document: the text on disk counts again, also for the designs that use it.
func (s *server) closed(raw json.RawMessage) error {
	var p closeParams
	if err := decode(raw, &p); err != nil {
		return err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	d := s.desks[*p.Document.URI]
	if d == nil {
		return notOpen(*p.Document.URI)
	}
	d.leave()
	s.shed(d.current.text)
	delete(s.desks, d.uri)
	if d.served {
		s.clear(d)
		d.space.Overlay(d.name, nil)
		s.renewUsers(d)
	}
	return nil
}

func notOpen(uri string) error {
	return jsonrpc2.Errorf(jsonrpc2.InvalidParams, "%s is not open", uri)
}
