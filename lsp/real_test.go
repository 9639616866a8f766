package lsp

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf16"
	"unicode/utf8"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/workspace"
)

// calm is the feedback resistor with which the lantern's crossover stays well below its right-half-plane zero.
const calm = "4k7 ± 1 %"

// lantern is the path and the text of a boost whose crossover is too close to its right-half-plane zero.
func lantern(t testing.TB) (path, text string) {
	path, err := filepath.Abs(filepath.Join("..", "testdata", "lsp", "lantern.converter.yaml"))
	require.NoError(t, err)
	b, err := os.ReadFile(path)
	require.NoError(t, err)
	return path, string(b)
}

// finding is what the workspace, and so the command line, finds in the file by that rule at full depth.
func finding(t testing.TB, path, text, rule string) rules.Finding {
	for _, f := range findings(path) {
		if f.Rule == rule {
			return f
		}
	}
	t.Fatalf("%s has no %s", path, rule)
	return rules.Finding{}
}

func findings(path string) []rules.Finding {
	w := workspace.Open(workspace.RootOf(path))
	return w.CheckFile(context.Background(), path, workspace.Options{Depth: analysis.Full}).Findings
}

// place counts a byte's line and column by the standard library alone.
func placeOf(text string, offset int, encoding string) spot {
	before := text[:offset]
	start := strings.LastIndexByte(before, '\n') + 1
	column := len(before) - start
	switch encoding {
	case "utf-16":
		column = len(utf16.Encode([]rune(before[start:])))
	case "utf-32":
		column = utf8.RuneCountInString(before[start:])
	}
	return spot{strings.Count(before, "\n"), column}
}

// TestDiagnosticsAreThoseOfTheCommandLine: rule, range, message and severity, in every encoding, once typing has paused.
func TestDiagnosticsAreThoseOfTheCommandLine(t *testing.T) {
	path, text := lantern(t)
	want := findings(path)
	require.NotEmpty(t, want)
	for _, encoding := range []string{"utf-16", "utf-8", "utf-32"} {
		t.Run(encoding, func(t *testing.T) {
			k := connect(t, Options{}, check)
			k.begin(object{"pause": 1}, encoding)
			uri := fileAddress(path)
			k.open(uri, text, 1)
			var got []string
			ok := k.until("the diagnostics", wait, func() bool {
				if len(k.pushes) == 0 {
					return false
				}
				got = nil
				for _, d := range k.pushes[len(k.pushes)-1].Diagnostics {
					got = append(got, fmt.Sprint(d.Code, d.Range, d.Message))
				}
				return assert.ObjectsAreEqual(expected(text, encoding, want), got)
			})
			if !ok {
				assert.Equal(t, expected(text, encoding, want), got)
			}
			k.leave()
		})
	}
}

func expected(text, encoding string, findings []rules.Finding) []string {
	var out []string
	for _, f := range findings {
		out = append(out, fmt.Sprint(f.Rule, area{placeOf(text, f.Start, encoding), placeOf(text, f.End, encoding)}, f.Message))
	}
	return out
}

func TestFindingGoesWhenTheValueIsMended(t *testing.T) {
	path, text := lantern(t)
	f := finding(t, path, text, "rhp-zero-crossover")
	k := connect(t, Options{}, check)
	k.begin(nil)
	uri := fileAddress(path)
	k.open(uri, text, 1)
	has := func(d []diagnostic) bool {
		for _, one := range d {
			if one.Code == f.Rule {
				return true
			}
		}
		return false
	}
	k.published(uri, 1, has)
	k.change(uri, 2, part(area{placeOf(text, f.Start, "utf-16"), placeOf(text, f.End, "utf-16")}, calm))
	k.published(uri, 2, func(d []diagnostic) bool { return !has(d) })
	k.leave()
}

// TestFiveMistakesAreShownAtTheirOwnPlaces: a file that cannot be analysed shows every mistake, at its own text.
func TestMistakesAreShownAtTheirOwnText(t *testing.T) {
	path, text := lantern(t)
	for old, with := range map[string]string{
		"22 µH ± 20 %": "22 µF ± 20 %", "topology: boost": "topology: bost", "output-voltage: 24 V": "output-voltage: -24 Hz",
		"25 mΩ": "25 mVolts", "duty-limit": "duty-limits",
	} {
		text = strings.Replace(text, old, with, 1)
	}
	k := connect(t, Options{}, check)
	k.begin(nil)
	uri := fileAddress(path)
	k.open(uri, text, 1)
	lines := strings.Split(text, "\n")
	marked := map[string]bool{}
	for _, d := range k.published(uri, 1, nil).Diagnostics {
		require.Equal(t, d.Range.Start.Line, d.Range.End.Line, d.Message)
		units := utf16.Encode([]rune(lines[d.Range.Start.Line]))
		marked[string(utf16.Decode(units[d.Range.Start.Character:d.Range.End.Character]))] = true
		assert.Equal(t, 1, d.Severity, d.Message)
	}
	for _, want := range []string{"22 µF ± 20 %", "bost", "-24 Hz", "25 mVolts", "duty-limits"} {
		assert.True(t, marked[want], "%q is not marked, but %v", want, marked)
	}
	assert.Len(t, marked, 5)
	k.leave()
}
