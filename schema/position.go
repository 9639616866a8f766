package schema

import (
	"sort"
	"unicode/utf8"
)

// Position is a place as people count: line and column from 1, a column counts Unicode code points, a tab as one, a
// byte-order mark as none. Lines end with LF, CR LF or CR.
type Position struct{ Line, Column int }

// lineStarts is the offset of each line's first byte.
func lineStarts(text []byte) []int {
	lines := make([]int, 1, 16+len(text)/32)
	for i, b := range text {
		if b == '\n' || b == '\r' && (i+1 == len(text) || text[i+1] != '\n') {
			lines = append(lines, i+1)
		}
	}
	return lines
}

// lineOf is the index of the line that an offset stands in; offsets outside the text count as its nearest end.
func (d *Document) lineOf(offset int) int {
	return max(0, sort.SearchInts(d.lines, offset+1)-1)
}

// line is the range of a line's text, without a byte-order mark and its line end.
func (d *Document) line(i int) (start, end int) {
	start, end = d.lines[i], len(d.Text)
	if i+1 < len(d.lines) {
		end = d.lines[i+1]
	}
	if i == 0 {
		start = bomLength(d.Text)
	}
	if end > start && d.Text[end-1] == '\n' {
		end--
	}
	if end > start && d.Text[end-1] == '\r' {
		end--
	}
	return start, end
}

// Lines is the number of lines; a text that ends with a line end has an empty last one.
func (d *Document) Lines() int { return len(d.lines) }

// Line is the text of a line counted from 1, without its line end; nil when there is no such line.
func (d *Document) Line(number int) []byte {
	if number < 1 || number > len(d.lines) {
		return nil
	}
	start, end := d.line(number - 1)
	return d.Text[start:end:end]
}

// Position is the place of a byte offset. An offset inside a character counts as that character's, one inside a line
// end as the end of its line, one outside the text as the text's nearest end.
func (d *Document) Position(offset int) Position {
	line, column := d.units(offset, UTF32)
	return Position{Line: line + 1, Column: column + 1}
}

// Offset is the byte offset of a place, clamped to its line and to the text.
func (d *Document) Offset(p Position) int {
	return d.offset(p.Line-1, p.Column-1, UTF32)
}

// units counts the line and the code units before an offset, both from 0.
func (d *Document) units(offset int, e Encoding) (line, units int) {
	offset = min(max(offset, 0), len(d.Text))
	line = d.lineOf(offset)
	start, end := d.line(line)
	end = min(end, offset)
	for i := start; i < end; {
		size, n := 1, 1
		if d.Text[i] >= utf8.RuneSelf {
			var r rune
			if r, size = utf8.DecodeRune(d.Text[i:]); i+size > offset {
				break
			}
			n = e.length(r, size)
		}
		i += size
		units += n
	}
	return line, units
}

// offset is the inverse of units. A count past the end of the line is its end, one inside a character is its start.
func (d *Document) offset(line, units int, e Encoding) int {
	if line < 0 {
		return bomLength(d.Text)
	}
	if line >= len(d.lines) {
		return len(d.Text)
	}
	start, end := d.line(line)
	for i := start; i < end; {
		size, n := 1, 1
		if d.Text[i] >= utf8.RuneSelf {
			var r rune
			r, size = utf8.DecodeRune(d.Text[i:])
			n = e.length(r, size)
		}
		if units -= n; units < 0 {
			return i
		}
		i += size
	}
	return end
}
