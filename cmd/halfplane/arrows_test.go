package main

import (
	"encoding/json"
	"os/exec"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// allowed names, for each room of the house, the rooms that it may import. Data flows one way:
// text → schema → analysis → rules → report/lsp → cmd.
var allowed = map[string][]string{
	"analysis":      {"analysis"},
	"schema":        {"analysis"},
	"rules":         {"analysis", "schema"},
	"workspace":     {"analysis", "schema", "rules"},
	"report":        {"analysis", "schema", "rules", "workspace"},
	"lsp":           {"analysis", "schema", "rules", "workspace"},
	"cmd/halfplane": {"analysis", "schema", "rules", "workspace", "report", "lsp", "testdata"},
	"testdata":      {},
}

// TestImportsFlowOneWay lists every package's imports and refuses any arrow that the picture in DEVELOPERS.md does not have.
func TestImportsFlowOneWay(t *testing.T) {
	out, err := exec.Command("go", "list", "-json=ImportPath,Imports", "halfplane/...").Output()
	require.NoError(t, err)
	decoder := json.NewDecoder(strings.NewReader(string(out)))
	packages := 0
	for decoder.More() {
		var p struct {
			ImportPath string
			Imports    []string
		}
		require.NoError(t, decoder.Decode(&p))
		packages++
		from := room(p.ImportPath)
		arrows, known := allowed[from]
		require.True(t, known, "package %s lies in no room", p.ImportPath)
		for _, imported := range p.Imports {
			to := room(imported)
			if to == "" || to == from {
				continue
			}
			assert.Contains(t, arrows, to, "%s imports %s", p.ImportPath, imported)
		}
	}
	assert.GreaterOrEqual(t, packages, 10)
}

// room gives the part of the house that a package lies in, "" for one from outside the module.
func room(path string) string {
	rest, inside := strings.CutPrefix(path, "halfplane/")
	if !inside {
		return ""
	}
	if strings.HasPrefix(rest, "cmd/") {
		return "cmd/halfplane"
	}
	first, _, _ := strings.Cut(rest, "/")
	return first
}
