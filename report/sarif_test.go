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
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// oasisSchema is the published schema of the format; formats (URIs, dates) are asserted.
func oasisSchema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	text, err := os.ReadFile("testdata/sarif-schema-2.1.0.json")
	require.NoError(t, err)
	c := jsonschema.NewCompiler()
	c.Draft = jsonschema.Draft4
	c.AssertFormat = true
	require.NoError(t, c.AddResource(sarifSchema, bytes.NewReader(text)))
	s, err := c.Compile(sarifSchema)
	require.NoError(t, err)
	return s
}

type sarifRead struct {
	Runs []struct {
		Tool struct {
			Driver struct{ Rules []sarifRule }
		}
		Results     []sarifResult
		Artifacts   []sarifArtifact
		Invocations []sarifInvocation
	}
}

// written gives the document for some files, after comparing it with the schema.
func written(t *testing.T, s *jsonschema.Schema, files ...workspace.File) sarifRead {
	t.Helper()
	var out bytes.Buffer
	w := NewSARIF(&out, "0.0.0")
	for _, f := range files {
		w.File(f)
	}
	require.NoError(t, w.Close())
	var v any
	require.NoError(t, json.Unmarshal(out.Bytes(), &v))
	require.NoError(t, s.Validate(v))
	var read sarifRead
	require.NoError(t, json.Unmarshal(out.Bytes(), &read))
	for _, r := range read.Runs[0].Results {
		assert.Equal(t, r.RuleID, read.Runs[0].Tool.Driver.Rules[r.RuleIndex].ID)
	}
	return read
}

func checkedFile(t *testing.T, root, path string) workspace.File {
	t.Helper()
	return workspace.Open(root).CheckFile(context.Background(), path, workspace.Options{Depth: analysis.Quick, Mends: true, Rules: rules.RunOptions{Today: "2030-06-30"}})
}

func TestSARIFOfEveryFileFitsTheOASISSchema(t *testing.T) {
	s := oasisSchema(t)
	paths, err := filepath.Glob("../testdata/rules/*/*.converter.*")
	require.NoError(t, err)
	var files []workspace.File
	results := 0
	for _, path := range append(paths, "../testdata", "../testdata/nothing.converter.yaml") {
		if !strings.HasSuffix(path, ".marks") {
			files = append(files, checkedFile(t, "../testdata", path))
			results += len(files[len(files)-1].Findings)
		}
	}
	read := written(t, s, files...)
	assert.Len(t, read.Runs[0].Results, results)
	assert.Len(t, read.Runs[0].Tool.Driver.Rules, len(rules.All()))
	seen := map[string]string{}
	levels, fixes, suppressed := map[string]int{}, 0, 0
	for _, r := range read.Runs[0].Results {
		print := r.Fingerprints[fingerprint]
		assert.Empty(t, seen[print], "%s and %s have one fingerprint", seen[print], r.Message.Text)
		seen[print] = r.Message.Text
		levels[r.Level]++
		fixes += len(r.Fixes)
		suppressed += len(r.Suppressions)
		assert.NotContains(t, r.Locations[0].Physical.Address.URI, "..", "relative to the root")
	}
	assert.Positive(t, levels["error"]*levels["warning"]*levels["note"]*fixes*suppressed, "every kind is among them")
	assert.NotEmpty(t, written(t, s).Runs, "nothing checked is a document too")
}

func TestFingerprintsStayWhenLinesMoveAndWhereverTheProgramRuns(t *testing.T) {
	s := oasisSchema(t)
	text, err := os.ReadFile("../testdata/rules/stated-figure/slips-and-a-wrong-one.converter.yaml")
	require.NoError(t, err)
	folder := t.TempDir()
	prints := func(root, path string, text []byte) (out []string, lines []int) {
		require.NoError(t, os.MkdirAll(filepath.Join(folder, "shelf"), 0o777))
		require.NoError(t, os.WriteFile(filepath.Join(folder, "shelf", "a.converter.yaml"), text, 0o666))
		for _, r := range written(t, s, checkedFile(t, root, path)).Runs[0].Results {
			out = append(out, r.Fingerprints[fingerprint])
			lines = append(lines, r.Locations[0].Physical.Region.StartLine)
			assert.Equal(t, "shelf/a.converter.yaml", r.Locations[0].Physical.Address.URI)
		}
		return out, lines
	}
	full := filepath.Join(folder, "shelf", "a.converter.yaml")
	plain, at := prints(folder, full, text)
	require.Len(t, plain, 5)
	moved, lower := prints(folder, full, append(bytes.Repeat([]byte("# µ\n"), 30), text...))
	assert.Equal(t, plain, moved, "30 lines above")
	assert.Equal(t, at[0]+30, lower[0])
	crlf, _ := prints(folder, full, bytes.ReplaceAll(text, []byte("\n"), []byte("\r\n")))
	assert.Equal(t, plain, crlf)
	changed, _ := prints(folder, full, bytes.Replace(text, []byte("75 deg"), []byte("76 deg"), 1))
	assert.Equal(t, plain, changed, "a figure that changed a little")
	t.Chdir(filepath.Join(folder, "shelf"))
	schemaOnly, _ := prints("..", "a.converter.yaml", text)
	assert.Equal(t, plain, schemaOnly, "from another folder")
}

func TestSARIFSaysWhoAcceptedAFinding(t *testing.T) {
	doc := schema.Read("a.converter.yaml", []byte("title: µΩ pump\n"), 0)
	base := rules.Finding{Rule: "phase-margin", Severity: rules.Error, Message: "phase margin 41.0° is below 45.0°", Pointer: "/title", Doc: doc, Start: 7, End: 16}
	waived, recorded := base, base
	waived.Waiver = &rules.Waiver{Reason: "bench", Until: "2031-01-01"}
	recorded.Recorded = true
	hostile := base
	hostile.Message = "x\x1b[31m \u202e </script> \"'`\x00"
	hostile.Rule = "internal"
	read := written(t, oasisSchema(t), workspace.File{Path: "a.converter.yaml", Document: doc, Findings: []rules.Finding{base, waived, recorded, hostile}})
	results := read.Runs[0].Results
	assert.Empty(t, results[0].Suppressions)
	assert.Equal(t, []sarifSuppression{{"inSource", "accepted", "bench (until 2031-01-01)"}}, results[1].Suppressions)
	assert.Equal(t, "external", results[2].Suppressions[0].Kind)
	assert.Equal(t, sarifRegion{1, 8, 1, 15}, results[0].Locations[0].Physical.Region, "code points, not bytes")
	assert.NotContains(t, results[3].Message.Text, "\x1b")
	assert.False(t, read.Runs[0].Invocations[0].Successful)
	assert.Len(t, read.Runs[0].Invocations[0].Notifications, 1)
}

func TestAddressesAreEscaped(t *testing.T) {
	f := workspace.File{Root: "/work"}
	for path, want := range map[string]string{
		"/work/shelf/a b#1?.converter.yaml": "shelf/a%20b%231%3F.converter.yaml",
		"/work/c:d/100 %.converter.yaml":    "c%3Ad/100%20%25.converter.yaml",
		"/work/ärger/µ.converter.yaml":      "%C3%A4rger/%C2%B5.converter.yaml",
	} {
		assert.Equal(t, want, addressOf(f, path))
	}
}
