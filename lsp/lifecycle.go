package lsp

import (
	"encoding/json"
	"slices"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"

	"halfplane/schema"
)

// phase is where the connection stands in its life.
type phase int

const (
	fresh phase = iota + 1
	running
	down
)

// allowed refuses what the protocol does not allow in this phase.
func (s *server) allowed(method string) error {
	switch {
	case s.phase == fresh && method != protocol.MethodInitialize:
		return jsonrpc2.NewError(jsonrpc2.ServerNotInitialized, "initialize comes first")
	case s.phase == down:
		return jsonrpc2.NewError(jsonrpc2.InvalidRequest, "only exit may follow shutdown")
	case s.phase == running && method == protocol.MethodInitialize:
		return jsonrpc2.NewError(jsonrpc2.InvalidRequest, "initialize came before")
	}
	return nil
}

// abilities is what the client says that it can do, as far as anything here depends on it.
type abilities struct {
	related, tags, codeLinks, markdown, watch bool
}

// initialize reads what the client says of itself. An odd value anywhere counts as absent: no client is turned away for
// a capability that nothing here uses.
func (s *server) initialize(raw json.RawMessage) (any, error) {
	s.phase = running
	publish := member(raw, "capabilities", "textDocument", "publishDiagnostics")
	formats := reads[[]string](raw, "capabilities", "textDocument", "hover", "contentFormat")
	s.can = abilities{
		related:   reads[bool](publish, "relatedInformation"),
		tags:      member(publish, "tagSupport") != nil,
		codeLinks: reads[bool](publish, "codeDescriptionSupport"),
		markdown:  len(formats) == 0 || slices.Contains(formats, string(protocol.MarkupKindMarkdown)),
		watch:     reads[bool](raw, "capabilities", "workspace", "didChangeWatchedFiles", "dynamicRegistration"),
	}
	s.columns = chosen(reads[[]string](raw, "capabilities", "general", "positionEncodings"))
	s.mu.Lock()
	s.folders = clientFolders(raw)
	s.settings = s.settings.with(member(raw, "initializationOptions"))
	s.mu.Unlock()
	if pid := reads[int](raw, "processId"); pid > 0 {
		go s.watchClient(pid)
	}
	return s.capabilities(), nil
}

// chosen is the first of the client's position encodings that is known here, UTF-16 without any.
func chosen(offered []string) schema.Encoding {
	for _, name := range offered {
		for _, e := range []schema.Encoding{schema.UTF16, schema.UTF8, schema.UTF32} {
			if name == e.String() {
				return e
			}
		}
	}
	return schema.UTF16
}

// clientFolders gives the paths of the client's workspace folders, of its root where it names none.
func clientFolders(raw json.RawMessage) []string {
	var paths []string
	for _, f := range reads[[]folder](raw, "workspaceFolders") {
		if path, ok := filePath(f.URI); ok {
			paths = append(paths, path)
		}
	}
	if len(paths) > 0 {
		return paths
	}
	if path, ok := filePath(reads[string](raw, "rootUri")); ok {
		return []string{path}
	}
	if path := reads[string](raw, "rootPath"); path != "" {
		return []string{path}
	}
	return nil
}

func (s *server) capabilities() *protocol.InitializeResult {
	yes, incremental := true, protocol.TextDocumentSyncKindIncremental
	return &protocol.InitializeResult{
		Capabilities: protocol.ServerCapabilities{
			PositionEncoding:   protocol.PositionEncodingKind(s.columns.String()),
			TextDocumentSync:   &protocol.TextDocumentSyncOptions{OpenClose: &yes, Change: &incremental},
			HoverProvider:      protocol.Boolean(true),
			CompletionProvider: &protocol.CompletionOptions{TriggerCharacters: []string{" ", "\"", "{"}},
			Workspace: &protocol.WorkspaceOptions{WorkspaceFolders: &protocol.WorkspaceFoldersServerCapabilities{
				Supported:           &yes,
				ChangeNotifications: protocol.Boolean(true),
			}},
		},
		ServerInfo: protocol.ServerInfo{Name: source, Version: protocol.NewOptional(s.o.Version)},
	}
}

// shutdown stops every check; exit follows.
func (s *server) shutdown() error {
	s.phase = down
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, d := range s.desks {
		d.leave()
	}
	clear(s.desks)
	return nil
}

// exit ends the server: well after a shutdown, else not.
func (s *server) exit() {
	code := 1
	if s.phase == down {
		code = 0
	}
	s.finish(code, nil)
}
