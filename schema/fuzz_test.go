package schema

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// checkTree asserts what holds for the tree of every text, also a broken one: every range lies inside its parent's and
// behind its elder sibling's, keys lie before their values and are unique, and problems are sorted and inside the text.
func checkTree(t require.TestingT, d *Document) {
	last := 0
	for _, p := range d.Problems {
		require.True(t, 0 <= p.Start && p.Start <= p.End && p.End <= len(d.Text), "%q: %v", d.Text, p)
		require.GreaterOrEqual(t, p.Start, last)
		require.Equal(t, syntaxRule, p.Rule)
		require.Same(t, d, p.Doc)
		last = p.Start
	}
	if d.Root != nil {
		checkNode(t, d, d.Root, 0, len(d.Text))
	}
}

func checkNode(t require.TestingT, d *Document, n *Node, from, to int) {
	require.True(t, from <= n.Start && n.Start <= n.End && n.End <= to, "%q: %d-%d in %d-%d", d.Text, n.Start, n.End, from, to)
	if n.Alias != nil {
		return
	}
	at := n.Start
	seen := map[string]bool{}
	for _, e := range n.Entries {
		require.False(t, seen[e.Key], "%q twice in %q", e.Key, d.Text)
		seen[e.Key] = true
		if e.Merged {
			continue
		}
		require.True(t, at <= e.KeyStart && e.KeyStart <= e.KeyEnd && e.KeyEnd <= e.Value.Start, "%q: key %d-%d behind %d, value %d", d.Text, e.KeyStart, e.KeyEnd, at, e.Value.Start)
		checkNode(t, d, e.Value, e.KeyEnd, n.End)
		at = e.Value.End
	}
	for _, item := range n.Items {
		checkNode(t, d, item, at, n.End)
		at = item.End
	}
}

// checkScalars asserts that the source text of every scalar reads to the same value again.
func checkScalars(t require.TestingT, d *Document, n *Node) {
	if n.Kind == Scalar && n.Start < n.End && n.Alias == nil {
		source := string(d.Text[n.Start:n.End])
		again := Read(d.Name, []byte(" "+source), 0).Root // behind a blank, so that it is no sign of a document
		if c := source[0]; c == '|' || c == '>' || d.Name == "fuzz.converter.yaml" && n.Type != Text {
			return // a block text depends on the lines around it, and a tag changes the type
		}
		require.NotNil(t, again, source)
		require.Equal(t, n.Value, again.Value, source)
	}
	for _, e := range n.Entries {
		if !e.Merged {
			checkScalars(t, d, e.Value)
		}
	}
	for _, item := range n.Items {
		checkScalars(t, d, item)
	}
}

// fuzzSeeds are texts in every style, right and wrong.
var fuzzSeeds = []string{
	"", "a: 1\n", "a:\n  - b\n  - c: 1\n    d: 2\n", "a: [1, {b: 'c'}, \"d\\n\"]\n", "a: |\n  b\n\n   c\nd: >-\n  e\n  f\n", "\ufeffa: µ\r\nb: 🌊\rc: 1",
	"a: &x {b: 1}\nc: *x\nd: {<<: *x}\n", "? a\n: b\n", "a: b\n  c\n\n  d # e\n", "a: \"x\nb: 1\n", "a: {b: 1\nc: 2\n", "a: 1\na: 2\n", "\ta: 1\n", "--- \na: !!str 1\n...\n",
	"a: 'b\n\n  c'\n", "{\"a\": [1, 2, {\"b\": null}]}", "{\"a\": 1,}", "a: b: c\n", "- a\nb\n", "a\n  b: 1\n", "a: \xff\n", "x\x00",
}

func FuzzRead(f *testing.F) {
	for _, seed := range fuzzSeeds {
		f.Add(seed, false)
		f.Add(seed, true)
	}
	f.Fuzz(func(t *testing.T, text string, strict bool) {
		name := "fuzz.converter.yaml"
		if strict {
			name = "fuzz.converter.json"
		}
		d := Read(name, []byte(text), 0)
		checkTree(t, d)
		require.True(t, d.Root != nil || len(d.Problems) > 0, "neither a tree nor a problem")
		for i := 0; i <= len(text); i += 1 + len(text)/64 {
			pointer, _ := d.PointerAt(i)
			require.True(t, d.Root == nil || d.Find(pointer) != nil, "%q at %d: %s", text, i, pointer)
			line, character := d.UTF16(i)
			require.LessOrEqual(t, d.OffsetUTF16(line, character), max(i, bomLength(d.Text)))
		}
		if len(d.Problems) == 0 {
			checkScalars(t, d, d.Root)
		}
	})
}

func FuzzReplace(f *testing.F) {
	for i, seed := range fuzzSeeds {
		f.Add(seed, i, i+2, "x: \"\n")
	}
	f.Fuzz(func(t *testing.T, text string, start, end int, with string) {
		d := Read("fuzz.converter.yaml", []byte(text), 1)
		before := string(d.Text)
		edited := d.Replace(start, end, with, 2)
		from := min(max(start, 0), len(text))
		to := min(max(end, from), len(text))
		full := Read("fuzz.converter.yaml", []byte(text[:from]+with+text[to:]), 2)
		assert.Equal(t, string(full.Text), string(edited.Text))
		assert.Equal(t, full.lines, edited.lines)
		assert.Equal(t, said(full), said(edited))
		assert.Equal(t, outline(full.Root), outline(edited.Root))
		assert.Equal(t, int32(2), edited.Version)
		assert.Equal(t, before, string(d.Text), "the document before the edit is unchanged")
	})
}
