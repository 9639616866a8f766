package report

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"strings"

	"halfplane/rules"
	"halfplane/workspace"
)

// SARIF writes findings in the Static Analysis Results Interchange Format, version 2.1.0 (OASIS standard, 2020, with errata 01 of 2023).
// Results are written as they come; nothing in the document depends on the machine, the working folder or the day. Severities that a
// policy sets are the level of each result: policies differ from folder to folder, so none of them overrides a rule for the whole run.
type SARIF struct {
	w         *bufio.Writer
	err       error
	index     map[string]int // of the rules
	results   int
	seen      map[string]int // how often each identity has occurred
	addresses sarifAddresses
	artifacts sarifArtifacts
	told      []sarifNotification
}

// SARIFSchema is the address of the format's schema, as OASIS publishes it.
const SARIFSchema = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"

// NewSARIF starts a report of the given program version; Close ends it.
func NewSARIF(w io.Writer, version string) *SARIF {
	s := &SARIF{w: bufio.NewWriter(w), index: map[string]int{}, seen: map[string]int{}, artifacts: sarifArtifacts{at: map[sarifAddress]int{}}}
	driver := sarifDriver{Name: Program, Version: version}
	if semantic(version) {
		driver.Semantic = version
	}
	for i, r := range rules.All() {
		s.index[r.Name] = i
		driver.Rules = append(driver.Rules, sarifRuleOf(r))
	}
	fmt.Fprintf(s.w, "{\n  \"$schema\": %q,\n  \"version\": \"2.1.0\",\n  \"runs\": [{\n", SARIFSchema)
	s.member("tool", sarifTool{driver})
	s.member("columnKind", "unicodeCodePoints")
	s.member("defaultEncoding", "utf-8")
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
	s.checked(f)
	for _, found := range f.Findings {
		if s.results > 0 {
			s.w.WriteByte(',')
		}
		s.results++
		s.w.WriteString("\n      ")
		s.value(s.result(f, found), "      ")
	}
	s.tellOf(f)
}

// Close writes the rest and gives the first error.
func (s *SARIF) Close() error {
	fmt.Fprint(s.w, "\n    ],\n")
	if bases := s.addresses.bases(); len(bases) > 0 {
		s.member("originalUriBaseIds", bases)
	}
	if len(s.artifacts.list) > 0 {
		s.member("artifacts", s.artifacts.list)
	}
	fmt.Fprint(s.w, "    \"invocations\": ")
	s.value([]sarifInvocation{s.invocation()}, "    ")
	fmt.Fprint(s.w, "\n  }]\n}\n")
	if s.err != nil {
		return s.err
	}
	return s.w.Flush()
}
