package lsp

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// seen is one line of testdata/lsp/editor.lua's output.
type seen struct {
	Step  string
	Hover string
	Shown []struct {
		Line      int `json:"line"`
		Column    int `json:"column"`
		EndLine   int `json:"end_line"`
		EndColumn int `json:"end_column"`
		Code      string
		Message   string
		Severity  int
	}
}

// TestNeovimShowsAFindingAtItsExactTextAndItsEnd drives a real editor, headless, with nothing but its built-in client.
func TestNeovimShowsAFindingAtItsExactTextAndItsEnd(t *testing.T) {
	nvim, err := exec.LookPath("nvim")
	if err != nil {
		t.Skip("Neovim is not installed, its test is left out (Debian: apt-get install neovim)")
	}
	file, text := lantern(t)
	found := finding(t, file, text, "rhp-zero-crossover")
	line := strings.Count(text[:found.Start], "\n")
	start := strings.LastIndexByte(text[:found.Start], '\n') + 1
	end := start + strings.IndexByte(text[start:], '\n')

	ctx, cancel := context.WithTimeout(context.Background(), 90*time.Second)
	defer cancel()
	cmd := exec.CommandContext(ctx, nvim, "--headless", "-u", "NONE", "-i", "NONE", "-n",
		"-c", "luafile "+filepath.Join("..", "testdata", "lsp", "editor.lua"), "-c", "3cquit!")
	own := t.TempDir()
	cmd.Env = append(os.Environ(), serveVariable+"=1", "SERVER="+os.Args[0], "FILE="+file, "RULE=rhp-zero-crossover",
		"LINE="+strconv.Itoa(line+1), "TEXT="+strings.Replace(text[start:end], text[found.Start:found.End], calm, 1),
		"XDG_CONFIG_HOME="+own, "XDG_DATA_HOME="+own, "XDG_STATE_HOME="+own, "XDG_CACHE_HOME="+own)
	var out, errs bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &errs
	require.NoError(t, cmd.Run(), "%s\n%s", errs.String(), out.String())

	var opened, edited seen
	decoder := json.NewDecoder(&out)
	require.NoError(t, decoder.Decode(&opened))
	require.NoError(t, decoder.Decode(&edited))
	var got bool
	for _, d := range opened.Shown {
		if d.Code == "rhp-zero-crossover" {
			got = true
			assert.Equal(t, line, d.Line)
			assert.Equal(t, line, d.EndLine)
			assert.Equal(t, text[found.Start:found.End], text[start+d.Column:start+d.EndColumn], "the exact text is marked")
			assert.Equal(t, found.Start, start+d.Column)
			assert.Equal(t, 1, d.Severity)
			assert.Equal(t, found.Message, d.Message)
		}
	}
	assert.True(t, got)
	assert.Contains(t, opened.Hover, "rhp-zero-crossover")
	for _, d := range edited.Shown {
		assert.NotEqual(t, "rhp-zero-crossover", d.Code)
	}
}
