package report

import (
	"bytes"
	"context"
	"encoding/json"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/workspace"
)

// studied is a reference design with everything that can be asked for.
func studied(t testing.TB, name string) workspace.File {
	name = filepath.Join("../testdata/reference", name+".converter.yaml")
	f := workspace.Open(filepath.Dir(name)).CheckFile(context.Background(), name, workspace.Options{
		Depth: analysis.Quick, Study: workspace.Study{Sensitivities: true, Units: 60, Prove: true},
	})
	require.NotNil(t, f.Result, "%s: %v", name, f.Findings)
	return f
}

func TestStudiesFitTheirSchemas(t *testing.T) {
	for _, name := range []string{"beacon-boost-type3", "winch-sepic-current-mode", "mast-push-pull"} {
		f := studied(t, name)
		var b bytes.Buffer
		require.NoError(t, JSONFigures(&b, f, FigureOptions{}))
		fits(t, FiguresSchema(), b.Bytes())
		var got struct {
			Sensitivities map[string][]struct{ Path string }
			Yield         struct{ Samples, Seed int }
			Proof         map[string]struct{ Verdict, Why string }
		}
		require.NoError(t, json.Unmarshal(b.Bytes(), &got))
		assert.NotEmpty(t, got.Sensitivities["phase-margin"])
		assert.Equal(t, 60, got.Yield.Samples)
		assert.Equal(t, analysis.DefaultSeed, got.Yield.Seed)
		want := "proved"
		if name == "winch-sepic-current-mode" {
			want = "undecided"
			assert.Contains(t, got.Proof["phase-margin"].Why, "one inductor")
		}
		assert.Equal(t, want, got.Proof["phase-margin"].Verdict)

		b.Reset()
		require.NoError(t, jsonFindings(&b, []workspace.File{f}, "1"))
		fits(t, FindingsSchema(), b.Bytes())
	}
}

func TestAnUnprovedMarginIsANoteAndAProvedOneIsNot(t *testing.T) {
	notes := func(f workspace.File) (list []string) {
		for _, found := range f.Findings {
			if found.Rule == "not-assessed" {
				list = append(list, found.Message)
			}
		}
		return list
	}
	assert.Empty(t, notes(studied(t, "beacon-boost-type3")))
	open := notes(studied(t, "winch-sepic-current-mode"))
	var said []string
	for _, n := range open {
		if len(n) > 4 && n[:4] == "the " {
			said = append(said, n)
		}
	}
	require.Len(t, said, 3)
	assert.Contains(t, said[0], "margin is not proved: a proof covers stages with one inductor")
}

func TestTheTextOfAStudyReadsAsAnEngineerWritesIt(t *testing.T) {
	var b bytes.Buffer
	require.NoError(t, TextFigures(&b, studied(t, "beacon-boost-type3"), FigureOptions{}))
	text := b.String()
	assert.Regexp(t, `phase margin  [a-z' -]+ +[−+][0-9.]+° +[−+][0-9.]+°\n`, text)
	assert.Contains(t, text, "Built units (Monte Carlo, 60 units, seed 1)")
	assert.Regexp(t, `95 % confidence: 9[0-9.]+ % to 100 %`, text)
	assert.Regexp(t, `phase margin of at least 45\.0° is proved at every point of the box \([0-9,]+ boxes\)`, text)
	assert.Contains(t, text, "not complete: not every extreme of every tolerance was visited; --depth full looks further")
	assert.NotContains(t, text, "NaN")
}

func TestAShareIsRoundedDownShortOfAll(t *testing.T) {
	assert.Equal(t, "100 %", share(1))
	assert.Equal(t, "99.99 %", share(0.99995))
	assert.Equal(t, "93.7 %", share(0.9374))
	assert.Equal(t, "0 %", share(0))
}
