package main

import (
	"net"

	"github.com/rogpeppe/go-internal/testscript"
)

// socket makes a socket that stays for the length of the script: socket NAME.
func socket(ts *testscript.TestScript, _ bool, args []string) {
	// The address of a socket is short; a script's own folder is not. Its name is made relative by going there.
	l, err := net.Listen("unix", ts.MkAbs(args[0]))
	if err != nil {
		ts.Fatalf("no socket: %v", err)
	}
	ts.Defer(func() { l.Close() })
}
