package schema

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"
)

// json writes a random JSON value with random blanks.
func (w *generator) json(depth int) *generated {
	s := &generated{start: w.Len(), kind: Scalar}
	what := rapid.IntRange(0, 5).Draw(w.T, "what")
	if depth == 0 {
		what %= 3
	}
	switch what {
	case 0:
		s.typ = Text
		s.value = w.pick("text", append(plainTexts, "", "/", "\u2028", "\b\f\r\n\t", "\"\\", "true", "µ🌊e\u0301")...)
		w.jsonText(s.value)
	case 1:
		s.typ, s.value = Number, w.pick("number", "0", "-0", "22e-6", "1E+3", "-7.25", "1e999", "100000000000000000000")
		w.WriteString(s.value)
	case 2:
		s.value = w.pick("word", "true", "false", "null")
		s.typ = map[bool]ScalarType{true: Null, false: Bool}[s.value == "null"]
		w.WriteString(s.value)
	default:
		w.jsonBrackets(s, depth, what < 5)
	}
	s.end = w.Len()
	return s
}

func (w *generator) jsonBrackets(s *generated, depth int, braces bool) {
	open, closing := "[", "]"
	s.kind = Sequence
	if braces {
		s.kind, open, closing = Mapping, "{", "}"
	}
	w.WriteString(open)
	for i := range rapid.IntRange(0, 4).Draw(w.T, "members") {
		if i > 0 {
			w.WriteString(",")
		}
		w.jsonSpace()
		if braces {
			k := generatedKey{text: fmt.Sprintf("%s%d", w.pick("key", "", "a/b", "µ", "🛥", "~"), i), start: w.Len()}
			w.jsonText(k.text)
			k.end = w.Len()
			w.jsonSpace()
			w.WriteString(":")
			w.jsonSpace()
			k.value = w.json(depth - 1)
			s.keys = append(s.keys, k)
		} else {
			s.items = append(s.items, w.json(depth-1))
		}
		w.jsonSpace()
	}
	w.jsonSpace()
	w.WriteString(closing)
}

func (w *generator) jsonSpace() {
	w.WriteString(w.pick("space", "", "", " ", "\t", "\n\t\t", "\r\n", "\r \n"))
}

// jsonText writes a text in quotes, each character as itself or escaped, above U+FFFF as a surrogate pair.
func (w *generator) jsonText(text string) {
	w.WriteByte('"')
	for _, r := range text {
		short := strings.IndexRune("\"\\/\b\f\n\r\t", r)
		switch {
		case short >= 0 && (r != '/' || w.chance(50, "slash")):
			w.WriteString([]string{`\"`, `\\`, `\/`, `\b`, `\f`, `\n`, `\r`, `\t`}[short])
		case r > 0xffff && w.chance(50, "pair"):
			fmt.Fprintf(w, `\u%04X\u%04x`, 0xd800+(r-0x10000)>>10, 0xdc00+(r-0x10000)&0x3ff)
		case r <= 0xffff && w.chance(15, "escape"):
			fmt.Fprintf(w, `\u%04X`, r)
		default:
			w.WriteRune(r)
		}
	}
	w.WriteByte('"')
}

// TestEveryJSONRangeIsWhereTheTextWasWritten has the standard library as judge of the generator's texts.
func TestEveryJSONRangeIsWhereTheTextWasWritten(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		w := &generator{T: t}
		w.jsonSpace()
		want := &generated{start: w.Len()}
		w.jsonBrackets(want, 4, true)
		want.end = w.Len()
		w.jsonSpace()
		require.True(t, json.Valid([]byte(w.String())), w.String())
		d := Read("pier.converter.json", []byte(w.String()), 0)
		require.Empty(t, d.Problems, w.String())
		sameAsWritten(t, d, want, d.Root, "")
	})
}

