package schema

import "math"

// Encoding is the code unit in which an editor counts characters of a line.
type Encoding int

const (
	UTF8  Encoding = iota + 1 // bytes
	UTF16                     // 16-bit units, the protocol's default
	UTF32                     // code points
)

// String is the protocol's name of the encoding.
func (e Encoding) String() string {
	switch e {
	case UTF8:
		return "utf-8"
	case UTF16:
		return "utf-16"
	case UTF32:
		return "utf-32"
	}
	return "unknown encoding"
}

// length is the number of units of a character of size bytes. A byte that is no UTF-8 counts as one unit.
func (e Encoding) length(r rune, size int) int {
	switch {
	case e == UTF8:
		return size
	case e == UTF16 && r > 0xffff:
		return 2
	}
	return 1
}

// UTF16 is the place of an offset as the editor protocol counts by default: line and UTF-16 units, both from 0. A
// byte-order mark at the start of the text is not counted: editors take it off.
func (d *Document) UTF16(offset int) (line, character uint32) { return d.Encode(offset, UTF16) }

// OffsetUTF16 is the offset of such a place. A character past the end of its line is the end of that line (before its
// line end), a line past the end of the text is its end, the middle of a surrogate pair is the pair's start.
func (d *Document) OffsetUTF16(line, character uint32) int { return d.Decode(line, character, UTF16) }

// Encode is UTF16 in any of the protocol's position encodings.
func (d *Document) Encode(offset int, e Encoding) (line, character uint32) {
	l, c := d.units(offset, e)
	return uint32(l), uint32(c)
}

// Decode is OffsetUTF16 in any of the protocol's position encodings.
func (d *Document) Decode(line, character uint32, e Encoding) int {
	return d.offset(clampInt(line), clampInt(character), e)
}

// clampInt keeps a count from outside within int on every platform.
func clampInt(n uint32) int { return int(min(n, math.MaxInt32)) }
