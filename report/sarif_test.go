package report

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"os"
	"path/filepath"
	"regexp"
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
	require.NoError(t, c.AddResource(SARIFSchema, bytes.NewReader(text)))
	s, err := c.Compile(SARIFSchema)
	require.NoError(t, err)
	return s
}

// sarifRead is what a reader makes of a run.
type sarifRead struct {
	Tool struct {
		Driver struct {
			Name, Version, SemanticVersion string
			Rules                          []struct {
				ID                                string
				ShortDescription, FullDescription sarifText
				Help                              sarifHelp
				DefaultConfiguration              sarifConfiguration
				Properties                        struct {
					Tags, Severities []string
					Group            string
					Policy           map[string]string
				}
			}
		}
	}
	Results            []sarifResult
	Artifacts          []sarifArtifact
	Invocations        []sarifInvocation
	OriginalURIBaseIDs map[string]sarifBase
}

// written gives the run for some files, after comparing it with the schema and with what the standard asks for beyond that.
func written(t *testing.T, s *jsonschema.Schema, files ...workspace.File) sarifRead {
	t.Helper()
	var out bytes.Buffer
	w := NewSARIF(&out, "0.1.0")
	for _, f := range files {
		w.File(f)
	}
	require.NoError(t, w.Close())
	return read(t, s, out.Bytes())
}

func read(t *testing.T, s *jsonschema.Schema, text []byte) sarifRead {
	t.Helper()
	var v any
	require.NoError(t, json.Unmarshal(text, &v))
	require.NoError(t, s.Validate(v))
	var document struct{ Runs []sarifRead }
	require.NoError(t, json.Unmarshal(text, &document))
	require.Len(t, document.Runs, 1)
	run := document.Runs[0]
	listed := map[sarifAddress]bool{}
	for _, a := range run.Artifacts {
		assert.False(t, listed[a.Location], "%v is on the list twice", a.Location)
		listed[a.Location] = true
		assert.Contains(t, run.OriginalURIBaseIDs, a.Location.Base)
	}
	for _, r := range run.Results {
		assert.Equal(t, r.RuleID, run.Tool.Driver.Rules[r.RuleIndex].ID)
		assert.NotNil(t, r.Suppressions, "an empty list says that nobody accepted it")
		for i, at := range r.Related {
			assert.Equal(t, i+1, at.ID)
			assert.True(t, listed[at.Physical.Address])
		}
		assert.True(t, listed[r.Locations[0].Physical.Address], "%v is on the list", r.Locations[0].Physical.Address)
	}
	return run
}

func checkedFile(t *testing.T, root, path string) workspace.File {
	t.Helper()
	// Repairs of stated figures are found at once; those of the loop take a search each, and are written the same.
	mends := strings.Contains(path, "stated-figure") || strings.Contains(path, "turns-ratio") || !strings.Contains(path, "testdata")
	return workspace.Open(root).CheckFile(context.Background(), path, workspace.Options{Depth: analysis.Quick, Mends: mends, Rules: rules.RunOptions{Today: "2030-06-30"}})
}

// onDisk writes a text into a folder and gives its path.
func onDisk(t *testing.T, folder, name, text string) string {
	t.Helper()
	path := filepath.Join(folder, name)
	require.NoError(t, os.MkdirAll(filepath.Dir(path), 0o777))
	require.NoError(t, os.WriteFile(path, []byte(text), 0o666))
	return path
}

func TestSARIFOfEveryFileFitsTheOASISSchema(t *testing.T) {
	s := oasisSchema(t)
	var files []workspace.File
	results := 0
	for _, pattern := range []string{"../testdata/rules/*/*.converter.*", "../testdata/rules/*/*.compensator.*", "../testdata/rules/*/*.parts.*", "../testdata/reference/*.converter.*", "../testdata", "../testdata/nothing.converter.yaml"} {
		paths, err := filepath.Glob(pattern)
		require.NoError(t, err)
		for _, path := range append(paths, pattern) {
			if !strings.HasSuffix(path, ".marks") {
				files = append(files, checkedFile(t, "../testdata", path))
				results += len(files[len(files)-1].Findings)
			}
		}
	}
	read := written(t, s, files...)
	assert.Len(t, read.Results, results)
	seen := map[string]string{}
	levels, fixes, suppressed := map[string]int{}, 0, 0
	for _, r := range read.Results {
		print := r.Fingerprints[fingerprint]
		assert.Empty(t, seen[print], "%s and %s have one fingerprint", seen[print], r.Message.Text)
		seen[print] = r.Message.Text
		levels[r.Level]++
		fixes += len(r.Fixes)
		suppressed += len(r.Suppressions)
		assert.NotContains(t, r.Locations[0].Physical.Address.URI, "..", "relative to the root")
		assert.Equal(t, sourceRoot, r.Locations[0].Physical.Address.Base)
	}
	assert.Positive(t, levels["error"]*levels["warning"]*levels["note"]*fixes*suppressed, "every kind is among them")
	assert.False(t, read.Invocations[0].Successful, "some of the files cannot be read")
	empty := written(t, s)
	assert.Empty(t, empty.Results)
	assert.True(t, empty.Invocations[0].Successful, "nothing checked is a document too")
}

