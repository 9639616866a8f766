package schema

import (
	"strconv"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// quoted reads a text in single or double quotes. Further lines must be indented more than indent; a key's text stays
// on its line. A quote that is never closed is reported and taken to end with its line.
func (r *yamlReader) quoted(indent int, key bool) *Node {
	start := r.pos
	n := r.node(Scalar, start, start+1)
	n.Type = Text
	quote := r.src[start]
	r.pos++
	from := r.pos // of the part that is not yet in text
	var text strings.Builder
	for r.pos < len(r.src) {
		switch c := r.src[r.pos]; {
		case c == quote && quote == '\'' && r.byteAt(r.pos+1) == '\'':
			text.WriteString(r.src[from : r.pos+1])
			r.pos += 2
			from = r.pos
		case c == quote:
			n.Value = r.src[from:r.pos]
			if text.Len() > 0 {
				text.WriteString(n.Value)
				n.Value = text.String()
			}
			r.pos++
			n.End = r.pos
			return n
		case c == '\\' && quote == '"':
			text.WriteString(r.src[from:r.pos])
			if r.escape(&text) {
				if !r.quotedLine(&text, indent, key, true) {
					return r.openQuote(n)
				}
			}
			from = r.pos
		case isBreak(c):
			text.WriteString(strings.TrimRight(r.src[from:r.pos], " \t"))
			if !r.quotedLine(&text, indent, key, false) {
				return r.openQuote(n)
			}
			from = r.pos
		default:
			r.pos++
		}
	}
	return r.openQuote(n)
}

// openQuote reports a quote without its end and goes back to the end of the line on which it opens.
func (r *yamlReader) openQuote(n *Node) *Node {
	quote := r.src[n.Start]
	r.pos = r.lineEnd(n.Start)
	r.lineStart = r.doc.lines[r.doc.lineOf(n.Start)]
	if r.doc.lineOf(n.Start) == 0 {
		r.lineStart = bomLength(r.doc.Text)
	}
	n.End = n.Start + len(strings.TrimRight(r.src[n.Start:r.pos], " \t"))
	n.Value = r.src[n.Start+1 : n.End]
	r.report(n.Start, n.End, "the quote %c that opens here is not closed", quote)
	r.broken = r.flowDepth > 0
	return n
}

// quotedLine moves over a line end in a quoted text to the next line's first byte and folds it; after an escaped line
// end nothing is put in for the first. It is false when the text cannot go on there.
func (r *yamlReader) quotedLine(text *strings.Builder, indent int, key, escaped bool) bool {
	breaks := 0
	for r.skipBlanks(); r.pos < len(r.src) && isBreak(r.src[r.pos]); r.skipBlanks() {
		r.newLine()
		breaks++
	}
	if r.pos >= len(r.src) || r.end() || key || !r.deeper(indent, r.flowDepth > 0) {
		return false
	}
	switch {
	case !escaped:
		fold(text, breaks)
	case breaks > 1:
		fold(text, breaks)
	}
	return true
}

// escape reads a backslash and what it stands for. It is true at an escaped line end, which is not yet read.
func (r *yamlReader) escape(text *strings.Builder) (lineEnd bool) {
	start := r.pos
	r.pos++
	if r.pos >= len(r.src) {
		return false
	}
	c := r.src[r.pos]
	if isBreak(c) {
		return true
	}
	if i := strings.IndexByte("0abt\tnvfre \"/\\NJ_LP", c); i >= 0 && c != 'J' {
		text.WriteString([]string{"\x00", "\a", "\b", "\t", "\t", "\n", "\v", "\f", "\r", "\x1b", " ", "\"", "/", "\\", "\u0085", "", "\u00a0", "\u2028", "\u2029"}[i])
		r.pos++
		return false
	}
	digits := map[byte]int{'x': 2, 'u': 4, 'U': 8}[c]
	if digits == 0 {
		_, size := utf8.DecodeRuneInString(r.src[r.pos:])
		r.pos += size
		r.report(start, r.pos, "'%s' is no escape: a backslash in double quotes is written twice", r.src[start:r.pos])
		text.WriteString(r.src[start:r.pos])
		return false
	}
	r.pos = start
	text.WriteRune(r.hexEscape(digits))
	return false
}

// hexEscape reads \xHH, \uHHHH or \UHHHHHHHH at pos, and two \u of a surrogate pair as one character.
func (t *tree) hexEscape(digits int) rune {
	start := t.pos
	code, ok := t.hex(start+2, digits)
	if !ok {
		end := min(start+2, len(t.src))
		t.pos = end
		t.report(start, end, "'%s' needs %d hexadecimal digits behind it", t.src[start:end], digits)
		return utf8.RuneError
	}
	t.pos = start + 2 + digits
	if digits == 4 && utf16.IsSurrogate(code) {
		if second, ok := t.hex(t.pos+2, 4); ok && strings.HasPrefix(t.src[t.pos:], `\u`) {
			if pair := utf16.DecodeRune(code, second); pair != utf8.RuneError {
				t.pos += 6
				return pair
			}
		}
	}
	if !utf8.ValidRune(code) {
		t.report(start, t.pos, "'%s' is no character", t.src[start:t.pos])
		return utf8.RuneError
	}
	return code
}

// hex reads a number of hexadecimal digits at an offset.
func (t *tree) hex(at, digits int) (rune, bool) {
	if at+digits > len(t.src) {
		return 0, false
	}
	code, err := strconv.ParseUint(t.src[at:at+digits], 16, 32)
	return rune(min(code, utf8.MaxRune+1)), err == nil
}
