package workspace

import (
	"context"
	"errors"
	"io"
	"net"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// Every thing that can stand where a file was expected is one finding that says what it is, at the first position.
func TestWhatIsNoReadableFileIsAFinding(t *testing.T) {
	root := tree(t, map[string]string{"folder.converter.yaml/": ""})
	require.NoError(t, os.Symlink("nowhere.yaml", filepath.Join(root, "dangling.converter.yaml")))
	require.NoError(t, os.Symlink("ring.converter.yaml", filepath.Join(root, "ring.converter.yaml")))
	require.NoError(t, syscall.Mkfifo(filepath.Join(root, "pipe.converter.yaml"), 0o666))
	l, err := net.Listen("unix", "socket.converter.yaml")
	require.NoError(t, err)
	defer l.Close()
	large, err := os.Create("large.converter.yaml")
	require.NoError(t, err)
	require.NoError(t, large.Truncate(50<<20))
	require.NoError(t, large.Close())
	want := map[string]string{
		"missing.converter.yaml":  "no such file",
		"folder.converter.yaml":   "folder",
		"dangling.converter.yaml": "nowhere.yaml",
		"ring.converter.yaml":     "leads nowhere",
		"pipe.converter.yaml":     "a pipe",
		"socket.converter.yaml":   "a socket",
		"large.converter.yaml":    "50.0 MB",
	}
	if os.Getuid() != 0 {
		require.NoError(t, os.WriteFile("shut.converter.yaml", nil, 0))
		want["shut.converter.yaml"] = "permission denied"
	}
	for name, words := range want {
		t.Run(name, func(t *testing.T) {
			f := Open(root).CheckFile(context.Background(), name, Options{Depth: analysis.Quick})
			assert.Equal(t, Unreadable, f.Status)
			assert.False(t, f.Defect)
			assert.Equal(t, name, f.Path)
			require.Len(t, f.Findings, 1)
			found := f.Findings[0]
			assert.Equal(t, "spec-syntax", found.Rule)
			assert.Equal(t, rules.Error, found.Severity)
			assert.Contains(t, found.Message, words)
			assert.Equal(t, schema.Position{Line: 1, Column: 1}, found.Doc.Position(found.Start))
			assert.Equal(t, schema.Position{Line: 1, Column: 1}, found.Doc.Position(found.End))
		})
	}
}

func TestReferencesStayInTheWorkspace(t *testing.T) {
	root := tree(t, map[string]string{
		"in/a.converter.yaml": "", "in/common/c.compensator.yaml": "format: 1\n", "out/c.compensator.yaml": "format: 1\n",
	})
	require.NoError(t, os.Symlink(filepath.Join(root, "out"), filepath.Join(root, "in", "escape")))
	require.NoError(t, os.Symlink("common/c.compensator.yaml", filepath.Join(root, "in", "alias.compensator.yaml")))
	w := Open("in")
	from := schema.Read("in/a.converter.yaml", nil, 0)
	for reference, refusal := range map[string]string{
		"common/c.compensator.yaml":                          "",
		"./common/../common/c.compensator.yaml":              "",
		"alias.compensator.yaml":                             "",
		"../out/c.compensator.yaml":                          "leaves the workspace",
		"escape/c.compensator.yaml":                          "leads out of the workspace",
		filepath.Join(root, "in/common/c.compensator.yaml"):  "absolute path",
		"common/missing.compensator.yaml":                    "no such file",
		"common":                                             "folder",
		"":                                                   "names no file",
		"common/c.compensator.yaml\x00":                      "names no file",
		strings.Repeat("../", 60) + "etc/c.compensator.yaml": "leaves the workspace",
		strings.Repeat("x", 5000) + "/very.compensator.yaml": "could not be read",
		"common/c.compensator.yaml/below.compensator.yaml":   "could not be read",
	} {
		doc, err := w.Resolve(from, reference)
		if refusal == "" {
			require.NoError(t, err, reference)
			assert.Equal(t, "format: 1\n", string(doc.Text))
			continue
		}
		require.Error(t, err, reference)
		assert.Contains(t, err.Error(), refusal, reference)
	}
}

func TestUnsavedTextWinsOverTheDisk(t *testing.T) {
	tree(t, map[string]string{"a.converter.yaml": "", "c.compensator.yaml": "format: 1\n"})
	w := Open(".")
	from := schema.Read("a.converter.yaml", nil, 0)
	unsaved := schema.Read("c.compensator.yaml", []byte("format: 1\ntitle: unsaved\n"), 7)
	w.Overlay("c.compensator.yaml", unsaved)
	doc, err := w.Resolve(from, "c.compensator.yaml")
	require.NoError(t, err)
	assert.Same(t, unsaved, doc)
	w.Overlay("c.compensator.yaml", nil)
	doc, err = w.Resolve(from, "c.compensator.yaml")
	require.NoError(t, err)
	assert.Equal(t, "format: 1\n", string(doc.Text))
	again, err := w.Resolve(from, "./c.compensator.yaml")
	require.NoError(t, err)
	assert.Same(t, doc, again, "a shared file is read once")
	require.NoError(t, os.WriteFile("c.compensator.yaml", []byte("format: 1\ntitle: changed\n"), 0o666))
	doc, err = w.Resolve(from, "c.compensator.yaml")
	require.NoError(t, err)
	assert.Contains(t, string(doc.Text), "changed")
}

func TestDependentsFollowSharedFilesAndUnsavedTexts(t *testing.T) {
	root := tree(t, map[string]string{
		"a.converter.yaml":          "compensator: {use: common/c.compensator.yaml}\n",
		"sub/b.converter.yaml":      "libraries: [../store.parts.yaml]\n",
		"sub/c.converter.yaml":      "title: uses nothing\n",
		"common/c.compensator.yaml": "libraries: [../store.parts.yaml]\n",
		"store.parts.yaml":          "format: 1\n",
	})
	w := Open(".")
	at := func(names ...string) (out []string) {
		for _, n := range names {
			out = append(out, filepath.Join(root, filepath.FromSlash(n)))
		}
		return out
	}
	assert.Equal(t, at("a.converter.yaml"), w.Dependents("common/c.compensator.yaml"))
	assert.Equal(t, at("a.converter.yaml", "common/c.compensator.yaml", "sub/b.converter.yaml"), w.Dependents("store.parts.yaml"))
	assert.Empty(t, w.Dependents("a.converter.yaml"))
	w.Overlay("sub/c.converter.yaml", schema.Read("sub/c.converter.yaml", []byte("compensator: {use: ../common/c.compensator.yaml}\n"), 2))
	assert.Equal(t, at("a.converter.yaml", "sub/c.converter.yaml"), w.Dependents("common/c.compensator.yaml"))
	w.Overlay("sub/c.converter.yaml", nil)
	assert.Equal(t, at("a.converter.yaml"), w.Dependents("common/c.compensator.yaml"))
}

// A failure inside the program is a finding of that one file; the others come out as ever.
func TestFailuresInsideTheProgramStayWithTheirFile(t *testing.T) {
	tree(t, map[string]string{"a.converter.yaml": "x: 1\n", "b.converter.yaml": "x: 1\n"})
	w := Open(".")
	w.prepare = func(ctx context.Context, doc *schema.Document, r schema.Resolver, s rules.Settings, o analysis.Options) (*rules.Case, []schema.Problem, error) {
		if doc.Name == "a.converter.yaml" {
			panic("a wrong index")
		}
		return rules.Prepare(ctx, doc, r, s, o)
	}
	files := w.CheckAll(context.Background(), []string{"a.converter.yaml", "b.converter.yaml"}, Options{}, nil)
	require.Len(t, files, 2)
	assert.True(t, files[0].Defect)
	require.Len(t, files[0].Findings, 1)
	assert.Equal(t, "internal", files[0].Findings[0].Rule)
	assert.Contains(t, files[0].Findings[0].Message, "a wrong index")
	assert.False(t, files[1].Defect)
	assert.NotEmpty(t, files[1].Findings)
}

// Numbers that are well written and impossible are the file's fault, not the program's.
func TestImpossibleNumbersAreTheFilesFault(t *testing.T) {
	sane, err := os.ReadFile("../testdata/reference/beacon-boost-type3.converter.yaml")
	require.NoError(t, err)
	for from, to := range map[string]string{
		"feedback-resistor: 7k87 ± 1 %":        "feedback-resistor: 1e200",
		"integrator-capacitor: 39n ± 5 %":      "integrator-capacitor: 1e-200",
		"lead-capacitor: 2n7 ± 5 %":            "lead-capacitor: 1e-200",
		"inductance: 22 uH ± 20 %":             "inductance: 1e300",
		"capacitance: 220 uF ± 20 %":           "capacitance: 1e300",
		"switching-frequency: 250 kHz":         "switching-frequency: 1e308",
		"output-voltage: 24 V":                 "output-voltage: 1e300",
		"gain-bandwidth: 10 MHz":               "gain-bandwidth: 1e-200",
		"duty-limit: {min: 0, max: 0.8}":       "delay: 1e200",
		"resistance: 25 mΩ":                    "resistance: 1e200",
		"ramp-amplitude: 1.8 V":                "ramp-amplitude: 1e-300",
		"esr: {min: 8 mΩ, max: 25 mΩ}":         "esr: 1e200",
		"{min: 9 V, nominal: 12 V, max: 16 V}": "{min: 1e-200, nominal: 12 V, max: 1e200}",
	} {
		t.Run(to, func(t *testing.T) {
			require.Contains(t, string(sane), from)
			text := strings.Replace(string(sane), from, to, 1)
			f := Open(".").CheckDocument(context.Background(), schema.Read("a.converter.yaml", []byte(text), 0), Options{Depth: analysis.Quick})
			assert.False(t, f.Defect)
			if f.Status == Unreadable {
				require.NotEmpty(t, f.Findings)
				assert.Equal(t, "quantity", f.Findings[0].Rule)
			}
		})
	}
}

func TestManyFilesComeOutInOrder(t *testing.T) {
	files := map[string]string{}
	var paths []string
	for _, r := range "abcdefghijklmnopqrstuvwxyz" {
		name := string(r) + ".converter.yaml"
		files[name] = strings.Repeat("# padding\n", int('z'-r)*50) + "format: 1\n"
		paths = append(paths, name)
	}
	tree(t, files)
	for _, jobs := range []int{1, 3, 50} {
		var order []string
		got := Open(".").CheckAll(context.Background(), paths, Options{Jobs: jobs}, func(f File) { order = append(order, f.Path) })
		assert.Equal(t, paths, order)
		assert.Len(t, got, len(paths))
	}
	ctx, stop := context.WithCancel(context.Background())
	n := 0
	Open(".").CheckAll(ctx, paths, Options{Jobs: 1}, func(File) { n++; stop() })
	assert.Less(t, n, len(paths), "a cancelled check ends early")
}

func TestWritingIsWholeOrNotAtAll(t *testing.T) {
	root := tree(t, map[string]string{"old.json": "old", "sub/": "", "else/where.json": "theirs", "folder/": ""})
	put := func(s string) func(io.Writer) error {
		return func(w io.Writer) error { _, err := io.WriteString(w, s); return err }
	}
	read := func(name string) string {
		text, err := os.ReadFile(name)
		require.NoError(t, err)
		return string(text)
	}
	require.NoError(t, os.Chmod("old.json", 0o640))
	require.NoError(t, WriteFile("old.json", put("new")))
	assert.Equal(t, "new", read("old.json"))
	info, err := os.Stat("old.json")
	require.NoError(t, err)
	assert.Equal(t, os.FileMode(0o640), info.Mode().Perm(), "the mode stays")

	broken := errors.New("half way")
	err = WriteFile("old.json", func(w io.Writer) error { io.WriteString(w, "ha"); return broken })
	require.ErrorIs(t, err, broken)
	assert.Equal(t, "new", read("old.json"), "the old text stays")

	require.NoError(t, os.Symlink("../else/where.json", filepath.Join(root, "sub", "out.json")))
	require.ErrorContains(t, WriteFile("sub/out.json", put("mine")), "out of its folder")
	assert.Equal(t, "theirs", read("else/where.json"))
	require.NoError(t, os.Symlink("old.json", filepath.Join(root, "link.json")))
	require.NoError(t, WriteFile("link.json", put("through")))
	assert.Equal(t, "through", read("old.json"))
	link, err := os.Lstat("link.json")
	require.NoError(t, err)
	assert.NotZero(t, link.Mode()&os.ModeSymlink, "a link inside its folder stays a link")

	require.Error(t, WriteFile("folder", put("x")))
	require.Error(t, WriteFile("no/such/folder.json", put("x")))
	require.NoError(t, WriteFile(os.DevNull, put("x")))
	entries, err := os.ReadDir(".")
	require.NoError(t, err)
	assert.Len(t, entries, 5, "nothing is left beside: %v", entries)
}