func TestTheOASISSchemaRefusesWhatIsNoSARIF(t *testing.T) {
	s := oasisSchema(t)
	for _, wrong := range []string{
		`{"version": "2.1.0"}`,
		`{"version": "2.1.0", "runs": [{"tool": {"driver": {"name": "a"}}, "columnKind": "bytes"}]}`,
		`{"version": "2.1.0", "runs": [{"tool": {"driver": {"name": "a"}}, "artifacts": [{"location": {"uri": "a%b c"}}]}]}`,
	} {
		var v any
		require.NoError(t, json.Unmarshal([]byte(wrong), &v))
		assert.Error(t, s.Validate(v), wrong)
	}
}

func TestSARIFDescribesEveryRuleFromItsDeclaration(t *testing.T) {
	driver := written(t, oasisSchema(t)).Tool.Driver
	assert.Equal(t, Program, driver.Name)
	assert.Equal(t, "0.1.0", driver.SemanticVersion)
	require.Len(t, driver.Rules, len(rules.All()))
	for i, rule := range rules.All() {
		got := driver.Rules[i]
		assert.Equal(t, rule.Name, got.ID, "in the order of the catalogue")
		assert.Equal(t, rule.Severity.String(), got.DefaultConfiguration.Level)
		assert.Equal(t, rule.Sentence, got.ShortDescription.Text)
		assert.Contains(t, got.Properties.Tags, rule.Group.String())
		for _, page := range []string{got.Help.Text, got.Help.Markdown} {
			for _, part := range []string{rule.Sentence, rule.Formula, rule.Source} {
				assert.Contains(t, strings.Join(strings.Fields(page), " "), strings.Join(strings.Fields(part), " "), rule.Name)
			}
		}
		for _, p := range rule.Defaults() {
			assert.Equal(t, p.Value, got.Properties.Policy[p.Key])
			assert.Contains(t, got.Help.Markdown, p.Key)
		}
	}
	assert.False(t, semantic("devel") || semantic("v1.2.3") || semantic("01.2.3"))
	assert.True(t, semantic("1.20.3-rc.1+a"))
}

