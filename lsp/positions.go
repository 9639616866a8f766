package lsp

import (
	"bytes"
	"sort"
	"unicode/utf8"

	"go.lsp.dev/protocol"

	"halfplane/schema"
)

// units is how many columns a character takes in the negotiated encoding.
func units(e schema.Encoding, r rune, size int) uint32 {
	switch {
	case e == schema.UTF8:
		return uint32(size)
	case e == schema.UTF16 && r > 0xffff:
		return 2
	}
	return 1
}

// text is an immutable text with its line starts: what a change is applied to, before and without any parsing, so that a
// flood of changes costs no tree each. Lines end at "\n", "\r\n" or a lone "\r", as the protocol says. Unlike the columns
// of a document, those here count a byte-order mark: a client that sent one counts it too.
type text struct {
	bytes []byte
	lines []int // offset of each line's first byte; lines[0] is 0
}

func newText(b []byte) *text {
	t := &text{bytes: b, lines: []int{0}}
	for at := 0; at < len(b); {
		stop := len(b)
		if i := bytes.IndexByte(b[at:], '\n'); i >= 0 {
			stop = at + i + 1
		}
		for line := b[at:stop]; ; {
			i := bytes.IndexByte(line, '\r')
			if i < 0 {
				break
			}
			if next := stop - len(line) + i + 1; next >= len(b) || b[next] != '\n' {
				t.lines = append(t.lines, next)
			}
			line = line[i+1:]
		}
		if stop > 0 && b[stop-1] == '\n' {
			t.lines = append(t.lines, stop)
		}
		at = stop
	}
	return t
}

// line gives the bounds of a line without its ending.
func (t *text) line(n int) (start, end int) {
	start, end = t.lines[n], len(t.bytes)
	if n+1 < len(t.lines) {
		end = t.lines[n+1]
		if end > start && t.bytes[end-1] == '\n' {
			end--
		}
		if end > start && t.bytes[end-1] == '\r' {
			end--
		}
	}
	return start, end
}

// offset finds the byte at a position. A line past the end is the end of the text, a column past the end of its line is
// that end, and a column inside a character (half a surrogate pair) is the place after it.
func (t *text) offset(p position, e schema.Encoding) int {
	if uint64(p.Line) >= uint64(len(t.lines)) {
		return len(t.bytes)
	}
	at, end := t.line(int(p.Line))
	for column := uint32(0); at < end && column < p.Character; {
		r, size := utf8.DecodeRune(t.bytes[at:])
		column += units(e, r, size)
		at += size
	}
	return at
}

// position is the place of a byte; one inside a line ending is the end of the line.
func (t *text) position(offset int, e schema.Encoding) protocol.Position {
	offset = max(0, min(offset, len(t.bytes)))
	n := sort.SearchInts(t.lines, offset+1) - 1
	start, end := t.line(n)
	column := uint32(0)
	for at := start; at < min(offset, end); {
		r, size := utf8.DecodeRune(t.bytes[at:])
		column += units(e, r, size)
		at += size
	}
	return protocol.Position{Line: uint32(n), Character: column}
}

// area is the range of a pair of offsets.
func (t *text) area(start, end int, e schema.Encoding) protocol.Range {
	return protocol.Range{Start: t.position(start, e), End: t.position(max(start, end), e)}
}

// replaced is the text with the bytes from start to end exchanged.
func (t *text) replaced(start, end int, with string) *text {
	b := make([]byte, 0, len(t.bytes)-(end-start)+len(with))
	b = append(b, t.bytes[:start]...)
	b = append(b, with...)
	return newText(append(b, t.bytes[end:]...))
}

// changed applies content changes one after the other, each to the result of the one before.
func (t *text) changed(changes []change, e schema.Encoding) *text {
	for _, c := range changes {
		if c.Range == nil {
			t = newText([]byte(*c.Text))
			continue
		}
		start, end := t.offset(*c.Range.Start, e), t.offset(*c.Range.End, e)
		t = t.replaced(min(start, end), max(start, end), *c.Text)
	}
	return t
}
