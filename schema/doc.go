// Package schema turns the bytes of a spec file into a document with exact positions, validates it against the JSON
// Schemas of the four kinds of file, and gives the typed spec in SI units that analysis takes.
//
// Reading never fails: a document comes with its problems, and both are always returned. The package judges shape and
// quantities only; whether a converter is any good is for package rules. Start at document.go, then spec.go.
//
// The readers of YAML (yaml*.go) and JSON (json.go) are our own, because what they are for is the range of every value
// and going on after a mistake: a general library gives only where a node starts and stops at its first error. One such
// library judges them in the tests.
package schema
