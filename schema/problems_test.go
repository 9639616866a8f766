package schema

import (
	"fmt"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
)

// said writes the problems of a document as the terminal shows them: place, text in the range, pointer, message.
func said(d *Document) []string {
	var out []string
	for _, p := range d.Problems {
		start, end := d.Position(p.Start), d.Position(p.End)
		out = append(out, fmt.Sprintf("%d:%d-%d:%d %s: %s", start.Line, start.Column, end.Line, end.Column, p.Pointer, p.Message))
	}
	return out
}

// The expected ranges are counted by hand in the text beside them.
func TestSyntaxProblemsAreSaidAtTheirPlaceInADesignersWords(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"nothing wrong", "title: Pier 7, east 🌊\nratio: 1/4\n", nil},
		{"JSON indented with tabs", "{\n\t\"a\": 1,\n\t\"b\": [\n\t\t2\n\t]\n}\n", nil},
		{"empty", "", []string{"1:1-1:1 : the file is empty"}},
		{"comment only", "\ufeff# gauge µ\n\n", []string{"1:1-1:1 : the file is empty"}},
		{"list at the top", "- a\n- b\n", []string{"1:1-2:4 : a spec file holds keys with values at its top level, and this is a single list"}},
		{"text at the top", "tide gauge\n", []string{"1:1-1:11 : a spec file holds keys with values at its top level, and this is a single value"}},
		{"null at the top", "~\n", []string{"1:1-1:2 : a spec file holds keys with values at its top level, and this is a single value"}},
		{"two documents", "a: 1\n---\nb: 2\n", []string{"2:1-2:4 : a spec file holds one document, and a second one begins here"}},
		{"document end", "--- # one\na: 1\n...\n# over\n", nil},
		{"text behind the document", "a: 1\n...\nb: 2\n", []string{"3:1-3:2 : a spec file holds one document, and a second one begins here"}},
		{"tab", "load:\n\tcurrent: 1 A\n\tesr: 1\ncount: 2\n\t# a comment may be\n", []string{"2:1-2:2 /load: a tab indents this line: indent with blanks"}},
		{"tab behind blanks", "load:\n  \tcurrent: 1 A\n", []string{"2:3-2:4 /load: a tab indents this line: indent with blanks"}},
		{"tabs twice", "a:\n\tb: 1\nc:\n\td: 1\n", []string{"2:1-2:2 /a: a tab indents this line: indent with blanks", "4:1-4:2 /c: a tab indents this line: indent with blanks"}},
		{"missing colon", "title: x\ntopology buck # here\nphases: 2\n", []string{"2:1-2:14 : a colon is missing behind the key 'topology buck'"}},
		{"missing colon at the start", "inductor\n  inductance: 22 uH\nphases: 2\n", []string{"1:1-1:9 : a colon is missing behind the key 'inductor'"}},
		{"missing blank", "topology:buck\nphases: 2\n", []string{"1:1-1:14 : a blank is missing behind the colon of 'topology'"}},
		{"missing colon inside", "inductor:\n  ind\n  resistance: 1\n", []string{"2:3-2:6 /inductor: a colon is missing behind the key 'ind'"}},
		{"second colon", "title: Pier: east\nphases: 2\n", []string{"1:12-1:13 /title: a second colon on the line: a value with a colon and a blank in it needs quotes"}},
		{"open double quote", "title: \"Pier 7 µ\ntopology: buck\n", []string{"1:8-1:17 /title: the quote \" that opens here is not closed"}},
		{"open single quote", "a: 'x\nb: 'y'\n", []string{"1:4-1:6 /a: the quote ' that opens here is not closed"}},
		{"open quote at the end", "a: 1\nb: \"µ  ", []string{"2:4-2:6 /b: the quote \" that opens here is not closed"}},
		{"open quote in brackets", "a: {b: \"x, c: 1}\nd: 2\n", []string{"1:8-1:17 /a/b: the quote \" that opens here is not closed"}},
		{"open brace", "load: {current: {min: 1 A\ninductor: {inductance: 1 uH}\n", []string{"1:17-1:18 /load/current: '{' opens here and is not closed"}},
		{"open bracket at the end", "poles: [1 kHz,\n  2 kHz", []string{"1:8-1:9 /poles: '[' opens here and is not closed"}},
		{"wrong bracket", "poles: [1, 2}\na: 1\n", []string{"1:13-1:14 /poles/1: '}' stands where ']' has to close '['"}},
		{"stray bracket", "poles: [1, 2]]\na: 1\n", []string{"1:14-1:15 /poles: ']' closes a bracket that was not opened"}},
		{"missing comma on the line", "a: [\"x\" \"y\"]\n", []string{"1:9-1:12 /a/1: ',' or ']' is missing before this"}},
		{"missing comma between lines", "a: {min: 9 V\n  max: 12 V}\n", []string{"2:3-2:6 /a/max: ',' or '}' is missing before this"}},
		{"missing comma before a colon", "a: {min: 9 V max: 12 V}\n", []string{"1:17-1:18 /a/min: a comma is missing before the key of this colon, or a text with a colon needs quotes"}},
		{"two commas", "a: [1,, 2]\n", []string{"1:7-1:8 /a: nothing stands before this comma"}},
		{"closing bracket further left", "a: {\n  b: 1,\n}\nc: 1\n", nil},
		{"indented deeper", "title: x\n  phases: 2\nratio: 1\n", []string{"2:3-2:9 /phases: this line is indented differently from the lines it belongs to"}},
		{"indented between", "load:\n    esr: 1\n  current: 2\nratio: 1\n", []string{"3:3-3:10 /current: this line is indented differently from the lines it belongs to"}},
		{"indented less than the first", "  title: x\nratio: 1\n", []string{"2:1-2:6 /ratio: this line is indented less than the first key of the file"}},
		{"item where a key belongs", "a: 1\n- b\n", []string{"2:1-2:4 : a list item stands where a key was expected"}},
		{"key where an item belongs", "a:\n  - b\n  c: 1\n", []string{"3:3-3:4 /a: every item of this list begins with '- '"}},
		{"list on the key's line", "a: - b\n", []string{"1:4-1:5 /a: a list begins on a line of its own, below its key"}},
		{"sign that begins no text", "a: @b\nc: `d`\ne: %5\n", []string{"1:4-1:5 /a: a text cannot begin with '@' unless it stands in quotes", "2:4-2:5 /c: a text cannot begin with '`' unless it stands in quotes", "3:4-3:5 /e: a text cannot begin with '%' unless it stands in quotes"}},
		{"text behind a quote", "a: 'it's\n", []string{"1:8-1:9 /a: nothing may stand behind a value on its line"}},
		{"comment without a blank", "a: \"x\"# y\nb: [1]#\n", []string{"1:7-1:8 /a: a comment needs a blank before its '#'", "2:7-2:8 /b: a comment needs a blank before its '#'"}},
		{"escape", `a: "C:\harbour\q"` + "\n", []string{`1:7-1:9 /a: '\h' is no escape: a backslash in double quotes is written twice`, `1:15-1:17 /a: '\q' is no escape: a backslash in double quotes is written twice`}},
		{"short hexadecimal escape", `a: "\u12"` + "\n", []string{`1:5-1:7 /a: '\u' needs 4 hexadecimal digits behind it`}},
		{"half a surrogate pair", `a: "\ud83d"` + "\n", []string{`1:5-1:11 /a: '\ud83d' is no character`}},
		{"unknown alias", "a: *ref\n", []string{"1:4-1:8 /a: no value before this is named '&ref'"}},
		{"alias inside its anchor", "a: &ref [1, *ref]\n", []string{"1:13-1:17 /a/1: the alias '*ref' stands inside the value that it names"}},
		{"tag", "a: !pin 4\nb: !!int x\n", []string{"1:4-1:8 /a: the tag '!pin' means nothing in a spec file", "2:4-2:9 /b: the tag '!!int' does not fit its value"}},
		{"directive", "%PIER 7\n---\na: 1\n", []string{"1:1-1:8 : a line that begins with '%' is a directive, and this one is not known"}},
		{"missing key", ": 1\nb: 2\n", []string{"1:1-1:2 : the key before this colon is missing"}},
		{"list as a key", "[a]: 1\nb: 2\n", []string{"1:1-1:4 : a key is a word, not a list"}},
		{"merge of a text", "a: {<<: b, c: 1}\n", []string{"1:9-1:10 /a: the merge key '<<' takes a mapping, and this is a value"}},
		{"header of a block text", "a: | text\n  b\n", []string{"1:6-1:10 /a: nothing may stand behind a value on its line"}},
		{"five at once", "title: \"x\ntopology boost\nload: {a: 1\nratio: b: c\ntitle: @z\n", []string{
			"1:8-1:10 /title: the quote \" that opens here is not closed",
			"2:1-2:15 : a colon is missing behind the key 'topology boost'",
			"3:7-3:8 /load: '{' opens here and is not closed",
			"4:9-4:10 /ratio: a second colon on the line: a value with a colon and a blank in it needs quotes",
			"5:1-5:6 /title: the key 'title' stands here a second time",
			"5:8-5:9 : a text cannot begin with '@' unless it stands in quotes"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, said(Read("x.converter.yaml", []byte(c.text), 0)))
			for _, eol := range []string{"\r\n", "\r"} { // the same problems at the same places with other line ends
				other := strings.ReplaceAll(c.text, "\n", eol)
				assert.Equal(t, c.want, said(Read("x.converter.yaml", []byte(other), 0)), "%q", eol)
			}
			if c.text != "" && !strings.HasPrefix(c.text, byteOrderMark) { // and behind a byte-order mark
				assert.Equal(t, c.want, said(Read("x.converter.yaml", []byte(byteOrderMark+c.text), 0)))
			}
		})
	}
}