func TestFingerprintsStayWhenLinesMoveAndWhereverTheProgramRuns(t *testing.T) {
	s := oasisSchema(t)
	text, err := os.ReadFile("../testdata/rules/stated-figure/slips-and-a-wrong-one.converter.yaml")
	require.NoError(t, err)
	folder := t.TempDir()
	prints := func(root, path string, text []byte) (out []string, lines []int) {
		onDisk(t, folder, "shelf/a.converter.yaml", string(text))
		for _, r := range written(t, s, checkedFile(t, root, path)).Results {
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
	s2, _ := prints("..", "a.converter.yaml", text)
	assert.Equal(t, plain, s2, "from another folder")
}

func TestSARIFSaysWhoAcceptedAFinding(t *testing.T) {
	doc := schema.Read("a.converter.yaml", []byte("title: pump\n"), 0)
	base := rules.Finding{Rule: "phase-margin", Severity: rules.Error, Message: "phase margin 41.0° is below 45.0°", Pointer: "/title", Doc: doc, Start: 7, End: 11}
	waived, recorded, worse := base, base, base
	waived.Waiver = &rules.Waiver{Reason: "bench\u202e", Until: "2031-01-01"}
	recorded.Recorded = true
	recorded.Record = &rules.Record{Severity: rules.Error, Measured: 40.9, Limit: 45, Unit: "deg"}
	worse.Record = &rules.Record{Severity: rules.Error, Measured: 44, Limit: 45, Unit: "deg"}
	read := written(t, oasisSchema(t), workspace.File{Path: "a.converter.yaml", Document: doc, Findings: []rules.Finding{base, waived, recorded, worse}})
	results := read.Results
	assert.Empty(t, results[0].Suppressions)
	assert.Equal(t, []sarifSuppression{{"inSource", "accepted", `bench\u202e (until 2031-01-01)`}}, results[1].Suppressions)
	assert.Equal(t, []sarifSuppression{{"external", "accepted", "on record in the ledger"}}, results[2].Suppressions)
	assert.Empty(t, results[3].Suppressions, "what got worse is live")
	assert.Equal(t, "Phase margin 41.0° is below 45.0°. Worse than on record: error, 44.0° against 45.0°.", results[3].Message.Text)
	assert.Equal(t, 44.0, results[3].Properties.Record.Measured.Value)
	assert.True(t, read.Invocations[0].Successful, "findings are results, no failures")
}

func TestSARIFCountsCodePoints(t *testing.T) {
	folder := t.TempDir()
	text, err := os.ReadFile("../testdata/reference/beacon-boost-type3.converter.yaml")
	require.NoError(t, err)
	line := "switch: {µ𝛀é: 1, on-resistance: 22 uF}"
	text = regexp.MustCompile(`(?m)^switch: .*$`).ReplaceAll(text, []byte(line))
	path := onDisk(t, folder, "a.converter.yaml", "\ufeff"+string(text))
	got := map[string]sarifLocation{}
	for _, r := range written(t, oasisSchema(t), checkedFile(t, folder, path)).Results {
		got[r.RuleID] = r.Locations[0]
	}
	require.Len(t, got, 2)
	key, quantity := got["spec-shape"], got["quantity"].Physical.Region
	assert.Equal(t, []sarifLogical{{"µ𝛀é", "/switch/µ𝛀é", "property"}}, key.Logical)
	assert.Equal(t, []int{10, 13}, []int{key.Physical.Region.StartColumn, key.Physical.Region.EndColumn})
	start := len([]rune("switch: {µ𝛀é: 1, on-resistance: ")) + 1
	assert.Equal(t, []int{start, start + 5}, []int{quantity.StartColumn, quantity.EndColumn})
}

func TestNothingFromAFileIsMoreThanTextInSARIF(t *testing.T) {
	folder := t.TempDir()
	path := onDisk(t, folder, "a.converter.yaml", "format: 1\ntitle: x\ntopology: \"[buck](https://elsewhere.example) {0} \\e[31m \\u202e </script>\"\n\"k\\u0007\": 1\n")
	all := ""
	for _, r := range written(t, oasisSchema(t), checkedFile(t, folder, path)).Results {
		all += r.Message.Text
	}
	assert.Contains(t, all, `[buck\](https://elsewhere.example) {{0}}`)
	assert.Contains(t, all, `\u202e </script>`)
	assert.NotContains(t, all, "\x1b")
	assert.NotContains(t, all, "\a")
}

func TestSARIFSaysWhatKeptFilesFromBeingAnalysed(t *testing.T) {
	doc := schema.Read("b.converter.yaml", []byte("title: pump\n"), 0)
	here, err := filepath.Abs(".")
	require.NoError(t, err)
	files := []workspace.File{
		{Path: "a.converter.yaml", Status: workspace.Unreadable, Findings: []rules.Finding{{Rule: "spec-syntax", Severity: rules.Error, Message: "no such file"}, {Rule: "spec-syntax", Severity: rules.Error, Message: "more"}}},
		{Path: "b.converter.yaml", Document: doc, Defect: true, Status: workspace.Unreadable, Findings: []rules.Finding{rules.Internal(doc, "the program itself failed")}},
		{Path: "c.converter.yaml", Root: here, Result: &analysis.Result{Complete: false}},
	}
	one := written(t, oasisSchema(t), files...).Invocations[0]
	assert.False(t, one.Successful)
	require.Len(t, one.Notifications, 3)
	assert.Equal(t, "Not analysed: no such file.", one.Notifications[0].Message.Text)
	assert.Equal(t, "spec-syntax", one.Notifications[0].Rule.ID)
	assert.Equal(t, "internal", one.Notifications[1].Rule.ID)
	assert.Equal(t, "note", one.Notifications[2].Level)
	assert.Equal(t, "c.converter.yaml", one.Notifications[2].Locations[0].Physical.Address.URI)
	assert.True(t, written(t, oasisSchema(t), files[2]).Invocations[0].Successful, "a note is no failure")

	var out bytes.Buffer
	w := NewSARIF(&out, "0.1.0")
	w.Failed(errors.Join(errors.New("searching a: permission denied"), errors.New("searching b: permission denied")))
	w.Failed(nil)
	require.NoError(t, w.Close())
	assert.Len(t, read(t, oasisSchema(t), out.Bytes()).Invocations[0].Notifications, 2)
}

func TestSARIFTellsRootsApart(t *testing.T) {
	folder := t.TempDir()
	text, err := os.ReadFile("../testdata/rules/turns-ratio/inverted.converter.yaml")
	require.NoError(t, err)
	one, two := onDisk(t, folder, "one/a.converter.yaml", string(text)), onDisk(t, folder, "two/a.converter.yaml", string(text))
	read := written(t, oasisSchema(t), checkedFile(t, filepath.Dir(one), one), checkedFile(t, filepath.Dir(two), two))
	require.Len(t, read.Artifacts, 2)
	assert.Equal(t, sarifAddress{"a.converter.yaml", "SRCROOT"}, read.Artifacts[0].Location)
	assert.Equal(t, sarifAddress{"a.converter.yaml", "SRCROOT2"}, read.Artifacts[1].Location)
	assert.Equal(t, "A further root: ../two, seen from SRCROOT.", read.OriginalURIBaseIDs["SRCROOT2"].Description.Text)
	seen := map[string]bool{}
	for _, r := range read.Results {
		assert.False(t, seen[r.Fingerprints[fingerprint]])
		seen[r.Fingerprints[fingerprint]] = true
	}
}

func TestSARIFListsEveryFileWithWhatItWasFor(t *testing.T) {
	folder := t.TempDir()
	design, err := os.ReadFile("../testdata/rules/rhp-zero-crossover/shared-compensator.converter.yaml")
	require.NoError(t, err)
	shared, err := filepath.Glob("../testdata/rules/shared/*")
	require.NoError(t, err)
	for _, from := range shared {
		text, err := os.ReadFile(from)
		require.NoError(t, err)
		onDisk(t, folder, "shared/"+filepath.Base(from), string(text))
	}
	onDisk(t, folder, "halfplane.yaml", "format: 1\nseverity: {rhp-zero-crossover: warning}\n")
	path := onDisk(t, folder, "shelf/a.converter.yaml", string(design))
	checked := checkedFile(t, folder, path)
	files := []workspace.File{checked, checkedFile(t, folder, filepath.Join(folder, "halfplane.yaml"))}
	for _, from := range shared {
		files = append(files, checkedFile(t, folder, filepath.Join(folder, "shared", filepath.Base(from))))
	}
	read := written(t, oasisSchema(t), files...)
	roles := map[string][]string{}
	for _, a := range read.Artifacts {
		roles[a.Location.URI] = a.Roles
		assert.Len(t, a.Hashes["sha-256"], 64, a.Location.URI)
		assert.Equal(t, "yaml", a.Language)
	}
	assert.Equal(t, []string{configuration, analysisTarget}, roles["halfplane.yaml"])
	assert.Equal(t, []string{analysisTarget}, roles["shelf/a.converter.yaml"])
	assert.Len(t, roles, len(shared)+2)
	levels := map[string]string{}
	elsewhere := false
	for _, r := range read.Results {
		levels[r.RuleID] = r.Level
		for _, at := range r.Related {
			elsewhere = elsewhere || strings.HasPrefix(at.Physical.Address.URI, "shared/")
		}
	}
	assert.Equal(t, "warning", levels["rhp-zero-crossover"], "the policy's severity")
	assert.True(t, elsewhere, "a place in a shared file is related")
}

func TestAddressesAreEscapedAndNeverLeaveTheirRoot(t *testing.T) {
	folder := t.TempDir()
	var a sarifAddresses
	for path, want := range map[string]string{
		"shelf/a b#1?.converter.yaml":  "shelf/a%20b%231%3F.converter.yaml",
		"c:d/100 %.converter.yaml":     "c%3Ad/100%20%25.converter.yaml",
		"ärger/µ.converter.yaml":       "%C3%A4rger/%C2%B5.converter.yaml",
		"shelf/../x/a.converter.yaml":  "x/a.converter.yaml",
		"[a]/\"b\"\\<>.converter.yaml": "%5Ba%5D/%22b%22%5C%3C%3E.converter.yaml",
	} {
		assert.Equal(t, sarifAddress{want, sourceRoot}, a.of(folder, folder+"/"+path))
	}
	assert.Equal(t, sarifAddress{"house.yaml", "SRCROOT2"}, a.of(folder, filepath.Join(t.TempDir(), "house.yaml")), "a policy from elsewhere")
	link := filepath.Join(t.TempDir(), "link")
	require.NoError(t, os.Symlink(folder, link))
	assert.Equal(t, sarifAddress{"a.yaml", sourceRoot}, a.of(folder, link+"/a.yaml"), "the same folder by another name")
}
