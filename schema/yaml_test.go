package schema

import (
	"fmt"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"
	yaml "go.yaml.in/yaml/v4"
	"pgregory.net/rapid"
)

// sameAsWritten compares a tree with what the generator noted, every range included.
func sameAsWritten(t require.TestingT, d *Document, w *generated, n *Node, path string) {
	require.Equal(t, w.kind, n.Kind, path)
	require.Equal(t, string(d.Text[w.start:w.end]), string(d.Text[n.Start:n.End]), path)
	require.Equal(t, [2]int{w.start, w.end}, [2]int{n.Start, n.End}, path)
	require.Same(t, d, n.Doc, path)
	require.Equal(t, len(w.keys), len(n.Entries), path)
	require.Equal(t, len(w.items), len(n.Items), path)
	if w.kind == Scalar {
		require.Equal(t, w.value, n.Value, path)
		require.Equal(t, w.typ, n.Type, path)
	}
	for i, k := range w.keys {
		e := n.Entries[i]
		require.Equal(t, k.text, e.Key, path)
		require.Equal(t, [2]int{k.start, k.end}, [2]int{e.KeyStart, e.KeyEnd}, path)
		sameAsWritten(t, d, k.value, e.Value, path+"/"+escapePointer(k.text))
	}
	for i, item := range w.items {
		sameAsWritten(t, d, item, n.Items[i], fmt.Sprintf("%s/%d", path, i))
	}
}

// TestEveryRangeIsWhereTheTextWasWritten: documents in all styles, line ends and indentations, with comments, tabs and
// characters of one to four bytes, come back with every key and value at the bytes where the generator put them.
func TestEveryRangeIsWhereTheTextWasWritten(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text, want := generateYAML(t)
		d := Read("pier.converter.yaml", []byte(text), 0)
		require.Empty(t, d.Problems, text)
		sameAsWritten(t, d, want, d.Root, "")
	})
}

// TestGeneratedDocumentsReadLikeALibraryReadsThem checks the generator and the reader against an independent reader.
func TestGeneratedDocumentsReadLikeALibraryReadsThem(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text, _ := generateYAML(t)
		text = strings.Replace(text, "%YAML 1.2", "%YAML 1.1", 1) // the library knows no later one
		var n yaml.Node
		require.NoError(t, yaml.Unmarshal([]byte(text), &n), text)
		require.Equal(t, libraryOutline(&n), outline(Read("pier.converter.yaml", []byte(text), 0).Root), text)
	})
}
