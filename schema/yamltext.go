package schema

import "strings"

// blockHeader is what the first line of a block text says.
type blockHeader struct {
	folded bool
	chomp  byte // '-' no line end at the end, '+' all of them, 0 one
	indent int  // stated indentation, 0 when it is that of the first line
}

// blockText reads a text behind | or >, on lines indented more than indent (YAML 1.2.2 section 8.1).
func (r *yamlReader) blockText(indent int) *Node {
	n := r.node(Scalar, r.pos, r.pos+1)
	n.Type = Text
	h := r.blockHeader()
	n.End = r.pos
	r.restOfLine()
	depth := r.blockDepth(max(indent, 0), h, indent)
	var text strings.Builder
	empty := 0     // empty lines not yet written
	first := true  // no line with text yet
	spaced := true // the line before begins with a blank: its line end is kept
	for r.pos < len(r.src) {
		next := r.pos
		if next = r.afterBreak(next); r.documentEnds(next) {
			break
		}
		blanks := 0
		for blanks < depth && r.byteAt(next+blanks) == ' ' {
			blanks++
		}
		end := r.lineEnd(next + blanks)
		if blanks < depth && (end > next+blanks || end >= len(r.src)) {
			if strings.TrimLeft(r.src[next+blanks:end], " \t") != "" || end >= len(r.src) {
				break
			}
			blanks = end - next
		}
		if next >= len(r.src) || first && end >= len(r.src) && onlyBlanks(r.src[next:end]) {
			break
		}
		r.pos, r.lineStart = end, next
		line := r.src[next+blanks : end]
		if line == "" {
			empty++
			continue
		}
		indented := isBlank(line[0])
		blockBreak(&text, h, first, empty, spaced || indented)
		text.WriteString(line)
		if trimmed := strings.TrimRight(line, " \t"); trimmed != "" {
			n.End = next + blanks + len(trimmed)
		}
		first, empty, spaced = false, 0, indented
	}
	if !first && h.chomp != '-' && r.pos >= len(r.src) && empty == 0 {
		h.chomp = '-' // the last line has no line end to keep
	}
	chompText(&text, h, first, empty)
	n.Value = text.String()
	return n
}

// blockHeader reads the indicators behind | or >.
func (r *yamlReader) blockHeader() (h blockHeader) {
	h.folded = r.src[r.pos] == '>'
	for r.pos++; ; r.pos++ {
		switch c := r.peek(); {
		case (c == '-' || c == '+') && h.chomp == 0:
			h.chomp = c
		case c >= '1' && c <= '9' && h.indent == 0:
			h.indent = int(c - '0')
		default:
			return h
		}
	}
}

// blockDepth is the column in which the lines of the text begin: the stated one, or that of the first line with text,
// or that of the longest blank line where none has text.
func (r *yamlReader) blockDepth(base int, h blockHeader, indent int) int {
	if h.indent > 0 {
		return base + h.indent
	}
	longest := indent + 1
	for i := r.pos; i < len(r.src); {
		start := r.afterBreak(i)
		i = start
		for r.byteAt(i) == ' ' {
			i++
		}
		switch depth := i - start; {
		case i < len(r.src) && isBreak(r.src[i]):
			longest = max(longest, depth)
		case depth > indent && i < len(r.src) && !r.documentEnds(start):
			return depth
		default:
			return longest
		}
	}
	return longest
}

// afterBreak is the offset behind the line end at i.
func (r *yamlReader) afterBreak(i int) int {
	if r.byteAt(i) == '\r' && r.byteAt(i+1) == '\n' {
		i++
	}
	return min(i+1, len(r.src))
}

// blockBreak writes the line ends before a line. Folding turns one between two lines of text into a blank and drops one
// of several; a line that begins with a blank keeps those around it (YAML 1.2.2 section 8.1.3).
func blockBreak(text *strings.Builder, h blockHeader, first bool, empty int, keep bool) {
	switch {
	case first:
		writeBreaks(text, empty)
	case !h.folded || keep:
		writeBreaks(text, empty+1)
	default:
		fold(text, empty+1)
	}
}

// chompText writes the line ends behind the last line.
func chompText(text *strings.Builder, h blockHeader, none bool, empty int) {
	switch {
	case h.chomp == '+' && none:
		writeBreaks(text, empty)
	case h.chomp == '+':
		writeBreaks(text, empty+1)
	case h.chomp == 0 && !none:
		writeBreaks(text, 1)
	}
}

func writeBreaks(text *strings.Builder, n int) {
	for range n {
		text.WriteByte('\n')
	}
}
