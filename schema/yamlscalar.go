package schema

import "strings"

// inline reads a value that is not block structure and the rest of its last line.
func (r *yamlReader) inline(indent int) *Node {
	var n *Node
	switch c := r.peek(); c {
	case '"', '\'':
		n = r.quoted(indent, false)
	case '[', '{':
		r.balanced, r.broken = false, false
		n = r.flow(indent)
		if r.broken { // pos is where reading goes on
			r.broken = false
			return n
		}
	case '*':
		n = r.alias()
	case '|', '>':
		return r.blockText(indent)
	default:
		n = r.plain(indent, false)
	}
	r.restOfLine()
	return n
}

// restOfLine expects nothing but a comment up to the line's end.
func (r *yamlReader) restOfLine() {
	r.skipBlanks()
	if r.pos >= len(r.src) || isBreak(r.src[r.pos]) {
		return
	}
	start, end := r.pos, r.lineEnd(r.pos)
	rest := strings.TrimRight(r.src[start:end], " \t")
	switch {
	case rest[0] == '#' && r.afterBlank(start):
	case rest[0] == '#':
		r.report(start, start+1, "a comment needs a blank before its '#'")
	case r.mark(':'):
		r.report(start, start+1, "a second colon on the line: a value with a colon and a blank in it needs quotes")
	case rest[0] == ']' || rest[0] == '}':
		r.report(start, start+1, "'%c' closes a bracket that was not opened", rest[0])
	default:
		r.report(start, start+len(rest), "nothing may stand behind a value on its line")
	}
	r.pos = end
}

// plainLine is the end of the plain text that begins at i, on its line: before a colon or a comment, without the blanks
// in front of them; in brackets also before a comma or bracket.
func (r *yamlReader) plainLine(i int, flow bool) int {
	end := i
	for ; i < len(r.src); i++ {
		switch c := r.src[i]; c {
		case ' ', '\t':
			continue
		case '\n', '\r':
			return end
		case ':':
			if r.blankAt(i+1) || flow && isFlowSign(r.src[i+1]) {
				return end
			}
		case '#':
			if i > r.lineStart && isBlank(r.src[i-1]) {
				return end
			}
		case ',', '[', ']', '{', '}':
			if flow {
				return end
			}
		}
		end = i + 1
	}
	return end
}

// plainEnd is the end of the text from i to end without its comment and the blanks before that.
func (r *yamlReader) plainEnd(i, end int) int {
	for j := i; j < end; j++ {
		if r.src[j] == '#' && j > i && isBlank(r.src[j-1]) {
			end = j
		}
	}
	return i + len(strings.TrimRight(r.src[i:end], " \t"))
}

func isFlowSign(c byte) bool {
	return c == ',' || c == '[' || c == ']' || c == '{' || c == '}'
}

// keyAhead is true when a key and its colon stand at pos, on one line.
func (r *yamlReader) keyAhead() bool {
	i := r.pos
	for c := r.byteAt(i); c == '&' || c == '!'; c = r.byteAt(i) {
		for !r.blankAt(i) {
			i++
		}
		for isBlank(r.byteAt(i)) {
			i++
		}
	}
	switch c := r.byteAt(i); c {
	case '"', '\'':
		if i = quotedEnd(r.src, i); i < 0 {
			return false
		}
	case '[', '{':
		if i = r.bracketEnd(i); i < 0 {
			return false
		}
	case '|', '>':
		return false
	case '*':
		for !r.blankAt(i) {
			i++
		}
	default:
		i = r.plainLine(i, false)
	}
	for isBlank(r.byteAt(i)) {
		i++
	}
	return r.byteAt(i) == ':' && r.blankAt(i+1)
}

// quotedEnd is the offset behind the quoted text at i when it ends on its line, else -1.
func quotedEnd(text string, i int) int {
	quote := text[i]
	for i++; i < len(text) && !isBreak(text[i]); i++ {
		switch {
		case text[i] == '\\' && quote == '"':
			i++
		case text[i] == quote && quote == '\'' && strings.HasPrefix(text[i:], "''"):
			i++
		case text[i] == quote:
			return i + 1
		}
	}
	return -1
}

// bracketEnd is the offset behind the brackets at i when they close on their line, else -1.
func (r *yamlReader) bracketEnd(i int) int {
	for depth := 0; i < len(r.src) && !isBreak(r.src[i]); i++ {
		switch r.src[i] {
		case '[', '{':
			depth++
		case ']', '}':
			if depth--; depth == 0 {
				return i + 1
			}
		case '"', '\'':
			if end := quotedEnd(r.src, i); end > 0 && opensQuote(r.src[i-1]) {
				i = end - 1
			}
		}
	}
	return -1
}

