package main

import (
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// copyOfList gives a folder with the real list of rules in its place.
func copyOfList(t *testing.T) string {
	root := t.TempDir()
	text, err := os.ReadFile("../list.go")
	require.NoError(t, err)
	require.NoError(t, os.Mkdir(filepath.Join(root, "rules"), 0o755))
	require.NoError(t, os.WriteFile(filepath.Join(root, "rules", "list.go"), text, 0o644))
	return root
}

func TestSkeletonWritesARuleIntoItsGroup(t *testing.T) {
	for _, group := range []string{"declared", "loop", "keeping"} {
		root := copyOfList(t)
		written, err := write(root, group, "brine-level")
		require.NoError(t, err)
		assert.Len(t, written, 4)
		for _, path := range written {
			if filepath.Ext(path) == ".go" {
				_, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.AllErrors)
				assert.NoError(t, err, path)
			}
		}
		list, err := os.ReadFile(filepath.Join(root, "rules", "list.go"))
		require.NoError(t, err)
		assert.Regexp(t, `(?s)// `+group+`\n[^/]*\n\t&brineLevel,`, string(list))
	}
}

func TestSkeletonOverwritesNothing(t *testing.T) {
	root := copyOfList(t)
	_, err := write(root, "loop", "brine-level")
	require.NoError(t, err)
	_, err = write(root, "loop", "brine-level")
	assert.ErrorContains(t, err, "exists already")
}

func TestSkeletonRefusesWhatIsNoName(t *testing.T) {
	for _, name := range []string{"", "Brine", "brine level", "../brine", "brine-", "-brine"} {
		_, err := write(copyOfList(t), "loop", name)
		assert.Error(t, err, name)
	}
	_, err := write(copyOfList(t), "weather", "brine-level")
	assert.ErrorContains(t, err, "no group")
}
