package lsp

import (
	"os"
	"runtime/debug"
	"time"
)

const (
	// garbagePercent lets the heap grow to five times what is in use before it is swept. A server with one file holds 3 to
	// 4 MB and one check leaves about 1 MB behind, so that at the usual 100 % every fourth keystroke would meet a sweep:
	// measured, the 99th percentile of an edit fell to half, for 12 MB more of resident memory.
	garbagePercent = 400
	// softLimit is where sweeping becomes frequent whatever garbagePercent says, in bytes: the room that is promised for a
	// server with a large workspace.
	softLimit = 150 << 20
	// largeText is a text whose memory is given back to the system when it has gone, in bytes, and shedAfter how long
	// after: no real spec file is as large, a pasted log may be.
	largeText = 1 << 20
	shedAfter = 2 * time.Second
)

// roomy sets the collector for a process that serves an editor, and gives the function that sets it back. What the
// environment says of it (GOGC, GOMEMLIMIT) is left alone.
func roomy() (back func()) {
	percent, limit := 0, int64(0)
	_, ownPercent := os.LookupEnv("GOGC")
	_, ownLimit := os.LookupEnv("GOMEMLIMIT")
	if !ownPercent {
		percent = debug.SetGCPercent(garbagePercent)
	}
	if !ownLimit {
		limit = debug.SetMemoryLimit(softLimit)
	}
	return func() {
		if !ownPercent {
			debug.SetGCPercent(percent)
		}
		if !ownLimit {
			debug.SetMemoryLimit(limit)
		}
	}
}

// shed is told of a text that has been replaced or closed. The caller holds the lock.
func (s *server) shed(t *text) {
	switch {
	case len(t.bytes) < largeText:
	case s.shedding == nil:
		s.shedding = time.AfterFunc(shedAfter, debug.FreeOSMemory)
	default:
		s.shedding.Reset(shedAfter)
	}
}