func TestJSONIsReadStrictly(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"tabs and a byte-order mark", "\ufeff{\n\t\"a\": 22e-6\n}\n", nil},
		{"empty", " \n", []string{"1:1-1:1 : the file is empty"}},
		{"text at the top", "\"a\"", []string{"1:1-1:4 : a spec file holds keys with values at its top level, and this is a single value"}},
		{"comments", "{\n\t// one\n\t\"a\": 1, /* two\n*/ \"b\": 2 # three\n}", []string{"2:2-2:8 : JSON has no comments", "3:10-4:3 : JSON has no comments", "4:11-4:18 : JSON has no comments"}},
		{"comma behind the last", "{\"a\": [1, 2,],}", []string{"1:12-1:13 /a/1: JSON has no comma behind the last member", "1:14-1:15 /a: JSON has no comma behind the last member"}},
		{"missing comma", "{\"a\": 1\n\"b\": [1 2]}", []string{"2:1-2:4 /b: ',' or '}' is missing before this", "2:9-2:10 /b/1: ',' or ']' is missing before this"}},
		{"missing colon", "{\"a\" 1, \"b\"}", []string{"1:2-1:5 /a: a colon is missing behind the key 'a'", "1:9-1:12 /b: a colon is missing behind the key 'b'"}},
		{"missing value", "{\"a\": , \"b\": 2}", []string{"1:2-1:5 /a: a value is missing behind the key 'a'"}},
		{"key without quotes", "{a: 1}", []string{"1:2-1:3 /a: a key stands in double quotes in JSON"}},
		{"single quotes", "{\"a\": 'x'}", []string{"1:7-1:10 /a: a text stands in double quotes in JSON"}},
		{"value without quotes", "{\"a\": 4k7, \"b\": True, \"c\": NaN}", []string{"1:7-1:10 /a: '4k7' is no JSON value: a text stands in double quotes", "1:17-1:21 /b: 'True' is no JSON value: a text stands in double quotes", "1:28-1:31 /c: 'NaN' is no JSON value: a text stands in double quotes"}},
		{"numbers of other languages", "[01, .5, 1., +1, 0x1F]", []string{"1:2-1:4 /0: '01' is no JSON value: a text stands in double quotes", "1:6-1:8 /1: '.5' is no JSON value: a text stands in double quotes", "1:10-1:12 /2: '1.' is no JSON value: a text stands in double quotes", "1:14-1:16 /3: '+1' is no JSON value: a text stands in double quotes", "1:18-1:22 /4: '0x1F' is no JSON value: a text stands in double quotes"}},
		{"open text", "{\"a\": \"µ\n\"b\": 1}", []string{"1:7-1:9 /a: the quote \" that opens here is not closed", "2:1-2:4 /b: ',' or '}' is missing before this"}},
		{"tab in a text", "{\"a\": \"x\ty\"}", []string{`1:9-1:10 /a: a tab in a JSON text is written '\t'`}},
		{"escapes", `{"a": "\q\u12\ud800"}`, []string{`1:8-1:10 /a: '\q' is no escape: a backslash in quotes is written twice`, `1:10-1:12 /a: '\u' needs 4 hexadecimal digits behind it`, `1:14-1:20 /a: '\ud800' is no character`}},
		{"open brace", "{\"a\": {\"b\": 1", []string{"1:7-1:8 /a: '{' opens here and is not closed"}},
		{"wrong bracket", "{\"a\": [1}, \"b\": 2}", []string{"1:9-1:10 /a/0: '}' stands where ']' has to close '['"}},
		{"two values", "{\"a\": 1} {}", []string{"1:10-1:11 : nothing may stand behind the end of the top value"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			assert.Equal(t, c.want, said(Read("x.converter.json", []byte(c.text), 0)))
		})
	}
}

func TestSurrogatePairsOfJSONAreOneCharacter(t *testing.T) {
	d := Read("x.converter.json", []byte(`{"\ud83c\udf0a": "\uD83D\uDEE5\u00b5"}`), 0)
	require.Empty(t, d.Problems)
	assert.Equal(t, "🛥µ", d.Find("/🌊").Value)
}
