package main

import (
	"os"
	"runtime/debug"
)

const (
	// garbagePercent lets the heap grow to five times what is in use before it is swept: a check holds a few megabytes and leaves about half a
	// megabyte behind, so that at the usual 100 % a fifth of its time went into sweeping.
	garbagePercent = 400
	// softLimit is where sweeping becomes frequent whatever garbagePercent says, in bytes.
	softLimit = 200 << 20
)

// roomy sets the collector for the program. What the environment says of it (GOGC, GOMEMLIMIT) is left alone.
func roomy() {
	if _, own := os.LookupEnv("GOGC"); !own {
		debug.SetGCPercent(garbagePercent)
	}
	if _, own := os.LookupEnv("GOMEMLIMIT"); !own {
		debug.SetMemoryLimit(softLimit)
	}
}
