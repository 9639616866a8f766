package workspace

import (
	"context"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// TestEveryRepairOfferedClearsItsFinding applies what is offered and checks again, from the text.
func TestEveryRepairOfferedClearsItsFinding(t *testing.T) {
	w := Open("../testdata")
	for _, rule := range []string{"stated-figure", "turns-ratio", "reflected-inductance"} {
		files, err := filepath.Glob("../testdata/rules/" + rule + "/*.converter.yaml")
		require.NoError(t, err)
		offered := 0
		for _, path := range files {
			f := w.CheckFile(context.Background(), path, Options{Depth: analysis.Quick, Mends: true})
			for _, found := range f.Findings {
				if found.Rule != rule {
					continue
				}
				require.NotEmpty(t, found.Mends, "%s: %s", path, found.Message)
				for _, m := range found.Mends {
					offered++
					doc, ok := Mended(f.Document, m.Edits)
					require.True(t, ok)
					after := w.CheckDocument(context.Background(), doc, Options{Depth: analysis.Quick})
					require.Equal(t, Checked, after.Status)
					assert.Len(t, after.Findings, len(f.Findings)-1, "%s: %s", path, m.Title)
					assert.Equal(t, string(f.Document.Text[:m.Edits[0].Start]), string(doc.Text[:m.Edits[0].Start]), "nothing before it has changed")
				}
			}
		}
		assert.Positive(t, offered, rule)
	}
}

func TestNoRepairUnlessAskedFor(t *testing.T) {
	f := Open("../testdata").CheckFile(context.Background(), "../testdata/rules/stated-figure/slips-and-a-wrong-one.converter.yaml", Options{Depth: analysis.Quick})
	require.NotEmpty(t, f.Findings)
	for _, found := range f.Findings {
		assert.Empty(t, found.Mends)
	}
}

func TestEditsThatOverlapOrLieElsewhereAreRefused(t *testing.T) {
	doc := schema.Read("a.converter.yaml", []byte("title: pump\n"), 0)
	other := schema.Read("b.converter.yaml", []byte("title: pump\n"), 0)
	mended, ok := Mended(doc, []rules.Edit{{Doc: doc, Start: 9, End: 11, Text: "mp"}, {Doc: doc, Start: 7, End: 8, Text: "li"}})
	require.True(t, ok)
	assert.Equal(t, "title: liump\n", string(mended.Text), "whatever the order")
	_, ok = Mended(doc, []rules.Edit{{Doc: doc, Start: 7, End: 10}, {Doc: doc, Start: 9, End: 11}})
	assert.False(t, ok)
	_, ok = Mended(doc, []rules.Edit{{Doc: other, Start: 7, End: 10}})
	assert.False(t, ok)
	_, ok = Mended(doc, nil)
	assert.False(t, ok)
}

func TestARepairThatBringsAnotherFindingCuresNothing(t *testing.T) {
	was := rules.Finding{Rule: "stated-figure", Pointer: "/stated/duty", Severity: rules.Warning}
	other := rules.Finding{Rule: "duty-range", Pointer: "/modulator/scheme", Severity: rules.Note}
	worse := other
	worse.Severity = rules.Error
	assert.True(t, cures(was, []rules.Finding{was, other}, []rules.Finding{other}))
	assert.False(t, cures(was, []rules.Finding{was}, []rules.Finding{was}))
	assert.False(t, cures(was, []rules.Finding{was}, []rules.Finding{other}))
	assert.False(t, cures(was, []rules.Finding{was, other}, []rules.Finding{worse}))
}
