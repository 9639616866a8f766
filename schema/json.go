package schema

import (
	"strconv"
	"strings"
	"unicode/utf8"
)

// jsonReader reads strict JSON (RFC 8259): no comments, no comma before a closing bracket, no other quotes. Like the
// reader of YAML it goes on after an error.
type jsonReader struct {
	*tree
	broken bool // an open bracket or quote is never closed: leave without a word
}

// document reads the whole text; nil when it holds no value.
func (r *jsonReader) document() *Node {
	if !r.space() {
		return nil
	}
	root := r.value()
	if r.space() && !r.broken {
		r.report(r.pos, r.wordEnd(), "nothing may stand behind the end of the top value")
	}
	return root
}

// space moves to the next sign and reports comments on the way; false at the end.
func (r *jsonReader) space() bool {
	if r.stopped {
		r.pos = len(r.src)
	}
	for r.pos < len(r.src) {
		switch c := r.src[r.pos]; {
		case c == ' ' || c == '\t' || c == '\n' || c == '\r':
			r.pos++
		case c == '#' || strings.HasPrefix(r.src[r.pos:], "//"):
			r.comment(r.lineEnd())
		case strings.HasPrefix(r.src[r.pos:], "/*"):
			end := len(r.src)
			if i := strings.Index(r.src[r.pos+2:], "*/"); i >= 0 {
				end = r.pos + 2 + i + 2
			}
			r.comment(end)
		default:
			return true
		}
	}
	return false
}

func (r *jsonReader) comment(end int) {
	at := r.pos
	r.pos = end
	r.report(at, end, "JSON has no comments")
}

func (r *jsonReader) lineEnd() int {
	if i := strings.IndexAny(r.src[r.pos:], "\r\n"); i >= 0 {
		return r.pos + i
	}
	return len(r.src)
}

// wordEnd is the end of the sign or text at pos, in quotes or up to a blank or a sign; at least one character.
func (r *jsonReader) wordEnd() int {
	_, size := utf8.DecodeRuneInString(r.src[r.pos:])
	end := r.pos + size
	switch c := r.src[r.pos]; {
	case c == '"':
		return max(end, quotedEnd(r.src, r.pos))
	case c == ':' || isFlowSign(c):
		return end
	}
	for end < len(r.src) && !isBlank(r.src[end]) && !isBreak(r.src[end]) && !isFlowSign(r.src[end]) && r.src[end] != '"' && r.src[end] != ':' {
		end++
	}
	return end
}

// value reads a value; pos stands on its first byte.
func (r *jsonReader) value() *Node {
	switch c := r.src[r.pos]; {
	case c == '{':
		return r.brackets(Mapping, '}')
	case c == '[':
		return r.brackets(Sequence, ']')
	case c == '"':
		return r.text()
	case c == ':' || isFlowSign(c):
		n := r.null(r.pos)
		r.report(r.pos, r.pos+1, "a value is missing before '%c'", c)
		return n
	}
	return r.word()
}

// brackets reads a mapping or list.
func (r *jsonReader) brackets(kind NodeKind, closing byte) *Node {
	n := r.node(kind, r.pos, r.pos+1)
	keys := keySet{first: len(r.entries)}
	first := len(r.items)
	if r.enter(r.pos) {
		r.pos++
		r.members(n, &keys, closing)
	}
	r.leave()
	keys.close(r.tree, n)
	r.closeItems(first, n)
	return n
}

// members reads up to the closing bracket.
func (r *jsonReader) members(n *Node, keys *keySet, closing byte) {
	comma := -1 // offset of the comma before pos
	for {
		if !r.space() {
			r.unclosed(n)
			return
		}
		c := r.src[r.pos]
		if c == ']' || c == '}' {
			r.closing(n, c, closing, comma)
			return
		}
		if c == ',' {
			r.report(r.pos, r.pos+1, "nothing stands before this comma")
			r.pos++
			continue
		}
		if n.Kind == Mapping {
			r.entry(n, keys)
		} else {
			item := r.value()
			n.End = max(n.End, item.End)
			r.items = append(r.items, item)
			if r.pos < len(r.src) && r.src[r.pos] == ':' { // reported as a stray sign by value, or left by a text
				r.stray()
			}
		}
		if r.broken || !r.space() {
			r.unclosed(n)
			return
		}
		comma = -1
		switch c := r.src[r.pos]; c {
		case ',':
			comma = r.pos
			r.pos++
		case ']', '}':
		case ':':
			r.stray()
		default:
			r.report(r.pos, r.wordEnd(), "',' or '%c' is missing before this", closing)
		}
	}
}

// stray passes over a colon that has no key; it was reported when nothing else was read at its place.
func (r *jsonReader) stray() {
	if last := len(r.problems) - 1; last < 0 || r.problems[last].Start != r.pos {
		r.report(r.pos, r.pos+1, "this colon has no key before it")
	}
	r.pos++
}

// closing takes the closing bracket at pos.
func (r *jsonReader) closing(n *Node, c, closing byte, comma int) {
	if comma >= 0 {
		r.report(comma, comma+1, "JSON has no comma behind the last member")
	}
	if c != closing {
		p := r.report(r.pos, r.pos+1, "'%c' stands where '%c' has to close '%c'", c, closing, r.src[n.Start])
		p.Related = []Related{{Doc: r.doc, Start: n.Start, End: n.Start + 1, Message: "opened here"}}
	}
	r.pos++
	n.End = r.pos
}

// unclosed reports the innermost bracket that the text ends in.
func (r *jsonReader) unclosed(n *Node) {
	if !r.broken && !r.stopped {
		r.report(n.Start, n.Start+1, "'%c' opens here and is not closed", r.src[n.Start])
	}
	r.broken = true
}

