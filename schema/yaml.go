package schema

import "strings"

// yamlReader reads YAML 1.2 (yaml.org/spec/1.2.2) by recursive descent over the bytes. It is our own because the
// ranges of values are the point of it: a library's tree gives only where nodes start, and stops at its first error.
// After an error it goes on at the next place that makes sense, so that one mistake does not hide the rest of the file.
// Columns here are bytes from the line's start: only blanks count for indentation.
type yamlReader struct {
	*tree
	lineStart int // offset of the first byte of the line that pos is in
	tabLine   int // the last line whose indentation by a tab was reported or passed over

	anchors map[string]*yamlAnchor
	aliased int // values that the aliases so far stand for

	flowDepth int  // open brackets
	balanced  bool // the open brackets are known to be closed further down
	broken    bool // the open brackets are never closed: leave them without a word
}

func newYAMLReader(t *tree) *yamlReader {
	return &yamlReader{tree: t, lineStart: t.pos, tabLine: -2}
}

// document reads the whole text; nil when it holds no value.
func (r *yamlReader) document() *Node {
	r.directives()
	at := r.pos
	if r.marker("---") {
		r.pos += 3
		at = r.pos
	}
	root := r.value(-1, atTop)
	written := root.Start != root.End || root.Start != at
	r.leftovers(root)
	if r.marker("...") {
		r.pos += 3
		r.restOfLine()
		r.next()
	}
	const second = "a spec file holds one document, and a second one begins here"
	switch {
	case r.stopped || r.pos >= len(r.src):
	case r.marker("---"):
		r.report(r.pos, r.pos+3, second)
	default:
		r.strayToken(second)
	}
	if !written && root.Type == Null && root.Kind == Scalar {
		return nil
	}
	return root
}

// directives passes over the lines that begin with % at the head of the text.
func (r *yamlReader) directives() {
	for r.next(); r.pos == r.lineStart && r.peek() == '%'; r.next() {
		start := r.pos
		r.skipLine()
		text := strings.TrimRight(r.src[start:r.pos], " \t")
		if !strings.HasPrefix(text, "%YAML 1.") && !strings.HasPrefix(text, "%TAG ") {
			r.report(start, start+len(text), "a line that begins with '%%' is a directive, and this one is not known")
		}
	}
	if r.pos < len(r.src) && !r.marker("---") {
		r.pos = r.lineStart // the first line's indentation is looked at with the value
	}
}

// leftovers reports what stands behind the top value and takes in what was only indented differently.
func (r *yamlReader) leftovers(root *Node) {
	for r.nextBlock(); !r.end(); r.nextBlock() {
		if root.Kind != Mapping || r.src[root.Start] == '{' {
			r.strayToken("nothing may stand behind the end of the top value")
			r.stopped = true
			return
		}
		r.misplaced("this line is indented less than the first key of the file")
		n := r.value(-1, atTop)
		if n.Kind == Mapping {
			r.adopt(root, n)
		}
		root.End = max(root.End, n.End)
	}
}

// adopt takes the entries of n into the finished mapping root.
func (r *yamlReader) adopt(root, n *Node) {
	keys := keySet{first: len(r.entries)}
	r.entries = append(r.entries, root.Entries...)
	for _, e := range n.Entries {
		r.add(&keys, e)
	}
	keys.close(r.tree, root)
}

// peek is the byte at pos, 0 at the end.
func (r *yamlReader) peek() byte { return r.byteAt(r.pos) }

func (r *yamlReader) byteAt(i int) byte {
	if i < len(r.src) {
		return r.src[i]
	}
	return 0
}

// column is the distance of pos from the start of its line in bytes.
func (r *yamlReader) column() int { return r.pos - r.lineStart }

// next moves over blanks, comments and line ends to the next content.
func (r *yamlReader) next() {
	if r.stopped {
		r.pos = len(r.src)
	}
	for r.pos < len(r.src) {
		switch c := r.src[r.pos]; c {
		case ' ', '\t':
			r.pos++
		case '\n', '\r':
			r.newLine()
		case '#':
			if !r.afterBlank(r.pos) {
				return
			}
			r.skipLine()
		default:
			return
		}
	}
}

// nextBlock is next, and reports a line of block structure that a tab indents. Of tabbed lines in a row only the first
// is reported.
func (r *yamlReader) nextBlock() {
	r.next()
	if r.pos >= len(r.src) || r.tabLine == r.lineStart {
		return
	}
	lead := r.src[r.lineStart:r.pos]
	if tab := strings.IndexByte(lead, '\t'); tab >= 0 && onlyBlanks(lead) {
		if !r.tabbedBefore() {
			r.report(r.lineStart+tab, r.pos, "a tab indents this line: indent with blanks")
		}
		r.tabLine = r.lineStart
	}
}

// tabbedBefore is true when the line above the current one is the last tabbed line.
func (r *yamlReader) tabbedBefore() bool {
	if r.tabLine < 0 {
		return false
	}
	above := strings.TrimRight(r.src[r.tabLine:r.lineStart], "\r\n")
	return !strings.ContainsAny(above, "\r\n")
}

// onlyBlanks is true for a text of blanks and tabs only.
func onlyBlanks(text string) bool {
	for i := range len(text) {
		if text[i] != ' ' && text[i] != '\t' {
			return false
		}
	}
	return true
}

// newLine moves over one line end.
func (r *yamlReader) newLine() {
	if r.src[r.pos] == '\r' && r.byteAt(r.pos+1) == '\n' {
		r.pos++
	}
	r.pos++
	r.lineStart = r.pos
}

// skipLine moves to the end of the line, before its line end.
func (r *yamlReader) skipLine() { r.pos = r.lineEnd(r.pos) }

// lineEnd is the offset of the line end at or behind i.
func (r *yamlReader) lineEnd(i int) int {
	for i < len(r.src) && r.src[i] != '\n' && r.src[i] != '\r' {
		i++
	}
	return i
}

// skipBlanks moves over blanks and tabs within the line.
func (r *yamlReader) skipBlanks() {
	for r.pos < len(r.src) && (r.src[r.pos] == ' ' || r.src[r.pos] == '\t') {
		r.pos++
	}
}

// afterBlank is true when i is the first byte of its line or stands behind a blank.
func (r *yamlReader) afterBlank(i int) bool {
	return i <= r.lineStart || r.src[i-1] == ' ' || r.src[i-1] == '\t'
}

// blankAt is true for a blank, a line end and the end of the text.
func (r *yamlReader) blankAt(i int) bool {
	return i >= len(r.src) || isBlank(r.src[i]) || isBreak(r.src[i])
}

func isBlank(c byte) bool { return c == ' ' || c == '\t' }
func isBreak(c byte) bool { return c == '\n' || c == '\r' }

// marker is true when the document marker stands at pos, at the start of a line.
func (r *yamlReader) marker(text string) bool {
	return r.markerAt(r.pos, text) && r.pos == r.lineStart
}

func (r *yamlReader) markerAt(i int, text string) bool {
	return strings.HasPrefix(r.src[i:], text) && r.blankAt(i+3)
}

// documentEnds is true when a document marker stands at i, the start of a line.
func (r *yamlReader) documentEnds(i int) bool {
	c := r.byteAt(i)
	return (c == '-' || c == '.') && (r.markerAt(i, "---") || r.markerAt(i, "..."))
}

// end is true when the document ends at pos.
func (r *yamlReader) end() bool {
	return r.pos >= len(r.src) || r.pos == r.lineStart && r.documentEnds(r.pos)
}
