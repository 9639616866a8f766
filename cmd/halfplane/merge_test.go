package main

import (
	"bytes"
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// TestJoinedShardsSayWhatOneCheckSays compares every form, byte for byte, on a shelf with everything that a finding can have:
// consequences, places in shared files, folded notes, waivers, repairs, files that cannot be read, policies, certificates.
func TestJoinedShardsSayWhatOneCheckSays(t *testing.T) {
	shelf, err := filepath.Abs("../../testdata/rules")
	require.NoError(t, err)
	folder := t.TempDir()
	t.Chdir(folder)
	require.NoError(t, os.CopyFS("shelf", os.DirFS(shelf)))
	require.NoError(t, os.CopyFS("shelf/reference", os.DirFS(filepath.Join(shelf, "..", "reference"))))
	require.NoError(t, os.WriteFile("shelf/halfplane.yaml", []byte("format: 1\nseverity: {preferred-value: warning}\n"), 0o666))
	require.NoError(t, os.WriteFile("shelf/odd\tname µ.converter.yaml", []byte("title: x\n"), 0o666))
	check := func(args ...string) (int, string) {
		var out, errs bytes.Buffer
		code := run(append([]string{"check"}, args...), nil, &out, &errs)
		return code, out.String()
	}
	base := []string{"--depth", "quick", "--today", "2030-06-30", "shelf", "shelf/no such.converter.yaml"}
	for _, k := range []string{"1", "2", "3"} {
		code, _ := check(append([]string{"--shard", k + "/3", "--as", "json", "--to", k + ".json"}, base...)...)
		require.LessOrEqual(t, code, 2)
	}
	for _, form := range []string{"text", "json", "sarif", "junit", "markdown", "csv"} {
		want, whole := check(append([]string{"--as", form}, base...)...)
		got, joint := check("--as", form, "--merge", "3.json", "1.json", "2.json")
		assert.Equal(t, want, got, form)
		require.NotEmpty(t, whole)
		assert.True(t, whole == joint, "%s differs", form)
	}
	// With repairs, on a few files.
	mends := []string{"--depth", "quick", "--mends", "shelf/stated-figure", "shelf/turns-ratio"}
	check(append([]string{"--as", "json", "--to", "mends.json"}, mends...)...)
	for _, form := range []string{"text", "json", "sarif"} {
		_, whole := check(append([]string{"--as", form}, mends...)...)
		_, again := check("--as", form, "--merge", "mends.json")
		assert.True(t, whole == again, "%s differs", form)
		assert.Contains(t, whole, "0.5051")
	}
	code, _ := check("--merge", "1.json", "--merge", "2.json", "--merge", "3.json", "--fail-at", "never")
	assert.Equal(t, 2, code, "a file that cannot be read stays one")
}

func TestWhatCannotBeJoinedIsSaid(t *testing.T) {
	folder := t.TempDir()
	t.Chdir(folder)
	write := func(name, text string) { require.NoError(t, os.WriteFile(name, []byte(text), 0o666)) }
	const head = `{"program":"halfplane","version":"0.1.0","files":[`
	const tail = `],"summary":{"files":1,"unreadable":0,"error":0,"warning":0,"note":0,"waived":0}}`
	finding := func(line string) string {
		return `{"path":"a.converter.yaml","status":"checked","findings":[{"rule":"phase-margin","severity":"error","message":"m","pointer":"/targets","range":{"start":{"line":` + line + `,"column":1},"end":{"line":` + line + `,"column":9}}}]}`
	}
	write("a.json", head+finding("3")+tail)
	write("same.json", "\ufeff"+head+finding("3")+tail)
	write("other.json", head+finding("4")+tail)
	write("newer.json", `{"program":"halfplane","version":"9.0.0","files":[`+tail)
	write("cut.json", head+finding("3")[:40])
	write("list.json", `[1]`)
	write("unknown.json", head+`{"path":"a.converter.yaml","status":"checked","findings":[{"rule":"no-such-rule","severity":"error","message":"m","pointer":"","range":{"start":{"line":1,"column":1},"end":{"line":1,"column":1}}}]}`+tail)
	write("far.json", head+finding("99999999999")+tail)
	for _, tt := range []struct {
		args []string
		code int
		said string
	}{
		{[]string{"--merge", "a.json", "same.json"}, 1, ""},
		{[]string{"--merge", "a.json", "--fail-at", "never"}, 0, ""},
		{[]string{"--merge", "a.json", "other.json"}, 2, "a.json and other.json say different things about a.converter.yaml"},
		{[]string{"--merge", "a.json", "newer.json"}, 2, "a.json was written by version 0.1.0 and newer.json by version 9.0.0"},
		{[]string{"--merge", "cut.json"}, 2, "cut.json:1:"},
		{[]string{"--merge", "list.json"}, 2, "this is not what 'halfplane check --as json' writes"},
		{[]string{"--merge", "unknown.json"}, 2, `there is no rule "no-such-rule"`},
		{[]string{"--merge", "far.json"}, 2, "beyond the end of any spec file"},
		{[]string{"--merge", "no.json"}, 2, "no.json"},
		{[]string{"--merge", "a.json", "--shard", "1/2"}, 2, "--shard belongs to the checks whose results --merge joins"},
	} {
		var out, errs bytes.Buffer
		assert.Equal(t, tt.code, run(append([]string{"check"}, tt.args...), nil, &out, &errs), "%v: %s", tt.args, errs.String())
		assert.Contains(t, errs.String(), tt.said)
	}
}
