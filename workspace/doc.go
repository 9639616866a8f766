// Package workspace finds spec files, overlays unsaved text, follows `use` and `part`, knows which designs depend on a
// shared file, and runs the rules over one file or many. It speaks no protocol and prints nothing.
// Start at workspace.go.
package workspace
