package schema

import (
	"testing"
	"unicode/utf16"
	"unicode/utf8"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"
)

// harbour has characters of one to four bytes, a combining mark, a tab, all three line ends, and no last line end.
const harbour = "\ufefftitle: µΩ°\r\n\tboje: 🌊x\re\u0301: \"y\"\n\nlast"

func TestColumnsCountCodePointsFromOne(t *testing.T) {
	d := Read("h.converter.yaml", []byte(harbour), 0)
	for _, c := range []struct {
		before string // the offset is that of the end of this text
		want   Position
	}{
		{"", Position{1, 1}}, {"\ufeff", Position{1, 1}}, {"\ufefft", Position{1, 2}},
		{"\ufefftitle: µ", Position{1, 9}}, {"\ufefftitle: µΩ°", Position{1, 11}},
		{"\ufefftitle: µΩ°\r", Position{1, 11}}, {"\ufefftitle: µΩ°\r\n", Position{2, 1}}, {"\ufefftitle: µΩ°\r\n\t", Position{2, 2}},
		{"\ufefftitle: µΩ°\r\n\tboje: 🌊", Position{2, 9}}, {"\ufefftitle: µΩ°\r\n\tboje: 🌊x\r", Position{3, 1}},
		{"\ufefftitle: µΩ°\r\n\tboje: 🌊x\re\u0301", Position{3, 3}}, {harbour, Position{5, 5}},
	} {
		require.Equal(t, c.before, harbour[:len(c.before)])
		assert.Equal(t, c.want, d.Position(len(c.before)), "%q", c.before)
	}
	assert.Equal(t, Position{5, 5}, d.Position(1000))
	assert.Equal(t, Position{1, 1}, d.Position(-1))
	assert.Equal(t, Position{2, 8}, d.Position(len("\ufefftitle: µΩ°\r\n\tboje: 🌊")-2), "inside a character: its start")
	assert.Equal(t, 5, d.Lines())
	assert.Equal(t, "title: µΩ°", string(d.Line(1)))
	assert.Equal(t, "last", string(d.Line(5)))
	assert.Nil(t, d.Line(6))
}

func TestEditorPlacesClampAsTheProtocolSays(t *testing.T) {
	d := Read("h.converter.yaml", []byte(harbour), 0)
	wave := len("\ufefftitle: µΩ°\r\n\tboje: ")
	for _, c := range []struct {
		name            string
		line, character uint32
		encoding        Encoding
		want            int
	}{
		{"start, behind the byte-order mark", 0, 0, UTF16, 3},
		{"before the wave", 1, 7, UTF16, wave},
		{"middle of the surrogate pair", 1, 8, UTF16, wave},
		{"behind the wave", 1, 9, UTF16, wave + 4},
		{"behind the wave in code points", 1, 8, UTF32, wave + 4},
		{"behind the wave in bytes", 1, 11, UTF8, wave + 4},
		{"middle of the wave in bytes", 1, 10, UTF8, wave},
		{"middle of a micro sign in bytes", 0, 8, UTF8, 10},
		{"past the end of a line with CR LF", 0, 99, UTF16, len("\ufefftitle: µΩ°")},
		{"past the end of a line with CR", 1, 99, UTF16, wave + 5},
		{"empty line", 3, 5, UTF16, len(harbour) - 5},
		{"past the last line", 9, 0, UTF16, len(harbour)},
		{"the largest counts", 1 << 31, 1<<32 - 1, UTF16, len(harbour)},
		{"the largest character", 1, 1<<32 - 1, UTF16, wave + 5},
	} {
		assert.Equal(t, c.want, d.Decode(c.line, c.character, c.encoding), c.name)
	}
	line, character := d.UTF16(wave + 4)
	assert.Equal(t, [2]uint32{1, 9}, [2]uint32{line, character})
	line, character = d.UTF16(2)
	assert.Equal(t, [2]uint32{0, 0}, [2]uint32{line, character}, "a byte-order mark counts nothing")
}

// TestPlacesAgreeWithTheStandardLibrary counts each line anew with unicode/utf8 and unicode/utf16, and comes back.
func TestPlacesAgreeWithTheStandardLibrary(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := rapid.SliceOf(rapid.SampledFrom([]string{"a", "µ", "Ω", "🌊", "e\u0301", "\t", "\n", "\r\n", "\r", " ", "\u2028", "\ufeff"})).Draw(t, "parts")
		text := ""
		for _, p := range parts {
			text += p
		}
		d := Read("p.converter.yaml", []byte(text), 0)
		line, start := 0, bomLength([]byte(text))
		for i := start; i < len(text); {
			r, size := utf8.DecodeRuneInString(text[i:])
			before := text[start:i]
			inLineEnd := r == '\n' && i > 0 && text[i-1] == '\r'
			if !inLineEnd {
				require.Equal(t, Position{line + 1, utf8.RuneCountInString(before) + 1}, d.Position(i))
				require.Equal(t, i, d.Offset(d.Position(i)))
				for _, e := range []Encoding{UTF8, UTF16, UTF32} {
					l, c := d.Encode(i, e)
					want := map[Encoding]int{UTF8: len(before), UTF16: len(utf16.Encode([]rune(before))), UTF32: utf8.RuneCountInString(before)}[e]
					require.Equal(t, [2]int{line, want}, [2]int{int(l), int(c)}, e)
					require.Equal(t, i, d.Decode(l, c, e))
				}
			}
			i += size
			if r == '\n' || r == '\r' && (i == len(text) || text[i] != '\n') {
				line, start = line+1, i
			}
		}
		require.Equal(t, line+1, d.Lines())
	})
}
