// Package rules holds every rule, one file each, the runner that applies them to an analysed design, and the catalogue
// made from their declarations. Rules compare; they do not solve (package analysis does) and do not print.
//
// Start at rule.go, then finding.go, then any rule's file; list.go is the one list of all rules.
package rules