// entry reads a key, its colon and its value.
func (r *jsonReader) entry(n *Node, keys *keySet) {
	e := Entry{KeyDoc: r.doc, KeyStart: r.pos}
	wrong := false
	if r.src[r.pos] == '"' {
		k := r.text()
		e.Key, e.KeyEnd = k.Value, k.End
	} else {
		end := r.wordEnd()
		e.Key, e.KeyEnd = r.src[r.pos:end], end
		wrong = e.Key[0] == ':' || isFlowSign(e.Key[0])
		if wrong {
			e.KeyEnd = e.KeyStart
			r.report(r.pos, end, "a key in double quotes was expected here")
			if e.Key[0] != ':' {
				r.value()
				return
			}
		} else {
			r.report(r.pos, end, "a key stands in double quotes in JSON")
			r.pos = end
		}
	}
	n.End = max(n.End, e.KeyEnd)
	e.Value = r.member(n, &e)
	n.End = max(n.End, e.Value.End)
	if !wrong {
		r.add(keys, e)
	}
}

// member reads the colon and value of a key.
func (r *jsonReader) member(n *Node, e *Entry) *Node {
	if r.broken || !r.space() {
		return r.null(e.KeyEnd)
	}
	if r.src[r.pos] != ':' {
		r.report(e.KeyStart, e.KeyEnd, "a colon is missing behind the key '%s'", shortenText(e.Key))
		if isFlowSign(r.src[r.pos]) && r.src[r.pos] != '[' && r.src[r.pos] != '{' {
			return r.null(e.KeyEnd)
		}
	} else {
		r.pos++
	}
	at := r.pos
	n.End = max(n.End, at)
	if !r.space() {
		return r.null(at)
	}
	if c := r.src[r.pos]; c == ',' || c == ']' || c == '}' {
		r.report(e.KeyStart, e.KeyEnd, "a value is missing behind the key '%s'", shortenText(e.Key))
		return r.null(at)
	}
	return r.value()
}

// text reads a text in double quotes.
func (r *jsonReader) text() *Node {
	start := r.pos
	n := r.node(Scalar, start, start+1)
	n.Type = Text
	r.pos++
	from := r.pos
	var text strings.Builder
	for r.pos < len(r.src) {
		switch c := r.src[r.pos]; {
		case c == '"':
			n.Value = r.src[from:r.pos]
			if text.Len() > 0 {
				text.WriteString(n.Value)
				n.Value = text.String()
			}
			r.pos++
			n.End = r.pos
			return n
		case c == '\\':
			text.WriteString(r.src[from:r.pos])
			r.escape(&text)
			from = r.pos
		case isBreak(c):
			return r.openQuote(n)
		case c == '\t':
			r.report(r.pos, r.pos+1, `a tab in a JSON text is written '\t'`)
			r.pos++
		default:
			r.pos++
		}
	}
	return r.openQuote(n)
}

// openQuote reports a text without its end, and takes it to end with its line.
func (r *jsonReader) openQuote(n *Node) *Node {
	n.End = n.Start + len(strings.TrimRight(r.src[n.Start:r.pos], " \t,"))
	n.Value = r.src[n.Start+1 : n.End]
	r.report(n.Start, n.End, "the quote \" that opens here is not closed")
	return n
}

// escape reads a backslash and what it stands for.
func (r *jsonReader) escape(text *strings.Builder) {
	start := r.pos
	r.pos++
	if r.pos >= len(r.src) || isBreak(r.src[r.pos]) {
		return
	}
	c := r.src[r.pos]
	if i := strings.IndexByte(`"\/bfnrt`, c); i >= 0 {
		text.WriteByte("\"\\/\b\f\n\r\t"[i])
		r.pos++
		return
	}
	if c == 'u' {
		r.pos = start
		text.WriteRune(r.hexEscape(4))
		return
	}
	_, size := utf8.DecodeRuneInString(r.src[r.pos:])
	r.pos += size
	r.report(start, r.pos, "'%s' is no escape: a backslash in quotes is written twice", r.src[start:r.pos])
	text.WriteString(r.src[start:r.pos])
}

// word reads a number, true, false or null.
func (r *jsonReader) word() *Node {
	start, end := r.pos, r.wordEnd()
	r.pos = end
	n := r.node(Scalar, start, end)
	n.Value = r.src[start:end]
	switch n.Value {
	case "true", "false":
		n.Type = Bool
		return n
	case "null":
		n.Type = Null
		return n
	}
	if isJSONNumber(n.Value) {
		n.Type = Number
		n.Number, _ = strconv.ParseFloat(n.Value, 64) // only the range can fail: ±Inf then
		return n
	}
	n.Type = Text
	if n.Value[0] == '\'' {
		r.report(start, end, "a text stands in double quotes in JSON")
	} else {
		r.report(start, end, "'%s' is no JSON value: a text stands in double quotes", shortenText(n.Value))
	}
	return n
}

// isJSONNumber matches the number of RFC 8259 section 6: a decimal without a plus, a leading zero, or a bare point.
func isJSONNumber(text string) bool {
	digits := strings.TrimPrefix(text, "-")
	if !isDecimal(text) || digits[0] < '0' || digits[0] > '9' {
		return false
	}
	if digits[0] == '0' && len(digits) > 1 && digits[1] >= '0' && digits[1] <= '9' {
		return false
	}
	point := strings.IndexByte(digits, '.')
	return point < 0 || point+1 < len(digits) && digits[point+1] >= '0' && digits[point+1] <= '9'
}
