package lsp

import (
	"errors"
	"io"
	"strconv"
	"sync"
	"time"
)

// maxWaiting is how many bytes may wait for a client that does not read before it counts as gone. Four of the longest
// messages: no healthy client is ever behind by that much.
const maxWaiting = 4 * maxBody

var errOutbox = errors.New("the client does not read")

// outbox holds what is on its way to the client, in order. One goroutine writes; whoever puts a message never waits.
type outbox struct {
	to   io.Writer
	fail func(error) // told once, when the client cannot be written to

	mu      sync.Mutex
	more    sync.Cond
	waiting []byte
	closed  bool
	broken  bool
	empty   chan struct{} // closed when the writing goroutine has ended
}

func newOutbox(to io.Writer, fail func(error)) *outbox {
	o := &outbox{to: to, fail: fail, empty: make(chan struct{})}
	o.more.L = &o.mu
	go o.write()
	return o
}

// put frames a body and queues it.
func (o *outbox) put(body []byte) error {
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.closed || o.broken {
		return io.ErrClosedPipe
	}
	if len(o.waiting)+len(body) > maxWaiting {
		o.broken = true
		go o.fail(errOutbox)
		return errOutbox
	}
	o.waiting = append(o.waiting, "Content-Length: "...)
	o.waiting = strconv.AppendInt(o.waiting, int64(len(body)), 10)
	o.waiting = append(o.waiting, "\r\n\r\n"...)
	o.waiting = append(o.waiting, body...)
	o.more.Signal()
	return nil
}

// write sends what waits, all of it at once, until the outbox is closed and empty.
func (o *outbox) write() {
	defer close(o.empty)
	var spare []byte
	for {
		o.mu.Lock()
		for len(o.waiting) == 0 && !o.closed {
			o.more.Wait()
		}
		if len(o.waiting) == 0 {
			o.mu.Unlock()
			return
		}
		batch := o.waiting
		o.waiting = spare[:0]
		o.mu.Unlock()
		if _, err := o.to.Write(batch); err != nil {
			o.mu.Lock()
			o.broken, o.waiting = true, nil
			o.mu.Unlock()
			o.fail(err)
			return
		}
		if spare = batch; cap(spare) > 1<<20 {
			spare = nil // one long message must not be held for good
		}
	}
}

// close lets what waits go out and waits for that, no longer than the given time.
func (o *outbox) close(patience time.Duration) {
	o.mu.Lock()
	o.closed = true
	o.more.Signal()
	o.mu.Unlock()
	select {
	case <-o.empty:
	case <-time.After(patience):
	}
}
