package rules

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/schema"
)

// withoutBreakingFile are the rules that no spec file can break, with the test that breaks them instead.
var withoutBreakingFile = map[string]string{
	"internal": "TestPanicInsideARuleIsReportedAndTheRestStillRuns",
}

func TestEveryRuleIsDeclaredWhole(t *testing.T) {
	names := map[string]bool{}
	for _, rule := range All() {
		t.Run(rule.Name, func(t *testing.T) {
			require.False(t, names[rule.Name], "the name is used twice")
			names[rule.Name] = true
			_, err := os.Stat(strings.ReplaceAll(rule.Name, "-", "_") + ".go")
			assert.NoError(t, err, "the file is named after the rule")
			assert.True(t, strings.HasSuffix(rule.Sentence, ".") && len(rule.Sentence) > 20, "the sentence says what good looks like")
			assert.NotEmpty(t, rule.Formula)
			assert.NotEmpty(t, rule.Source)
			assert.NotEmpty(t, rule.Example)
			assert.True(t, strings.HasSuffix(rule.Hint, "."), "it says how to read a finding")
			assert.GreaterOrEqual(t, rule.Group, Declared)
			assert.GreaterOrEqual(t, rule.Severity, Note)
			assert.NotZero(t, rule.Reads, "it says what it must know of a corner")
			for _, pointer := range rule.Needs {
				_, ok := schema.LookupField(schema.Design, pointer)
				assert.True(t, ok, "%s is in the schema", pointer)
			}
			for _, threshold := range rule.Policy {
				key, _, _ := strings.Cut(threshold.Key, ".")
				_, ok := schema.LookupField(schema.Policy, "/thresholds/"+key)
				assert.True(t, ok, "threshold %s is in the policy schema", key)
			}
			assert.Same(t, rule, Find(rule.Name))
		})
	}
	assert.Nil(t, Find("no-such-rule"))
}

func TestEveryRuleHasABreakingAndAQuietFile(t *testing.T) {
	for _, rule := range All() {
		files, err := filepath.Glob(filepath.Join(shelf, rule.Name, "*.converter.*"))
		require.NoError(t, err)
		breaking, quiet := 0, 0
		for _, path := range files {
			if strings.HasSuffix(path, ".marks") {
				continue
			}
			text, err := os.ReadFile(path)
			require.NoError(t, err)
			if sibling, err := os.ReadFile(path + ".marks"); err == nil {
				text = sibling
			}
			marked := false
			for _, m := range marksOf(string(text)) {
				marked = marked || m.rule == rule.Name
			}
			if marked {
				breaking++
			} else {
				quiet++
			}
		}
		if withoutBreakingFile[rule.Name] == "" {
			assert.Positive(t, breaking, "%s has a breaking file", rule.Name)
		}
		assert.Positive(t, quiet, "%s has a quiet file", rule.Name)
	}
	folders, err := os.ReadDir(shelf)
	require.NoError(t, err)
	for _, f := range folders {
		assert.True(t, !f.IsDir() || f.Name() == "shared" || Find(f.Name()) != nil, "the folder %s belongs to a rule", f.Name())
	}
}

func TestEveryRuleHasAPage(t *testing.T) {
	catalogue := Catalogue()
	for _, rule := range All() {
		page := Page(rule)
		for _, part := range []string{rule.Name, rule.Sentence, rule.Formula, rule.Source, rule.Hint, rule.Example, BenchNote} {
			assert.Contains(t, page, part)
		}
		for _, threshold := range rule.Policy {
			key, _, _ := strings.Cut(threshold.Key, ".")
			assert.Contains(t, page, "`"+key+"`")
		}
		assert.Contains(t, catalogue, `<a id="`+rule.Name+`"></a>`)
	}
}
