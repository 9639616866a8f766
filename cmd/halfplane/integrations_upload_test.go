package main

import (
	"bytes"
	"compress/gzip"
	"encoding/base64"
	"encoding/json"
	"io"
	"net/http"
	"net/http/httptest"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// The forge is not here; a server that takes what it documents is. What arrives is the file, whole.
func TestIntegrationsTheUploadArrivesWhole(t *testing.T) {
	if _, err := exec.LookPath("curl"); err != nil {
		t.Skip("curl is not here")
	}
	answer := http.StatusAccepted
	var asked *http.Request
	var body []byte
	server := httptest.NewServer(http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		asked = r
		body, _ = io.ReadAll(r.Body)
		w.WriteHeader(answer)
		_, _ = io.WriteString(w, `{"id":"1"}`)
	}))
	defer server.Close()

	var sarif bytes.Buffer
	require.NotEqual(t, 3, run([]string{"check", "shelf", "--depth", "quick", "--as", "sarif"}, nil, &sarif, io.Discard))
	file := filepath.Join(t.TempDir(), "found here.sarif")
	require.NoError(t, os.WriteFile(file, sarif.Bytes(), 0o666))
	commit := strings.Repeat("0a", 20)
	upload := func() (string, error) {
		cmd := exec.Command("sh", "../../integrations/ci/sarif-upload.sh", file, commit, `refs/heads/a"b`)
		cmd.Env = append(os.Environ(), "GITHUB_REPOSITORY=station/shelf", "GITHUB_TOKEN=key", "GITHUB_API_URL="+server.URL, "TMPDIR="+t.TempDir())
		out, err := cmd.CombinedOutput()
		return string(out), err
	}
	said, err := upload()
	require.NoError(t, err, said)
	assert.Equal(t, `{"id":"1"}`, said)
	assert.Equal(t, "POST /repos/station/shelf/code-scanning/sarifs", asked.Method+" "+asked.URL.Path)
	assert.Equal(t, "Bearer key", asked.Header.Get("Authorization"))
	assert.Equal(t, "application/json", asked.Header.Get("Content-Type"))

	var got struct {
		Commit     string `json:"commit_sha"`
		Ref, SARIF string
	}
	require.NoError(t, json.Unmarshal(body, &got))
	assert.Equal(t, commit, got.Commit)
	assert.Equal(t, `refs/heads/a"b`, got.Ref)
	packed, err := gzip.NewReader(base64.NewDecoder(base64.StdEncoding, strings.NewReader(got.SARIF)))
	require.NoError(t, err)
	text, err := io.ReadAll(packed)
	require.NoError(t, err)
	assert.True(t, bytes.Equal(sarif.Bytes(), text), "the file as it was")

	answer = http.StatusForbidden
	said, err = upload()
	assert.Error(t, err, "a refusal is no success")
	assert.Contains(t, said, "the server answers 403")
}
