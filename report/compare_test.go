package report

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v5"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/workspace"
)

// comparisons are one of each kind: changed, unchanged, added, removed, not to be read.
func comparisons(t *testing.T) []workspace.Comparison {
	t.Helper()
	text, err := os.ReadFile("../testdata/rules/internal/healthy-boost.converter.yaml")
	require.NoError(t, err)
	old, now := t.TempDir(), t.TempDir()
	write := func(folder, name, text string) {
		require.NoError(t, os.WriteFile(filepath.Join(folder, name+".converter.yaml"), []byte(text), 0o666))
	}
	write(old, "a|<b>", string(text))
	write(now, "a|<b>", strings.NewReplacer("7k87", "15k", "22 uH", "27 uH").Replace(string(text)))
	write(old, "same", string(text))
	write(now, "same", string(text))
	write(now, "come", strings.Replace(string(text), "Tide", "Wind", 1))
	write(old, "gone", strings.Replace(string(text), "Tide", "Rain", 1))
	write(old, "torn", string(text))
	write(now, "torn", "title: {")
	pairs, err := workspace.Pairs(context.Background(), old, now, nil, "")
	require.NoError(t, err)
	var all []workspace.Comparison
	for _, p := range pairs {
		all = append(all, workspace.Compare(context.Background(), p, workspace.Options{Depth: analysis.Quick}))
	}
	require.Len(t, all, 5)
	return all
}

func TestTheJSONOfAComparisonFitsItsSchema(t *testing.T) {
	var out bytes.Buffer
	j := NewJSONComparison(&out, "0.0.0", "old", "new")
	for _, c := range comparisons(t) {
		j.Design(c)
	}
	require.NoError(t, j.Close())
	s, err := jsonschema.CompileString("comparison.json", string(ComparisonSchema()))
	require.NoError(t, err)
	var v any
	require.NoError(t, json.Unmarshal(out.Bytes(), &v))
	require.NoError(t, s.Validate(v))
	var read comparisonDocument
	require.NoError(t, json.Unmarshal(out.Bytes(), &read))
	assert.Equal(t, ComparisonTotals{Designs: 5, Changed: 1, Unchanged: 1, Added: 1, Removed: 1, Unreadable: 1, Fell: 3}, read.Summary)
}

func TestAReviewCommentHoldsNoMarkupFromPaths(t *testing.T) {
	var out bytes.Buffer
	m := NewMarkdownComparison(&out, "old|*x*", "new")
	for _, c := range comparisons(t) {
		m.Design(c)
	}
	require.NoError(t, m.Close())
	assert.NotContains(t, out.String(), "a|<b>")
	assert.Contains(t, out.String(), `a\|\<b\>.converter.yaml`)
	assert.Contains(t, out.String(), "old\\|\\*x\\*")
	assert.Contains(t, out.String(), "| **fell** | feedback-resistor 7k87")
	for _, line := range strings.Split(out.String(), "\n") {
		if strings.HasPrefix(line, "| ") {
			assert.Equal(t, 8, strings.Count(strings.ReplaceAll(line, `\|`, ""), "|"), line)
		}
	}
}

func TestTheTextOfAComparisonTellsEveryMargin(t *testing.T) {
	var out bytes.Buffer
	w := NewTextComparison(&out)
	for _, c := range comparisons(t) {
		w.Design(c)
	}
	require.NoError(t, w.Close())
	for _, part := range []string{"phase margin   ", "gain margin   ", "modulus margin   ", "crossover / RHP zero   ", "worst  ", "part   phase margin: ", "come.converter.yaml: added", "gone.converter.yaml: removed",
		"torn.converter.yaml: cannot be compared", "5 designs (1 changed, 1 added, 1 removed, 1 unchanged, 1 not comparable): 3 margins fell through the target"} {
		assert.Contains(t, out.String(), part)
	}
	assert.NotContains(t, out.String(), "same.converter.yaml")
}
