package lsp

import (
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"time"

	"go.lsp.dev/protocol"
)

// settings are what a client can set, at the start (initializationOptions) and later (workspace/didChangeConfiguration,
// under "halfplane"):
//
//	rule-pages  address to which "#RULE" is added for the link of a diagnostic's code
//	debounce    milliseconds to wait after a change before the quick check, 0 unless set
//	pause       milliseconds without a change before the full check, 300 unless set
type settings struct {
	debounce, pause time.Duration
	pages           string
}

// longest bounds both times, so that a slip of the keyboard does not switch the server off.
const longest = time.Minute

// with takes over what the client has set; anything of the wrong type is left as it was.
func (t settings) with(raw json.RawMessage) settings {
	if v := reads[*float64](raw, "debounce"); v != nil {
		t.debounce = milliseconds(*v)
	}
	if v := reads[*float64](raw, "pause"); v != nil {
		t.pause = milliseconds(*v)
	}
	if v := reads[*string](raw, "rule-pages"); v != nil {
		t.pages = *v
	}
	return t
}

func milliseconds(v float64) time.Duration {
	return time.Duration(max(0, min(v, float64(longest/time.Millisecond))) * float64(time.Millisecond))
}

// page is the address of a rule's page, "" where there is none.
func (t settings) page(rule string) string {
	if t.pages == "" {
		return ""
	}
	return t.pages + "#" + rule
}

// cataloguePages are the names under which the catalogue of rules is looked for beside the program, best first.
var cataloguePages = []string{"rules.html", "rules.md"}

// installed is the address of the catalogue page beside the program, "" without one.
func installed() string {
	program, err := os.Executable()
	if err != nil {
		return ""
	}
	for _, name := range cataloguePages {
		page := filepath.Join(filepath.Dir(program), name)
		if info, err := os.Stat(page); err == nil && info.Mode().IsRegular() {
			return fileAddress(page)
		}
	}
	return ""
}

// configured takes changed settings and checks every open document anew.
func (s *server) configured(raw json.RawMessage) {
	own := member(raw, "settings", source)
	if own == nil {
		return
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	s.settings = s.settings.with(own)
	for _, d := range s.desks {
		s.recheck(d)
	}
}

// initialized asks the client to tell of changes to spec files that are not open, if it can.
func (s *server) initialized() {
	if !s.can.watch {
		return
	}
	options, err := protocol.Marshal(&protocol.DidChangeWatchedFilesRegistrationOptions{Watchers: []protocol.FileSystemWatcher{
		{GlobPattern: protocol.Pattern("**/*.{converter,compensator,parts}.{yaml,yml,json}")},
		{GlobPattern: protocol.Pattern("**/halfplane.yaml")},
	}})
	if err != nil {
		s.log.Error("encoding the registration of watchers", "error", err)
		return
	}
	go s.ask("watched files", func(c context.Context) error {
		return s.client.RegisterCapability(c, &protocol.RegistrationParams{Registrations: []protocol.Registration{{
			ID: "halfplane-files", Method: protocol.MethodWorkspaceDidChangeWatchedFiles, RegisterOptions: options,
		}}})
	})
}

// ask calls the client, never from the read loop, and does not wait for good.
func (s *server) ask(what string, call func(context.Context) error) {
	ctx, cancel := context.WithTimeout(s.root, 10*time.Second)
	defer cancel()
	if err := call(ctx); err != nil && s.root.Err() == nil {
		s.log.Warn("asking the client", "for", what, "error", err)
	}
}
