package schema

import "strings"

// yamlSlot is where a value of block structure stands; it decides what may begin on the same line.
type yamlSlot int

const (
	atTop     yamlSlot = iota + 1 // the whole document
	afterKey                      // behind a key's colon: only values of one line, or a list as deep as the key on new lines
	afterDash                     // behind the dash of a list item: everything
	afterMark                     // behind the signs of an explicit key and its value: everything, and a list as deep as they
)

// value reads what stands at pos or on the lines below it that are indented more than indent. Where nothing is written
// it is a Null of no length at pos.
func (r *yamlReader) value(indent int, s yamlSlot) *Node {
	at, line, bare := r.pos, r.lineStart, -1 // bare is the line with properties alone so far: no structure begins on it
	if s == atTop {
		line = -1
	}
	var p yamlProperties
	for {
		r.nextBlock()
		if r.end() || !r.belongs(indent, s, line) {
			return r.apply(&p, r.null(at))
		}
		begins := (s != afterKey || r.lineStart != line) && r.lineStart != bare
		if c := r.peek(); c != '&' && c != '!' || begins && r.keyAhead() {
			return r.apply(&p, r.content(indent, s, begins, r.lineStart != line))
		}
		r.property(&p)
		at, bare = r.pos, r.lineStart
	}
}

// belongs is true when pos stands deep enough for a value below indent. line is the line of the key or dash.
func (r *yamlReader) belongs(indent int, s yamlSlot, line int) bool {
	col := r.column()
	return r.lineStart == line || col > indent || evenList(s) && col == indent && r.dash()
}

// evenList is true where a list may stand as deep as what it belongs to.
func evenList(s yamlSlot) bool { return s == afterKey || s == afterMark }

// content reads a value at pos. begins tells that block structure may begin here, fresh that it is the line's first.
func (r *yamlReader) content(indent int, s yamlSlot, begins, fresh bool) *Node {
	col := r.column()
	switch {
	case r.dash():
		if !begins {
			r.report(r.pos, r.pos+1, "a list begins on a line of its own, below its key")
		}
		r.tabInside(begins && !fresh)
		return r.list(col, evenList(s) && col == indent)
	case begins && (r.mark('?') || r.keyAhead()):
		r.tabInside(!fresh)
		return r.mapping(col)
	}
	pos, line, tabLine, problems := r.pos, r.lineStart, r.tabLine, len(r.problems)
	n := r.inline(indent)
	if !fresh {
		return n
	}
	r.nextBlock()
	if !r.end() && r.column() >= col && col > indent && n.Kind == Scalar && n.Alias == nil {
		// More follows at the same depth or deeper: this is a mapping whose first line lacks its colon.
		r.pos, r.lineStart, r.tabLine, r.problems = pos, line, tabLine, r.problems[:problems]
		return r.mapping(col)
	}
	return n
}

// tabInside reports a tab between a dash and the mapping or list that begins on its line.
func (r *yamlReader) tabInside(compact bool) {
	if compact && r.pos > 0 && r.src[r.pos-1] == '\t' {
		r.report(r.pos-1, r.pos, "a tab indents what follows: indent with blanks")
	}
}

// dash and mark are true at a one-byte sign of block structure, which a blank follows.
func (r *yamlReader) dash() bool { return r.mark('-') }

func (r *yamlReader) mark(c byte) bool { return r.peek() == c && r.blankAt(r.pos+1) }

// list reads the items of a list whose dashes stand in column col. even tells that it stands as deep as its key.
func (r *yamlReader) list(col int, even bool) *Node {
	n := r.node(Sequence, r.pos, r.pos+1)
	first := len(r.items)
	if r.enter(r.pos) {
		for {
			n.End = r.pos + 1
			r.pos++
			item := r.value(col, afterDash)
			r.items = append(r.items, item)
			n.End = max(n.End, item.End)
			if !r.anotherItem(n, col, even) {
				break
			}
		}
	}
	r.leave()
	r.closeItems(first, n)
	return n
}

// anotherItem moves to the next dash of the list, past lines that have no place in it.
func (r *yamlReader) anotherItem(n *Node, col int, even bool) bool {
	for {
		r.nextBlock()
		switch c := r.column(); {
		case r.end() || c < col || c == col && even && !r.dash():
			return false
		case c == col && r.dash():
			return true
		case c == col:
			r.misplaced("every item of this list begins with '- '")
		default:
			r.misplaced("this line is indented deeper than the list it stands in")
		}
		n.End = max(n.End, r.value(col-1, atTop).End)
	}
}

// mapping reads the entries of a mapping whose keys stand in column col.
func (r *yamlReader) mapping(col int) *Node {
	n := r.node(Mapping, r.pos, r.pos)
	keys := keySet{first: len(r.entries)}
	if r.enter(r.pos) {
		for {
			r.entry(n, &keys, col)
			if !r.anotherEntry(n, &keys, col) {
				break
			}
		}
	}
	r.leave()
	r.merge(&keys)
	keys.close(r.tree, n)
	return n
}

