package lsp

import (
	"context"
	"sync"

	"halfplane/schema"
	"halfplane/workspace"
)

// desk is one open document. Its fields below the line are guarded by the server's lock.
type desk struct {
	uri    string // the client's own string: the key, and sent back unchanged
	name   string // absolute path, or the address of a document that is no file
	kind   schema.Kind
	served bool // false: not one of our kinds of file, nothing is ever said about it
	space  *workspace.Workspace
	wake   chan struct{} // holds one: the text has changed
	gone   chan struct{} // closed when the document is

	// ---
	current *snapshot // the newest text
	ctx     context.Context
	cancel  context.CancelFunc // ends the check of current
	lost    bool               // out of step with the client
	good    *outcome           // the newest result that had figures
	links   []string           // absolute paths of the shared files that its last check read
	last    []byte             // what was published for current, nil: nothing yet
}

// outcome is what a check said, with the snapshot that it was said of.
type outcome struct {
	of   *snapshot
	file workspace.File
}

// snapshot is one version of a document's text. It is immutable but for what is worked out from it, once.
type snapshot struct {
	name    string
	version int32
	text    *text
	parsed  *parsed
	echo    bool          // the text is as before: something that it refers to has changed
	ready   chan struct{} // closed when the quick check is over, or given up
	outcome *outcome      // of the newest check of it; guarded by the server's lock
}

// parsed holds a text's tree, which is made once, by whoever needs it first.
type parsed struct {
	once sync.Once
	doc  *schema.Document
}

func newSnapshot(d *desk, t *text, version int32) *snapshot {
	return &snapshot{name: d.name, version: version, text: t, parsed: &parsed{}, ready: make(chan struct{})}
}

// again is the same text to be checked anew, because something that it refers to has changed.
func (p *snapshot) again() *snapshot {
	return &snapshot{name: p.name, version: p.version, text: p.text, parsed: p.parsed, echo: true, ready: make(chan struct{})}
}

// document is the snapshot's tree.
func (p *snapshot) document() *schema.Document {
	p.parsed.once.Do(func() { p.parsed.doc = schema.Read(p.name, p.text.bytes, p.version) })
	return p.parsed.doc
}

// newDesk sets up a document; the caller holds the lock.
func (s *server) newDesk(uri string) *desk {
	d := &desk{uri: uri, name: uri, wake: make(chan struct{}, 1), gone: make(chan struct{})}
	path, isFile := filePath(uri)
	if isFile {
		d.name = path
	}
	d.kind, d.served = schema.KindOf(d.name)
	if d.served {
		d.space = s.spaceOf(d.name, isFile)
	}
	return d
}

// renew makes a snapshot the newest: the check of the one before is cancelled, and the document's goroutine woken.
func (d *desk) renew(ctx context.Context, p *snapshot) {
	d.stop()
	d.current, d.last = p, nil
	d.ctx, d.cancel = context.WithCancel(ctx)
	select {
	case d.wake <- struct{}{}:
	default:
	}
}

// stop cancels the check that runs.
func (d *desk) stop() {
	if d.cancel != nil {
		d.cancel()
	}
}

// leave ends the document's goroutine.
func (d *desk) leave() {
	d.stop()
	d.lost = true
	close(d.gone)
}
