package schema

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// TestHostileTextsAreRefusedAtOnce: each text is built to make a reader hang, recurse without end or fill the memory. Each
// takes a small part of a second; the limit leaves room for a loaded machine and the race detector.
func TestHostileTextsAreRefusedAtOnce(t *testing.T) {
	const mega = 1 << 20
	bomb := "a0: &a0 [x, x, x, x, x, x, x, x, x, x]\n"
	for i := 1; i < 40; i++ {
		bomb += fmt.Sprintf("a%d: &a%d [%s*a%d]\n", i, i, strings.Repeat(fmt.Sprintf("*a%d, ", i-1), 9), i-1)
	}
	tower := "a0: &a0 " + strings.Repeat("[", 300) + strings.Repeat("]", 300) + "\n"
	for i := 1; i < 9; i++ {
		tower += fmt.Sprintf("a%d: &a%d %s*a%d%s\n", i, i, strings.Repeat("[", 300), i-1, strings.Repeat("]", 300))
	}
	for _, c := range []struct {
		name, file, text, says string
	}{
		{"nested brackets", "x.converter.yaml", "a: " + strings.Repeat("[", 10000) + strings.Repeat("]", 10000), "nesting deeper than 1,000 levels is not read"},
		{"nested braces, never closed", "x.converter.yaml", strings.Repeat("{a: ", mega/2), "nesting deeper than 1,000 levels is not read"},
		{"nested JSON", "x.converter.json", strings.Repeat(`{"a":[`, 10000), "nesting deeper than 1,000 levels is not read"},
		{"nested dashes", "x.converter.yaml", "a:\n  " + strings.Repeat("- ", mega), "nesting deeper than 1,000 levels is not read"},
		{"nested question marks", "x.converter.yaml", strings.Repeat("? ", mega), "nesting deeper than 1,000 levels is not read"},
		{"nested lines", "x.converter.yaml", stairs(2500), "nesting deeper than 1,000 levels is not read"},
		{"alias bomb", "x.converter.yaml", bomb, "the aliases of this file stand for more than 20,000 values"},
		{"merge bomb", "x.converter.yaml", strings.ReplaceAll(strings.ReplaceAll(bomb, "[", "{<<: ["), "]", "]}"), "the merge key '<<' takes a mapping, and this is a value"},
		{"aliases on top of one another", "x.converter.yaml", tower, "nesting deeper than 1,000 levels is not read"},
		{"4 MB and a byte", "x.converter.yaml", strings.Repeat("a", sizeLimit+1), sizeMessage},
		{"50 MB", "x.converter.json", strings.Repeat("[", 50*mega), sizeMessage},
		{"open brackets", "x.converter.yaml", strings.Repeat("a: [\n", mega/2), "'[' opens here and is not closed"},
		{"open quotes", "x.converter.yaml", strings.Repeat("a: \"\n", mega/2), "the quote \" that opens here is not closed"},
		{"quotes over one line", "x.converter.yaml", strings.Repeat("'\" ", mega), "nothing may stand behind a value on its line"},
		{"colons", "x.converter.yaml", strings.Repeat(": ", mega), "the key before this colon is missing"},
		{"commas", "x.converter.yaml", "a: [" + strings.Repeat(",", mega), "nothing stands before this comma"},
		{"anchors", "x.converter.yaml", "a: " + strings.Repeat("&a ", mega), "a value has one name for aliases, and this is its second"},
		{"one key a million times", "x.converter.yaml", strings.Repeat("a: 1\n", mega/2), "the key 'a' stands here a second time"},
		{"lines without colons", "x.converter.yaml", "a: 1\n" + strings.Repeat("ab\n", mega), "a colon is missing behind the key 'ab'"},
		{"noise", "x.converter.yaml", noise(2 * mega), "is not UTF-8 text"},
		{"signs", "x.converter.yaml", signs(2*mega, "\n :-?[]{},&*!|>'\"%@`#a\t"), ""},
		{"signs in brackets", "x.converter.yaml", "a: [" + signs(2*mega, "\n :-?,&*!|>'\"a# "), ""},
		{"signs in JSON", "x.converter.json", "[" + signs(2*mega, "\n :[]{},\"\\1a/"), ""},
		{"lines left of the mark", "x.converter.yaml", "<<<<<<< east\na: 1\n=======\na: 2\n>>>>>>> west\n", "a colon is missing behind the key '<<<<<<< east'"},
	} {
		t.Run(c.name, func(t *testing.T) {
			begin := time.Now()
			d := Read(c.file, []byte(c.text), 0)
			assert.Less(t, time.Since(begin), 10*time.Second)
			require.NotEmpty(t, d.Problems)
			assert.LessOrEqual(t, len(d.Problems), problemLimit)
			assert.Contains(t, strings.Join(said(d), "\n"), c.says)
			checkTree(t, d)
		})
	}
}

func TestLargeFilesWithinTheLimitAreRead(t *testing.T) {
	for name, text := range map[string]string{
		"many keys":    manyKeys(100000),
		"one list":     "a: [" + strings.Repeat("1,", 1<<18) + "]",
		"one text":     "a: |\n" + strings.Repeat("  x\n", 1<<20/2),
		"blank lines":  "a: 1\n" + strings.Repeat("\n", 1<<19) + "b: 2\n",
		"folded":       "a: b\n" + strings.Repeat("  x\n", 1<<20/2),
		"comments":     "a: 1\n" + strings.Repeat("# x\n", 1<<20/2),
		"apostrophes":  "a: [" + strings.Repeat("it's, ", 1<<18) + "]",
		"999 levels":   "a: " + strings.Repeat("[", 999) + strings.Repeat("]", 999),
		"long anchors": "a: &" + strings.Repeat("x", 1<<20) + " 1\n",
	} {
		begin := time.Now()
		d := Read("x.converter.yaml", []byte(text), 0)
		assert.Less(t, time.Since(begin), 10*time.Second, name)
		assert.Empty(t, d.Problems, name)
	}
}

// stairs is a mapping in a mapping, a blank deeper on each line.
func stairs(levels int) string {
	var b strings.Builder
	for i := range levels {
		b.WriteString(strings.Repeat(" ", i) + "a:\n")
	}
	return b.String()
}

func manyKeys(n int) string {
	var b strings.Builder
	for i := range n {
		fmt.Fprintf(&b, "key-%d: 1\n", i)
	}
	return b.String()
}

// noise is bytes of a fixed linear congruential sequence.
func noise(n int) string {
	b, state := make([]byte, n), uint32(7)
	for i := range b {
		state = state*1664525 + 1013904223
		b[i] = byte(state >> 24)
	}
	return string(b)
}

// signs is noise of the signs given.
func signs(n int, of string) string {
	b := []byte(noise(n))
	for i := range b {
		b[i] = of[int(b[i])%len(of)]
	}
	return string(b)
}