func TestEveryDuplicateKeyIsReportedWithItsFirstPlace(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []string
		first      int
	}{
		{"d.converter.yaml", "a: 1\nb: 2\na: 3\n\"a\": 4\n", []string{"3:1-3:2 /a: the key 'a' stands here a second time", "4:1-4:4 /a: the key 'a' stands here a second time"}, 0},
		{"d.converter.yaml", "b: {x/y: 1, x/y: 2}\n", []string{"1:13-1:16 /b/x~1y: the key 'x/y' stands here a second time"}, 4},
		{"d.converter.json", "{\"a\":1,\"\\u0061\":2,\"a\":3}", []string{"1:8-1:16 /a: the key 'a' stands here a second time", "1:19-1:22 /a: the key 'a' stands here a second time"}, 1},
	} {
		d := Read(c.name, []byte(c.text), 0)
		assert.Equal(t, c.want, said(d))
		for _, p := range d.Problems {
			assert.Len(t, p.Related, 1)
			assert.Equal(t, c.first, p.Related[0].Start)
			assert.Equal(t, "first given here", p.Related[0].Message)
			assert.Equal(t, p.Pointer, p.Related[0].Pointer)
		}
	}
	assert.Equal(t, "1", Read("d.converter.yaml", []byte("a: 1\na: 2\n"), 0).Find("/a").Value, "the first counts")
}

func TestWrongBytesAreReportedWhereTheyAre(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"one byte of Latin-1", "a: 1\nb: 22 \xb5H\nc: 1\n", []string{"2:7-2:8 /b: the byte 0xB5 is not UTF-8 text"}},
		{"cut character", "a: \xe2\x84\n", []string{"1:4-1:5 /a: the byte 0xE2 is not UTF-8 text", "1:5-1:6 /a: the byte 0x84 is not UTF-8 text"}},
		{"NUL", "µ: \x00\n", []string{"1:4-1:5 /µ: the control character U+0000 has no place in a spec file"}},
		{"escape and C1", "a: x\x1by\u0090\n", []string{"1:5-1:6 /a: the control character U+001B has no place in a spec file", "1:7-1:8 /a: the control character U+0090 has no place in a spec file"}},
		{"UTF-16", "\xff\xfea\x00:\x00", []string{"1:1-1:1 : the file is UTF-16 text and must be UTF-8"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, said(Read("x.converter.yaml", []byte(c.text), 0)))
		})
	}
	assert.Len(t, Read("x.converter.yaml", []byte(strings.Repeat("\x00\xff", 1<<20)), 0).Problems, byteProblemLimit)
}
