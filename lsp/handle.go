package lsp

import (
	"context"
	"encoding/json"
	"errors"
	"runtime/debug"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// answer computes a request's result after the read loop has been released.
type answer func(context.Context) (any, error)

// handle is called on the read loop for every message, in arrival order. Notifications are dealt with here and now; a
// request reads its parameters and takes its snapshot, registers for cancellation, and only then lets the loop go on.
func (s *server) handle(ctx context.Context, req *jsonrpc2.Request) (result any, err error) {
	method, call, raw := req.Method(), req.IsCall(), json.RawMessage(req.Params())
	id := req.ID()
	defer s.settle(method, call, &result, &err)
	if method == protocol.MethodExit {
		s.exit()
		return nil, nil
	}
	if err := s.allowed(method); err != nil {
		return nil, err
	}
	if !call {
		return nil, s.notified(method, raw)
	}
	switch method {
	case protocol.MethodInitialize:
		return encoded(s.initialize(raw))
	case protocol.MethodShutdown:
		return nil, s.shutdown()
	}
	run, err := s.prepared(method, raw)
	if err != nil {
		return nil, err
	}
	own, cancel := context.WithCancel(ctx)
	defer s.calls.track(id, cancel)()
	jsonrpc2.Async(ctx)
	return encoded(run(own))
}

// prepared reads a request's parameters and takes the snapshot that it will be answered from.
func (s *server) prepared(method string, raw json.RawMessage) (answer, error) {
	switch method {
	case protocol.MethodTextDocumentHover:
		return s.hover(raw)
	case protocol.MethodTextDocumentCompletion:
		return s.completion(raw)
	}
	return nil, jsonrpc2.Errorf(jsonrpc2.MethodNotFound, "%s is not served", method)
}

// notified deals with a notification. Unknown ones are dropped, as the protocol allows.
func (s *server) notified(method string, raw json.RawMessage) error {
	switch method {
	case protocol.MethodInitialized:
		s.initialized()
	case protocol.MethodCancelRequest:
		s.calls.cancel(member(raw, "id"))
	case protocol.MethodTextDocumentDidOpen:
		return s.opened(raw)
	case protocol.MethodTextDocumentDidChange:
		return s.changed(raw)
	case protocol.MethodTextDocumentDidClose:
		return s.closed(raw)
	case protocol.MethodWorkspaceDidChangeConfiguration:
		s.configured(raw)
	case protocol.MethodWorkspaceDidChangeWatchedFiles:
		return s.filesChanged(raw)
	case protocol.MethodWorkspaceDidChangeWorkspaceFolders:
		return s.foldersChanged(raw)
	}
	return nil
}

// settle turns a panic into the loss of one request, gives every error a code, and keeps a notification's error from the
// library, which would close the connection for it.
func (s *server) settle(method string, call bool, result *any, err *error) {
	if cause := recover(); cause != nil {
		s.log.Error("panic", "method", method, "value", cause, "stack", string(debug.Stack()))
		*result, *err = nil, jsonrpc2.Errorf(jsonrpc2.InternalError, "a defect of halfplane: panic in %s", method)
	}
	var coded *jsonrpc2.Error
	switch {
	case *err == nil:
	case !call:
		s.log.Warn("notification", "method", method, "error", *err)
		*result, *err = nil, nil
	case errors.Is(*err, context.Canceled):
		*result, *err = nil, jsonrpc2.NewError(protocol.CodeRequestCancelled, "cancelled")
	case !errors.As(*err, &coded):
		*result, *err = nil, jsonrpc2.NewError(jsonrpc2.InternalError, (*err).Error())
	}
}
