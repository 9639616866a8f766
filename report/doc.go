// Package report writes outcomes down: findings and figures, as text for a person and as JSON for a program, with the JSON
// Schemas of both; rule pages. It decides nothing and reads no file.
//
// Start at text.go, then json.go; figures.go shapes one design's figures and figurestext.go sets them as tables.
package report
