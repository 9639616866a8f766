// Package report writes findings and figures in the forms that people and programs read. It decides nothing.
// Start at form.go.
package report
