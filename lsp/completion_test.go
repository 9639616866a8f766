package lsp

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// offered is one item of a completion as the client sees it.
type offered struct {
	Label         string
	Detail        string
	SortText      string
	Documentation struct{ Value string }
	TextEdit      struct {
		Range   area
		NewText string
	}
}

func (k *client) completeAt(uri string, at spot) map[string]offered {
	k.t.Helper()
	r := k.call("textDocument/completion", object{"textDocument": object{"uri": uri}, "position": at})
	require.Nil(k.t, r.Error)
	var list struct{ Items []offered }
	require.NoError(k.t, json.Unmarshal(r.Result, &list))
	all := map[string]offered{}
	for _, item := range list.Items {
		all[item.Label] = item
	}
	return all
}

// completing opens a text as a file of that name and asks at ‸.
func completing(t *testing.T, name, text string) map[string]offered {
	t.Helper()
	k := connect(t, Options{}, check)
	k.begin(nil)
	uri := fileAddress(filepath.Join(t.TempDir(), name))
	offset := strings.Index(text, "‸")
	require.GreaterOrEqual(t, offset, 0)
	text = strings.Replace(text, "‸", "", 1)
	k.open(uri, text, 1)
	all := k.completeAt(uri, placeOf(text, offset, "utf-16"))
	k.leave()
	return all
}

func TestCompletionOfAPolicy(t *testing.T) {
	for _, tt := range []struct {
		text string
		has  []string
		not  []string
	}{
		{"format: 1\n‸", []string{"severity", "thresholds", "paths", "end-of-life", "title"}, []string{"format"}},
		{"format: 1\nseverity:\n  duty-range: note\n  ‸", []string{"phase-margin", "stated-figure"}, []string{"duty-range", "spec-shape"}},
		{"format: 1\nseverity: {phase-margin: ‸", []string{"none", "note", "warning", "error"}, []string{"fatal"}},
		{"thresholds:\n  rh‸\nseverity: {", []string{"rhp-zero-fraction", "phase-margin", "half-frequency-quality"}, nil},
		{"thresholds:\n  rhp-zero-fraction: ‸", []string{"1/5"}, nil},
		{"paths:\n  - match: legacy/**\n    ‸", []string{"severity", "thresholds"}, []string{"match", "paths"}},
		{"paths:\n  - ‸", []string{"match"}, nil},
		{"# ‸", nil, []string{"format"}},
	} {
		got := completing(t, "halfplane.yaml", tt.text)
		for _, label := range tt.has {
			assert.Contains(t, got, label, tt.text)
		}
		for _, label := range tt.not {
			assert.NotContains(t, got, label, tt.text)
		}
	}
	got := completing(t, "halfplane.yaml", "thresholds:\n  rh‸")["rhp-zero-fraction"]
	assert.Equal(t, "rhp-zero-fraction: ", got.TextEdit.NewText)
	assert.Equal(t, 2, int(got.TextEdit.Range.Start.Character))
	assert.Equal(t, 4, int(got.TextEdit.Range.End.Character))
	assert.Equal(t, "1/5 by default", got.Detail)
	assert.Contains(t, got.Documentation.Value, "Rule rhp-zero-crossover, crossover-window.\n\n")
}

func TestCompletionOfADesign(t *testing.T) {
	for _, tt := range []struct {
		text string
		has  []string
		not  []string
	}{
		{"format: 1\ntitle: µΩ\n‸", []string{"topology", "switching-frequency", "load"}, []string{"title"}},
		{"topology: ‸\ntitle: {", []string{"buck", "two-switch-forward"}, nil},
		{"compensator:\n  network: ‸", []string{"type-3", "optocoupler"}, nil},
		{"waivers:\n  - {rule: ph‸", []string{"phase-margin"}, nil},
		{"inductor: {‸}", []string{"inductance", "saturation-current"}, nil},
		{"switching-frequency: ‸", []string{"250 kHz"}, nil},
	} {
		got := completing(t, "a.converter.yaml", tt.text)
		for _, label := range tt.has {
			assert.Contains(t, got, label, tt.text)
		}
		for _, label := range tt.not {
			assert.NotContains(t, got, label, tt.text)
		}
	}
	got := completing(t, "a.converter.json", "{\"format\": 1, \"to‸")
	assert.Equal(t, `"topology": `, got["topology"].TextEdit.NewText)
	assert.Equal(t, "0", got["topology"].SortText[:1], "what must be there comes first")
}

func TestAPolicyBeingTypedJudgesOpenDesigns(t *testing.T) {
	path, text := lantern(t)
	folder := filepath.Dir(path)
	k := connect(t, Options{}, check)
	k.begin(nil)
	design := fileAddress(path)
	k.open(design, text, 1)
	k.published(design, 1, nil)
	policy := fileAddress(filepath.Join(folder, "halfplane.yaml"))
	k.open(policy, "format: 1\nthresholds: {phase-margin: 89 deg}\n", 1)
	found := k.published(design, 1, func(all []diagnostic) bool {
		for _, d := range all {
			if d.Code == "phase-margin" && strings.Contains(d.Message, "89.0°") {
				return true
			}
		}
		return false
	})
	assert.NotEmpty(t, found)
	k.leave()
}
