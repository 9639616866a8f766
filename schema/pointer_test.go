package schema

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestValuesAreFoundByPointer(t *testing.T) {
	d := Read("p.converter.yaml", []byte("a/b: 1\nc~d: {e: [x, [y, z]]}\n\"\": 2\n0: three\n"), 0)
	require.Empty(t, d.Problems)
	for pointer, want := range map[string]string{"/a~1b": "1", "/c~0d/e/0": "x", "/c~0d/e/1/1": "z", "/": "2", "/0": "three"} {
		n := d.Find(pointer)
		require.NotNil(t, n, pointer)
		assert.Equal(t, want, n.Value, pointer)
	}
	assert.Same(t, d.Root, d.Find(""))
	for _, pointer := range []string{"/x", "a~1b", "/c~0d/e/2", "/c~0d/e/01", "/c~0d/e/-", "/c~0d/e/+1", "/a~1b/x", "//", "/c~0d/e/99999999999999999999"} {
		assert.Nil(t, d.Find(pointer), pointer)
		assert.Nil(t, d.FindEntry(pointer), pointer)
	}
	e := d.FindEntry("/c~0d")
	assert.Equal(t, "c~d", string(d.Text[e.KeyStart:e.KeyEnd]))
	assert.Nil(t, d.FindEntry(""))
	assert.Nil(t, d.FindEntry("/c~0d/e/0"))
	assert.Nil(t, (&Document{}).Find("/a"), "a document without a tree")
	var none *Node
	assert.Nil(t, none.Get("a"))
}

// TestOffsetsLeadToTheInnermostValue: the mark | in the text is the offset asked for.
func TestOffsetsLeadToTheInnermostValue(t *testing.T) {
	for _, c := range []struct {
		text, pointer string
		onKey         bool
	}{
		{"|a: 1\n", "/a", true}, {"a|: 1\n", "/a", true}, {"a:| 1\n", "/a", false}, {"a: |1\n", "/a", false}, {"a: 1|\n", "/a", false},
		{"a: 1 | # x\n", "", false}, {"a: {|}\n", "/a", false}, {"a: {b: [1, |22]}\n", "/a/b/1", false}, {"a: {b: [1,| 22]}\n", "/a/b", false},
		{"a:\n  b|: 1\n", "/a/b", true}, {"a:\n|  b: 1\n", "/a", false}, {"a:\n  - 1\n  - x: 2|\n", "/a/1/x", false}, {"a:|\nb: 1\n", "/a", false},
		{"a: 1\n\n|\nb: 1\n", "", false}, {"a: {b: 1\n|", "", false}, {"x/y: [|1]\n", "/x~1y/0", false},
	} {
		offset := strings.IndexByte(c.text, '|')
		d := Read("p.converter.yaml", []byte(strings.Replace(c.text, "|", "", 1)), 0)
		pointer, onKey := d.PointerAt(offset)
		assert.Equal(t, c.pointer, pointer, c.text)
		assert.Equal(t, c.onKey, onKey, c.text)
	}
}

// TestAnAliasStandsWhereItIsWritten: what it brings in stays where it was written and is not found at the alias.
func TestAnAliasStandsWhereItIsWritten(t *testing.T) {
	text := "a: &part {esr: 8 mΩ}\nb: *part\nc: {<<: *part, count: 2}\nd:\n  <<: [*part, {esr: 1, x: 2}]\n"
	d := Read("p.converter.yaml", []byte(text), 0)
	require.Empty(t, d.Problems)
	b := d.Find("/b")
	assert.Equal(t, "*part", text[b.Start:b.End])
	assert.Same(t, d.Find("/a"), b.Alias)
	assert.Equal(t, "8 mΩ", d.Find("/b/esr").Value)
	at, _ := d.PointerAt(b.Start + 2)
	assert.Equal(t, "/b", at)
	assert.Equal(t, `{"count":"2" "esr":"8 mΩ"}`, outline(d.Find("/c")), "keys written here come first")
	assert.Equal(t, `{"esr":"8 mΩ" "x":"2"}`, outline(d.Find("/d")), "the first of several mappings wins")
	e := d.FindEntry("/c/esr")
	assert.True(t, e.Merged)
	assert.Equal(t, strings.Index(text, "esr"), e.KeyStart)
	at, _ = d.PointerAt(strings.Index(text, "esr"))
	assert.Equal(t, "/a/esr", at)
}
