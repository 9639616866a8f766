package schema

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

var update = flag.Bool("update", false, "rewrite the expected trees in testdata/documents")

// listing writes a document with every place in lines and columns, as testdata/documents/README.md describes.
func listing(d *Document) string {
	var b strings.Builder
	if d.Root != nil {
		d.list(&b, "", nil, d.Root)
	}
	for _, line := range said(d) {
		b.WriteString("problem " + line + "\n")
	}
	return b.String()
}

func (d *Document) list(b *strings.Builder, pointer string, e *Entry, n *Node) {
	place := func(start, end int) string {
		from, to := d.Position(start), d.Position(end)
		return fmt.Sprintf("%d:%d-%d:%d", from.Line, from.Column, to.Line, to.Column)
	}
	fmt.Fprintf(b, "%q", pointer)
	if e != nil {
		b.WriteString(" key " + place(e.KeyStart, e.KeyEnd))
		if e.Merged {
			b.WriteString(" merged")
		}
	}
	fmt.Fprintf(b, " %s at %s", n.Kind, place(n.Start, n.End))
	if n.Alias != nil {
		b.WriteString(" alias of " + place(n.Alias.Start, n.Alias.End))
	}
	switch {
	case n.Kind == Scalar && n.Type == Number:
		fmt.Fprintf(b, " %s %s %q", n.Type, strconv.FormatFloat(n.Number, 'g', -1, 64), n.Value)
	case n.Kind == Scalar:
		fmt.Fprintf(b, " %s %q", n.Type, n.Value)
	}
	b.WriteByte('\n')
	for i := range n.Entries {
		d.list(b, pointer+"/"+escapePointer(n.Entries[i].Key), &n.Entries[i], n.Entries[i].Value)
	}
	for i, item := range n.Items {
		d.list(b, pointer+"/"+strconv.Itoa(i), nil, item)
	}
}

func documents(t *testing.T) []string {
	files, err := filepath.Glob("testdata/documents/*.converter.*")
	require.NoError(t, err)
	files = slicesWithout(files, ".tree")
	require.Len(t, files, 4)
	return files
}

func slicesWithout(names []string, suffix string) []string {
	var out []string
	for _, name := range names {
		if !strings.HasSuffix(name, suffix) {
			out = append(out, name)
		}
	}
	return out
}

func TestDocumentsHaveTheirExpectedTrees(t *testing.T) {
	for _, file := range documents(t) {
		text, err := os.ReadFile(file)
		require.NoError(t, err)
		d := Read(file, text, 0)
		checkTree(t, d)
		got := listing(d)
		if *update {
			require.NoError(t, os.WriteFile(file+".tree", []byte(got), 0o644))
		}
		want, err := os.ReadFile(file + ".tree")
		require.NoError(t, err)
		assert.Equal(t, string(want), got, file)
	}
}

// TestDocumentsReadTheSameWithEveryLineEnd: places in lines and columns, types and texts do not depend on the line end or
// on a byte-order mark.
func TestDocumentsReadTheSameWithEveryLineEnd(t *testing.T) {
	for _, file := range documents(t) {
		text, err := os.ReadFile(file)
		require.NoError(t, err)
		want := listing(Read(file, text, 0))
		for _, eol := range []string{"\n", "\r\n", "\r"} {
			for _, mark := range []string{"", byteOrderMark} {
				other := mark + strings.ReplaceAll(string(text), "\n", eol)
				assert.Equal(t, want, listing(Read(file, []byte(other), 0)), "%s with %q and %q", file, eol, mark)
			}
		}
	}
}

// TestOneMistakeDoesNotHideTheRest: with any one line of a design broken off or spoilt, the values in all other blocks
// are still found.
func TestOneMistakeDoesNotHideTheRest(t *testing.T) {
	text, err := os.ReadFile("testdata/documents/gauge-boost.converter.yaml")
	require.NoError(t, err)
	lines := strings.Split(string(text), "\n")
	whole := Read("g.converter.yaml", text, 0)
	for i, line := range lines {
		if strings.TrimSpace(line) == "" || line[0] == '#' {
			continue
		}
		for _, spoilt := range []string{line[:len(line)*2/3], line + " \"", "@" + line, line[:1], strings.Replace(line, ":", "", 1), strings.Replace(line, ": ", ": \"", 1), strings.Replace(line, "}", "", 1), strings.Replace(line, ": ", ": [", 1), line + "]"} {
			changed := append(append(append([]string{}, lines[:i]...), spoilt), lines[i+1:]...)
			d := Read("g.converter.yaml", []byte(strings.Join(changed, "\n")), 0)
			checkTree(t, d)
			for _, e := range whole.Root.Entries {
				if from, to := whole.Position(e.KeyStart).Line-1, whole.Position(e.Value.End).Line-1; i < from || i > to {
					assert.Equal(t, outline(e.Value), outline(d.Find("/"+e.Key)), "%s after line %d became %q", e.Key, i+1, spoilt)
				}
			}
		}
	}
}
