package lsp

import (
	"bytes"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"halfplane/workspace"
)

// publish sends a result if it is still one of the newest text. The question and the sending stand under one lock, the
// same under which texts change, so no result of an old text ever follows one of a newer. A full check that says the same
// as the quick one before it is not sent again.
func (s *server) publish(d *desk, snap *snapshot, file workspace.File) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if d.current != snap || d.lost {
		return
	}
	o := &outcome{of: snap, file: file}
	snap.outcome = o
	if file.Result != nil {
		d.good = o
	}
	body, err := protocol.Marshal(&protocol.PublishDiagnosticsParams{
		URI:         uri.URI(d.uri),
		Version:     protocol.NewOptional(snap.version),
		Diagnostics: s.diagnostics(d, snap, file.Findings),
	})
	if err != nil {
		s.log.Error("encoding diagnostics", "document", d.uri, "error", err)
		return
	}
	if bytes.Equal(body, d.last) {
		return
	}
	d.last = body
	s.send(body)
}

// clear takes a document's diagnostics away. It carries no version: what is cleared may be closed, and opened again with
// a lower one. The caller holds the lock.
func (s *server) clear(d *desk) {
	if !d.served {
		return
	}
	body, err := protocol.Marshal(&protocol.PublishDiagnosticsParams{URI: uri.URI(d.uri), Diagnostics: []protocol.Diagnostic{}})
	if err == nil {
		d.last = nil
		s.send(body)
	}
}

// send publishes encoded diagnostics. It does not wait for the client; a connection that is over needs none.
func (s *server) send(body []byte) {
	_ = s.conn.Notify(s.root, protocol.MethodTextDocumentPublishDiagnostics, rawParams(body))
}
