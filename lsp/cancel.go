package lsp

import (
	"context"
	"encoding/json"
	"sync"

	"go.lsp.dev/jsonrpc2"
)

// calls holds the requests that are being answered, so that the client can cancel them.
type calls struct {
	mu      sync.Mutex
	running map[jsonrpc2.ID]*context.CancelFunc
}

// track registers a request and gives the function that takes it off again and frees its context.
func (c *calls) track(id jsonrpc2.ID, cancel context.CancelFunc) func() {
	own := &cancel
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.running == nil {
		c.running = map[jsonrpc2.ID]*context.CancelFunc{}
	}
	c.running[id] = own
	return func() {
		c.mu.Lock()
		defer c.mu.Unlock()
		if c.running[id] == own { // a client may have used the id again
			delete(c.running, id)
		}
		cancel()
	}
}

// cancel ends the request that the "id" of a $/cancelRequest names, if it still runs.
func (c *calls) cancel(raw json.RawMessage) {
	id, ok := requestID(raw)
	if !ok {
		return
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	if cancel := c.running[id]; cancel != nil {
		(*cancel)()
	}
}
