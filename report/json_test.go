package report

import (
	"bytes"
	"encoding/json"
	"io"
	"math"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v5"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// fits validates a JSON text against one of the published schemas.
func fits(t *testing.T, schemaText, text []byte) {
	t.Helper()
	c := jsonschema.NewCompiler()
	c.AssertFormat = true
	require.NoError(t, c.AddResource("output.json", bytes.NewReader(schemaText)))
	compiled, err := c.Compile("output.json")
	require.NoError(t, err)
	var v any
	require.NoError(t, json.Unmarshal(text, &v))
	require.NoError(t, compiled.Validate(v), string(text))
}

// jsonFindings writes the findings of the files as the commands do.
func jsonFindings(w io.Writer, files []workspace.File, version string) error {
	j := NewJSON(w, version)
	for _, f := range files {
		j.File(f)
	}
	return j.Close()
}

func TestFindingsFitTheirSchema(t *testing.T) {
	var b bytes.Buffer
	none := schema.Read("gone.converter.yaml", nil, 0)
	files := []workspace.File{
		outcome(),
		{Path: "gone.converter.yaml", Document: none, Status: workspace.Unreadable, Findings: []rules.Finding{{Rule: "spec-syntax", Severity: rules.Error, Message: "there is no such file", Doc: none}}},
		{Path: "quiet.parts.yaml", Status: workspace.Checked},
	}
	require.NoError(t, jsonFindings(&b, files, "1.2.3"))
	fits(t, FindingsSchema(), b.Bytes())
	b.Reset()
	require.NoError(t, jsonFindings(&b, nil, "1.2.3"))
	fits(t, FindingsSchema(), b.Bytes())
}

func TestFindingsCountCodePointsAndLeaveOutWhatDoesNotApply(t *testing.T) {
	var b bytes.Buffer
	require.NoError(t, jsonFindings(&b, []workspace.File{outcome()}, "1.2.3"))
	var got struct {
		Files []struct {
			Path, Status string
			Findings     []map[string]any
		}
		Summary map[string]int
	}
	require.NoError(t, json.Unmarshal(b.Bytes(), &got))
	require.Len(t, got.Files, 1)
	assert.Equal(t, "checked", got.Files[0].Status)
	require.Len(t, got.Files[0].Findings, 3)
	position := func(line, column float64) map[string]any { return map[string]any{"line": line, "column": column} }
	loop, margin := got.Files[0].Findings[1], got.Files[0].Findings[2]
	assert.Equal(t, map[string]any{"start": position(3, 24), "end": position(3, 36)}, loop["range"], "µ and ± are one column each")
	assert.Equal(t, map[string]any{"input-voltage": 9.0, "load.current": 1.5}, loop["corner"])
	assert.Equal(t, map[string]any{"value": 4900.0, "unit": "Hz"}, loop["measured"])
	assert.Equal(t, map[string]any{"rule": "closed-loop-stability", "pointer": "/inductor/inductance"}, margin["cause"])
	for _, absent := range []string{"corner", "measured", "limit", "nominal", "formula", "related", "waiver", "mends"} {
		assert.NotContains(t, margin, absent)
	}
	assert.Equal(t, map[string]int{"files": 1, "unreadable": 0, "error": 1, "warning": 1, "note": 0, "waived": 0}, got.Summary, "a consequence is not counted")
}

func TestTheOrderOfTheCornerIsTheDesigns(t *testing.T) {
	text, err := json.Marshal(settings(outcome().Findings[1].Corner))
	require.NoError(t, err)
	assert.Equal(t, `{"input-voltage":9,"load.current":1.5}`, string(text))
}

func TestFiguresThatDoNotExistAreNull(t *testing.T) {
	text, err := json.Marshal([]figure{figure(math.NaN()), figure(math.Inf(1)), 0, 1.5e-6})
	require.NoError(t, err)
	assert.Equal(t, `[null,null,0,0.0000015]`, string(text))
}
