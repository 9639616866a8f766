package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/report"
)

// legacyShelf writes designs with well over 200 findings into a folder: the rules' own breaking files that can be analysed.
func legacyShelf(t *testing.T) string {
	t.Helper()
	folder := t.TempDir()
	files, err := filepath.Glob("../../testdata/rules/*/*.converter.yaml")
	require.NoError(t, err)
	for _, path := range files {
		rule := filepath.Base(filepath.Dir(path))
		if strings.HasPrefix(rule, "spec-") || rule == "quantity" || strings.HasPrefix(rule, "waiver") {
			continue
		}
		text, err := os.ReadFile(path)
		require.NoError(t, err)
		if strings.Contains(string(text), "use:") || strings.Contains(string(text), "libraries:") {
			continue
		}
		require.NoError(t, os.WriteFile(filepath.Join(folder, rule+"-"+filepath.Base(path)), text, 0o666))
	}
	return folder
}

// checked runs check at quick depth with notes at the gate.
func checked(t *testing.T, args ...string) (code int, totals report.Totals, errs string) {
	t.Helper()
	var out, said bytes.Buffer
	code = run(append([]string{"check", "--depth", "quick", "--fail-at", "note", "--as", "json"}, args...), nil, &out, &said)
	var document struct{ Summary report.Totals }
	if out.Len() > 0 {
		require.NoError(t, json.Unmarshal(out.Bytes(), &document))
	}
	return code, document.Summary, said.String()
}

func change(t *testing.T, path, from, to string) {
	t.Helper()
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	require.Contains(t, string(text), from)
	require.NoError(t, os.WriteFile(path, []byte(strings.Replace(string(text), from, to, 1)), 0o666))
}

func TestALegacyShelfPassesWithItsLedgerAndFailsOnWhatIsNewOrWorse(t *testing.T) {
	shelf := legacyShelf(t)
	known := filepath.Join(shelf, "known.ledger")
	code, totals, _ := checked(t, shelf)
	require.Equal(t, 1, code)
	require.GreaterOrEqual(t, totals.Errors+totals.Warnings+totals.Notes, 200)

	code, _, errs := checked(t, shelf, "--ledger", known)
	assert.Equal(t, 2, code)
	assert.Contains(t, errs, "--ledger-renew=all")
	code, totals, errs = checked(t, shelf, "--ledger", known, "--ledger-renew=all")
	assert.Equal(t, 0, code, "what was put on record just now is accepted")
	assert.Equal(t, totals.Errors+totals.Warnings+totals.Notes, totals.Recorded)
	assert.Regexp(t, `\d+ added; \d+ findings on record`, errs)
	first, err := os.ReadFile(known)
	require.NoError(t, err)

	code, _, errs = checked(t, shelf, "--ledger", known)
	assert.Equal(t, 0, code)
	assert.Empty(t, errs)

	// From another folder, with lines moved and a figure changed in its last digits.
	moved := filepath.Join(shelf, "phase-margin-"+firstOf(t, "phase-margin"))
	text, err := os.ReadFile(moved)
	require.NoError(t, err)
	require.NoError(t, os.WriteFile(moved, append(bytes.Repeat([]byte("# a line\n"), 30), text...), 0o666))
	t.Chdir(shelf)
	code, _, _ = checked(t, ".", "--ledger", "known.ledger")
	assert.Equal(t, 0, code, "moved lines do not matter")

	// One finding that is new.
	clean := "stated-figure-nothing-stated.converter.yaml"
	change(t, clean, "lower-resistor: 5k49", "lower-resistor: 5k90")
	code, totals, _ = checked(t, ".", "--ledger", "known.ledger")
	assert.Equal(t, 1, code)
	assert.GreaterOrEqual(t, totals.Errors+totals.Warnings+totals.Notes-totals.Recorded, 1)
	change(t, clean, "lower-resistor: 5k90", "lower-resistor: 5k49")
	code, _, _ = checked(t, ".", "--ledger", "known.ledger")
	assert.Equal(t, 0, code)

	// One that got worse: the stated duty is farther off.
	wrong := "turns-ratio-just-inside.converter.yaml"
	change(t, wrong, "0.42", "0.39")
	var out bytes.Buffer
	code = run([]string{"check", "--depth", "quick", "--fail-at", "note", "--ledger", "known.ledger", "."}, nil, &out, &bytes.Buffer{})
	assert.Equal(t, 1, code)
	assert.Contains(t, out.String(), "record worse than on record: warning, 0.420 against 0.442")
	assert.Equal(t, 1, strings.Count(out.String(), ": warning: ")+strings.Count(out.String(), ": error: ")+strings.Count(out.String(), ": note: "), "only that one is listed")
	assert.Regexp(t, `\d+ of them on record in the ledger, 1 new or worse`, out.String())

	// Shrinking does not take it over; a finding that is settled goes.
	change(t, "preferred-value-between-two-values.converter.yaml", "7k9", "7k87")
	code, _, errs = checked(t, ".", "--ledger", "known.ledger")
	assert.Equal(t, 1, code)
	assert.Contains(t, errs, "1 entry of known.ledger no longer found")
	code, _, errs = checked(t, ".", "--ledger", "known.ledger", "--ledger-renew")
	assert.Equal(t, 1, code)
	assert.Contains(t, errs, "1 taken out; ")
	second, err := os.ReadFile("known.ledger")
	require.NoError(t, err)
	assert.Equal(t, bytes.Count(first, []byte("\n"))-1, bytes.Count(second, []byte("\n")), "one line less, and no other")

	// Part of the shelf, or of the rules, leaves the rest of the ledger alone.
	_, _, errs = checked(t, wrong, "--ledger", "known.ledger", "--ledger-renew", "--only", "phase-margin")
	assert.Contains(t, errs, "nothing changed")
	after, err := os.ReadFile("known.ledger")
	require.NoError(t, err)
	assert.Equal(t, string(second), string(after))

	// Taken over on request; a design that is gone takes its entries along.
	_, _, errs = checked(t, ".", "--ledger", "known.ledger", "--ledger-renew=all")
	assert.Contains(t, errs, "1 recorded as worse; ")
	require.NoError(t, os.Remove(wrong))
	code, _, errs = checked(t, ".", "--ledger", "known.ledger", "--ledger-renew")
	assert.Equal(t, 0, code)
	assert.Contains(t, errs, "taken out; ")
	last, err := os.ReadFile("known.ledger")
	require.NoError(t, err)
	assert.NotContains(t, string(last), wrong)
}

// firstOf is the name of the first breaking file of a rule.
func firstOf(t *testing.T, rule string) string {
	t.Helper()
	files, err := filepath.Glob("../../testdata/rules/" + rule + "/*.converter.yaml")
	require.NoError(t, err)
	require.NotEmpty(t, files, fmt.Sprint(rule))
	return filepath.Base(files[0])
}

func TestALedgerThatIsNoneIsAUsageError(t *testing.T) {
	path := filepath.Join(t.TempDir(), "known.ledger")
	require.NoError(t, os.WriteFile(path, []byte("# halfplane ledger 1\nx\n"), 0o666))
	code, _, errs := checked(t, "--ledger", path, "../../testdata/rules/stated-figure")
	assert.Equal(t, 2, code)
	assert.Contains(t, errs, path+":2:1: expected 8 fields")
	code, _, errs = checked(t, "--ledger-renew", "../../testdata/rules/stated-figure")
	assert.Equal(t, 2, code)
	assert.Contains(t, errs, "--ledger-renew belongs to --ledger FILE")
}