// anotherEntry moves to the next key of the mapping, past lines that have no place in it.
func (r *yamlReader) anotherEntry(n *Node, keys *keySet, col int) bool {
	for {
		r.nextBlock()
		c := r.column()
		if r.end() || c < col {
			return false
		}
		if c == col && !r.dash() {
			return true
		}
		if c == col {
			r.misplaced("a list item stands where a key was expected")
		} else {
			r.misplaced("this line is indented differently from the lines it belongs to")
		}
		v := r.value(col-1, atTop)
		n.End = max(n.End, v.End)
		if v.Kind == Mapping && v.Alias == nil {
			for _, e := range v.Entries {
				r.add(keys, e)
			}
		}
	}
}

// entry reads one key and its value into the open mapping n.
func (r *yamlReader) entry(n *Node, keys *keySet, col int) {
	if r.mark('?') {
		r.explicitEntry(n, keys, col)
		return
	}
	k, ok := r.key()
	n.End = max(n.End, k.end)
	if ok {
		r.pos++
		n.End = r.pos
	}
	k.value = r.value(col, afterKey)
	n.End = max(n.End, k.value.End)
	if ok {
		r.addKey(keys, k)
	}
}

// explicitEntry reads a key behind a question mark, and its value if a colon stands below it.
func (r *yamlReader) explicitEntry(n *Node, keys *keySet, col int) {
	r.pos++
	name := r.value(col, afterMark)
	k := yamlKey{text: name.Value, start: name.Start, end: name.End, wrong: name.Kind != Scalar}
	if k.wrong {
		r.report(name.Start, name.End, "a key is a word, not a %s", name.Kind)
	}
	k.value = r.null(name.End)
	if r.nextBlock(); !r.end() && r.column() == col && r.mark(':') {
		r.pos++
		n.End = r.pos
		k.value = r.value(col, afterMark)
	}
	n.End = max(n.End, k.value.End)
	r.addKey(keys, k)
}

// yamlKey is one key as it was read.
type yamlKey struct {
	text       string
	start, end int
	plain      bool
	wrong      bool // no text: reported already
	value      *Node
}

func (r *yamlReader) addKey(keys *keySet, k yamlKey) {
	if !k.wrong {
		r.add(keys, Entry{Key: k.text, KeyStart: k.start, KeyEnd: k.end, KeyDoc: r.doc, Value: k.value})
	}
}

// key reads a key up to its colon. ok is false, and the line is read to its end, when there is no colon.
func (r *yamlReader) key() (k yamlKey, ok bool) {
	k = r.keyText(true, r.column())
	r.skipBlanks()
	if r.mark(':') {
		return k, true
	}
	rest := r.plainEnd(k.start, r.lineEnd(r.pos))
	text := r.src[k.start:rest]
	if i := strings.IndexByte(text, ':'); i > 0 && k.plain {
		r.report(k.start, rest, "a blank is missing behind the colon of '%s'", shortenText(text[:i]))
	} else {
		r.report(k.start, rest, "a colon is missing behind the key '%s'", shortenText(text))
	}
	r.skipLine()
	return k, false
}

// keyText reads the text of a key: plain, quoted or an alias. Only quotes inside brackets go over several lines.
func (r *yamlReader) keyText(block bool, indent int) yamlKey {
	var p yamlProperties
	for c := r.peek(); c == '&' || c == '!'; c = r.peek() {
		r.property(&p)
		r.skipBlanks()
	}
	start := r.pos
	var n *Node
	switch c := r.peek(); {
	case c == '"' || c == '\'':
		n = r.quoted(indent, block)
	case c == '*':
		n = r.alias()
	case c == '[' || c == '{':
		n = r.flow(indent)
		r.report(n.Start, n.End, "a key is a word, not a %s", n.Kind)
		return yamlKey{start: n.Start, end: n.End, wrong: true}
	default:
		return r.plainKey(&p, block)
	}
	r.apply(&p, n)
	return yamlKey{text: n.Value, start: start, end: n.End, wrong: n.Kind != Scalar}
}

// plainKey reads a key without quotes, on one line.
func (r *yamlReader) plainKey(p *yamlProperties, block bool) yamlKey {
	start := r.pos
	if r.mark(':') {
		r.report(start, start+1, "the key before this colon is missing")
		return yamlKey{start: start, end: start, plain: true, wrong: true}
	}
	r.canBegin(block)
	end := r.plainLine(start, !block)
	r.pos = end
	k := yamlKey{text: r.src[start:end], start: start, end: end, plain: true}
	if p.anchor != nil || p.tag != "" { // only then is the key a value of its own
		n := r.node(Scalar, start, end)
		n.Value = k.text
		resolveCore(n)
		r.apply(p, n)
	}
	return k
}

// misplaced reports the first word of a line that does not stand where it should; a line that a tab indents was
// reported for that.
func (r *yamlReader) misplaced(message string) {
	if r.tabLine != r.lineStart {
		r.strayToken(message)
	}
}

// strayToken reports the key or text at pos.
func (r *yamlReader) strayToken(message string) {
	end := r.lineEnd(r.pos)
	if !strings.ContainsRune(`"'[{`, rune(r.peek())) {
		if word := r.plainLine(r.pos, false); word > r.pos {
			end = word
		}
	}
	r.report(r.pos, r.pos+len(strings.TrimRight(r.src[r.pos:end], " \t")), "%s", message)
}
