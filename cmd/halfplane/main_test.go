package main

import (
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
	"github.com/stretchr/testify/require"
)

var update = flag.Bool("update", false, "rewrite the expected outputs in testdata/script")

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"halfplane": main})
}

// TestCommands runs every script archive in testdata/script: what a person types, sees and gets as exit status.
func TestCommands(t *testing.T) {
	reference, err := filepath.Abs("../../testdata/reference")
	require.NoError(t, err)
	shelf, err := filepath.Abs("shelf")
	require.NoError(t, err)
	testscript.Run(t, testscript.Params{
		Dir:           "testdata/script",
		UpdateScripts: *update,
		Setup: func(e *testscript.Env) error {
			e.Setenv("REFERENCE", reference)
			e.Setenv("RULES", filepath.Join(filepath.Dir(reference), "rules"))
			e.Setenv("SHELF", shelf)
			e.Setenv("TERM", "xterm")
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"append":  appendTo,
			"exits":   exits,
			"large":   large,
			"replace": replace,
			"socket":  socket,
		},
	})
}

// exits runs the program and wants this exit status: exits 2 check bad.converter.yaml.
func exits(ts *testscript.TestScript, _ bool, args []string) {
	var want int
	if len(args) < 1 || len(args[0]) != 1 {
		ts.Fatalf("usage: exits STATUS ARGUMENT…")
	}
	want = int(args[0][0] - '0')
	err := ts.Exec("halfplane", args[1:]...)
	got := 0
	if e, ok := err.(interface{ ExitCode() int }); ok {
		got = e.ExitCode()
	}
	if got != want {
		ts.Fatalf("exit status %d, expected %d\n%s", got, want, ts.ReadFile("stderr"))
	}
}

// large makes a file of so many megabytes: large NAME.
func large(ts *testscript.TestScript, _ bool, args []string) {
	f, err := os.Create(ts.MkAbs(args[0]))
	ts.Check(err)
	ts.Check(f.Truncate(50 << 20))
	ts.Check(f.Close())
}

// appendTo puts one file's text behind another's: append FILE TEXT.
func appendTo(ts *testscript.TestScript, _ bool, args []string) {
	if len(args) != 2 {
		ts.Fatalf("usage: append FILE TEXT")
	}
	text := ts.ReadFile(args[0]) + ts.ReadFile(args[1])
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), []byte(text), 0o666))
}

// replace puts one text in the place of another in a file: replace FILE OLD NEW.
func replace(ts *testscript.TestScript, _ bool, args []string) {
	if len(args) != 3 {
		ts.Fatalf("usage: replace FILE OLD NEW")
	}
	text := ts.ReadFile(args[0])
	if !strings.Contains(text, args[1]) {
		ts.Fatalf("there is no %q in %s", args[1], args[0])
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), []byte(strings.ReplaceAll(text, args[1], args[2])), 0o666))
}
