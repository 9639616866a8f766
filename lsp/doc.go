// Package lsp is the editor server: it speaks the Language Server Protocol over a pair of byte streams and has no
// analysis of its own; the workspace answers.
//
// Open, change and close run in arrival order on the read loop and only swap the text (sync.go). Each open document has
// one goroutine that checks its newest text: quick at once, in full when typing pauses (check.go). A change cancels the
// check that runs, and "is this still the newest text" is asked under the lock that publishes (publish.go), so that no
// old result is ever sent. Requests take their snapshot on the read loop and are then released (handle.go).
//
// Start at server.go; there is one file per request kind.
package lsp
