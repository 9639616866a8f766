package report

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"strings"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// SARIF writes findings in the Static Analysis Results Interchange Format, version 2.1.0 (OASIS standard, 2020, with errata 01 of 2023).
// Results are written as they come; nothing in the document depends on the machine, the working folder or the day.
type SARIF struct {
	w           *bufio.Writer
	index       map[string]int // of the rules
	results     int
	artifacts   []sarifArtifact
	listed      map[string]bool // artifacts, by address
	failures    []sarifNotification
	err         error
	versionText string
}

// sarifSchema is the address of the format's schema, as OASIS publishes it.
const sarifSchema = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"

// sourceRoot names the folder that all addresses are relative to: the git work tree, else the workspace.
const sourceRoot = "SRCROOT"

// fingerprint names the way in which results are told apart; another way gets another number.
const fingerprint = "halfplane/v1"

// NewSARIF starts a report of the given program version; Close ends it.
func NewSARIF(w io.Writer, version string) *SARIF {
	s := &SARIF{w: bufio.NewWriter(w), index: map[string]int{}, listed: map[string]bool{}, versionText: version}
	var all []sarifRule
	for i, r := range rules.All() {
		s.index[r.Name] = i
		all = append(all, sarifRuleOf(r))
	}
	driver := map[string]any{"name": Program, "version": version, "rules": all}
	fmt.Fprintf(s.w, "{\n  \"$schema\": %q,\n  \"version\": \"2.1.0\",\n  \"runs\": [{\n", sarifSchema)
	s.member("tool", map[string]any{"driver": driver})
	s.member("columnKind", "unicodeCodePoints")
	s.member("originalUriBaseIds", map[string]any{sourceRoot: map[string]any{"description": sarifText{"The root of the work tree; else the folder that was checked."}}})
	fmt.Fprint(s.w, "    \"results\": [")
	return s
}

// member writes one member of the run with a comma behind it.
func (s *SARIF) member(key string, value any) {
	fmt.Fprintf(s.w, "    %q: ", key)
	s.value(value, "    ")
	fmt.Fprint(s.w, ",\n")
}

func (s *SARIF) value(value any, indent string) {
	var b strings.Builder
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent(indent, "  ")
	if err := e.Encode(value); err != nil && s.err == nil {
		s.err = err
	}
	s.w.WriteString(strings.TrimSuffix(b.String(), "\n"))
}

// File adds one file's findings.
func (s *SARIF) File(f workspace.File) {
	s.artifact(f, f.Document, true)
	seen := map[string]int{}
	for _, found := range f.Findings {
		if s.results > 0 {
			s.w.WriteByte(',')
		}
		s.results++
		s.w.WriteString("\n      ")
		s.value(s.result(f, found, seen), "      ")
		if found.Rule == "internal" {
			s.failures = append(s.failures, sarifNotification{Level: "error", Message: sarifText{found.Message}, Locations: []sarifLocation{s.location(f, found.Doc, found.Start, found.End)}})
		}
	}
}

// artifact lists a file once; the ones that were checked say so and carry their hash.
func (s *SARIF) artifact(f workspace.File, doc *schema.Document, target bool) {
	uri := addressOf(f, nameOf(doc))
	if doc == nil || s.listed[uri] {
		return
	}
	s.listed[uri] = true
	a := sarifArtifact{Location: sarifAddress{URI: uri, Base: sourceRoot}}
	if target {
		a.Roles = []string{"analysisTarget"}
		if sum := hashOf(f); sum != "" {
			a.Hashes = map[string]string{"sha-256": sum}
		}
	}
	s.artifacts = append(s.artifacts, a)
}

// Close writes the rest and gives the first error.
func (s *SARIF) Close() error {
	fmt.Fprint(s.w, "\n    ],\n")
	if len(s.artifacts) > 0 {
		s.member("artifacts", s.artifacts)
	}
	fmt.Fprint(s.w, "    \"invocations\": ")
	s.value([]sarifInvocation{{len(s.failures) == 0, s.failures}}, "    ")
	fmt.Fprint(s.w, "\n  }]\n}\n")
	if s.err != nil {
		return s.err
	}
	return s.w.Flush()
}