// opensQuote is true for a byte behind which a quote begins a text rather than being part of one.
func opensQuote(before byte) bool {
	return isBlank(before) || isBreak(before) || isFlowSign(before) || before == ':'
}

// canBegin reports a sign at pos that a text without quotes cannot begin with.
func (r *yamlReader) canBegin(block bool) {
	switch c := r.peek(); {
	case strings.IndexByte("@`%|>", c) >= 0, block && isFlowSign(c):
		r.report(r.pos, r.pos+1, "a text cannot begin with '%c' unless it stands in quotes", c)
	case block && (r.mark('?') || r.mark(':') || r.mark('-')):
		r.report(r.pos, r.pos+1, "a text cannot begin with '%c' unless it stands in quotes", c)
	case c == '#':
		r.report(r.pos, r.pos+1, "a comment needs a blank before its '#'")
	case !block && (c == '-' || c == '?') && (r.blankAt(r.pos+1) || isFlowSign(r.src[r.pos+1])):
		r.report(r.pos, r.pos+1, "'%c' has no place inside brackets: put a text in quotes, and a list in '[ ]'", c)
	}
}

// plain reads a text without quotes, over several lines where they are indented more than indent.
func (r *yamlReader) plain(indent int, flow bool) *Node {
	start := r.pos
	r.canBegin(!flow)
	end := r.plainLine(start, flow)
	if end == start { // a sign alone, reported here or by the caller
		end++
	}
	r.pos = end
	n := r.node(Scalar, start, end)
	n.Value = r.src[start:end]
	if !r.goesOn(indent, flow) {
		resolveCore(n)
		return n
	}
	var text strings.Builder
	text.WriteString(n.Value)
	for {
		breaks, at := r.continuation(indent, flow)
		if breaks == 0 {
			break
		}
		r.pos = at
		fold(&text, breaks)
		n.End = r.plainLine(at, flow)
		text.WriteString(r.src[at:n.End])
		r.pos = n.End
		if !r.goesOn(indent, flow) {
			break
		}
	}
	n.Value = text.String()
	resolveCore(n)
	return n
}

// goesOn is true when nothing but a line end follows, so that a further line may belong to the text.
func (r *yamlReader) goesOn(indent int, flow bool) bool {
	i := r.pos
	for isBlank(r.byteAt(i)) {
		i++
	}
	if i >= len(r.src) || !isBreak(r.src[i]) {
		return false
	}
	// The quick answer for the common case: the next line begins at most as deep as the key.
	if r.src[i] == '\r' && r.byteAt(i+1) == '\n' {
		i++
	}
	i++
	return isBlank(r.byteAt(i)) || isBreak(r.byteAt(i)) || indent < 0 || flow
}

// continuation finds the next line of a plain text: the line ends up to it and its first byte. It moves lineStart when
// there is one, and nothing otherwise.
func (r *yamlReader) continuation(indent int, flow bool) (breaks, at int) {
	pos, line := r.pos, r.lineStart
	for r.skipBlanks(); r.pos < len(r.src) && isBreak(r.src[r.pos]); r.skipBlanks() {
		r.newLine()
		breaks++
	}
	at = r.pos
	if breaks == 0 || r.end() || r.peek() == '#' || !r.deeper(indent, flow) || r.keyLine(at, flow) {
		r.pos, r.lineStart = pos, line
		return 0, 0
	}
	return breaks, at
}

// deeper is true when the blanks before pos, tabs not counted, go beyond indent.
func (r *yamlReader) deeper(indent int, flow bool) bool {
	if flow && r.balanced {
		return true
	}
	i := r.lineStart
	for i < r.pos && r.src[i] == ' ' {
		i++
	}
	return i-r.lineStart > indent
}

// keyLine is true when the line at pos is no more of a text but a key with its colon, or inside brackets a sign.
func (r *yamlReader) keyLine(at int, flow bool) bool {
	if flow && isFlowSign(r.src[at]) {
		return true
	}
	i := r.plainLine(at, flow)
	for isBlank(r.byteAt(i)) {
		i++
	}
	return r.byteAt(i) == ':'
}

// fold writes the line ends between two lines of a text: one is a blank, more are all but one.
func fold(text *strings.Builder, breaks int) {
	if breaks == 1 {
		text.WriteByte(' ')
		return
	}
	for range breaks - 1 {
		text.WriteByte('\n')
	}
}
