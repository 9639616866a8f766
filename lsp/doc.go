// Package lsp is the editor server: one file per request kind. It has no analysis of its own; the workspace answers.
// Start at server.go.
package lsp
