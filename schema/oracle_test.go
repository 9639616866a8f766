package schema

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"
	yaml "go.yaml.in/yaml/v4"
)

// outline writes a tree in one line, without positions, to compare two readings.
func outline(n *Node) string {
	switch {
	case n == nil:
		return "none"
	case n.Kind == Mapping:
		parts := make([]string, 0, len(n.Entries))
		for _, e := range n.Entries {
			parts = append(parts, fmt.Sprintf("%q:%s", e.Key, outline(e.Value)))
		}
		return "{" + strings.Join(parts, " ") + "}"
	case n.Kind == Sequence:
		parts := make([]string, 0, len(n.Items))
		for _, item := range n.Items {
			parts = append(parts, outline(item))
		}
		return "[" + strings.Join(parts, " ") + "]"
	case n.Type == Null:
		return "null"
	}
	return fmt.Sprintf("%q", n.Value)
}

// libraryOutline is the outline of the tree that a general YAML library reads: an independent judge of structure and
// of folded, escaped and block texts. Types are left out, as the library follows YAML 1.1 in part.
func libraryOutline(n *yaml.Node) string {
	switch n.Kind {
	case yaml.DocumentNode:
		return libraryOutline(n.Content[0])
	case yaml.AliasNode:
		return libraryOutline(n.Alias)
	case yaml.MappingNode:
		parts := make([]string, 0, len(n.Content)/2)
		for i := 0; i < len(n.Content); i += 2 {
			parts = append(parts, fmt.Sprintf("%q:%s", n.Content[i].Value, libraryOutline(n.Content[i+1])))
		}
		return "{" + strings.Join(parts, " ") + "}"
	case yaml.SequenceNode:
		parts := make([]string, 0, len(n.Content))
		for _, item := range n.Content {
			parts = append(parts, libraryOutline(item))
		}
		return "[" + strings.Join(parts, " ") + "]"
	}
	if n.ShortTag() != "!!str" && n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle|yaml.LiteralStyle|yaml.FoldedStyle) == 0 {
		switch n.Value {
		case "", "~", "null", "Null", "NULL":
			return "null"
		}
	}
	return fmt.Sprintf("%q", n.Value)
}

func TestReferenceDesignsReadLikeALibraryReadsThem(t *testing.T) {
	files, err := filepath.Glob("../testdata/reference/*.yaml")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, file := range files {
		text, err := os.ReadFile(file)
		require.NoError(t, err)
		d := Read(file, text, 0)
		require.Empty(t, d.Problems, file)
		var n yaml.Node
		require.NoError(t, yaml.Unmarshal(text, &n))
		require.Equal(t, libraryOutline(&n), outline(d.Root), file)
	}
}
