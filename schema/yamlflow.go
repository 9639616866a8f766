package schema

// flow reads a list or mapping in brackets, over any lines that are indented more than indent.
func (r *yamlReader) flow(indent int) *Node {
	open := r.src[r.pos]
	kind, closing := Sequence, byte(']')
	if open == '{' {
		kind, closing = Mapping, '}'
	}
	n := r.node(kind, r.pos, r.pos+1)
	keys := keySet{first: len(r.entries)}
	first := len(r.items)
	r.flowDepth++
	if r.enter(r.pos) {
		r.pos++
		r.members(n, &keys, indent, open, closing)
	}
	r.leave()
	r.flowDepth--
	if kind == Mapping {
		r.merge(&keys)
	}
	keys.close(r.tree, n)
	r.closeItems(first, n)
	return n
}

// members reads the members of n up to its closing bracket.
func (r *yamlReader) members(n *Node, keys *keySet, indent int, open, closing byte) {
	for r.flowSpace(n, indent, open) {
		switch c := r.peek(); c {
		case ']', '}':
			if c != closing {
				p := r.report(r.pos, r.pos+1, "'%c' stands where '%c' has to close '%c'", c, closing, open)
				p.Related = []Related{{Doc: r.doc, Start: n.Start, End: n.Start + 1, Message: "opened here"}}
			}
			r.pos++
			n.End = r.pos
			return
		case ',':
			r.report(r.pos, r.pos+1, "nothing stands before this comma")
			r.pos++
			continue
		}
		if n.Kind == Mapping {
			r.flowEntry(n, keys, indent)
		} else {
			r.flowItem(n, indent)
		}
		if !r.flowSpace(n, indent, open) {
			return
		}
		switch c := r.peek(); c {
		case ',':
			r.pos++
			n.End = r.pos
		case ']', '}':
		default:
			r.missingComma(closing)
		}
	}
}

// missingComma reports the text at pos, which a comma should stand before.
func (r *yamlReader) missingComma(closing byte) {
	switch {
	case r.peek() == '#':
		r.report(r.pos, r.pos+1, "a comment needs a blank before its '#'")
		r.skipLine()
	case r.mark(':'):
		r.report(r.pos, r.pos+1, "a comma is missing before the key of this colon, or a text with a colon needs quotes")
		r.pos++
	default:
		end := max(r.plainLine(r.pos, true), r.pos+1)
		r.report(r.pos, end, "',' or '%c' is missing before this", closing)
	}
}

// flowSpace moves to the next sign or text in brackets. It is false when there is none: the brackets of n are not closed.
func (r *yamlReader) flowSpace(n *Node, indent int, open byte) bool {
	if r.broken || r.stopped {
		return false
	}
	line := r.lineStart
	r.next()
	if !r.end() && (r.lineStart == line || r.balanced || r.column() > indent || r.closesAhead()) {
		return true
	}
	if !r.stopped {
		r.report(n.Start, n.Start+1, "'%c' opens here and is not closed", open)
	}
	n.End = max(n.End, n.Start+1)
	r.broken = true
	return false
}

// closesAhead looks from a line that is indented too little for the open brackets whether they are closed all the same,
// which is bad style but clear.
func (r *yamlReader) closesAhead() bool {
	depth := r.flowDepth
	for i := r.pos; i < len(r.src); i++ {
		switch r.src[i] {
		case '[', '{':
			depth++
		case ']', '}':
			if depth--; depth == 0 {
				r.balanced = true
				return true
			}
		case '"', '\'':
			if end := quotedEnd(r.src, i); end > 0 && opensQuote(r.src[i-1]) {
				i = end - 1
			}
		case '#':
			if isBlank(r.src[i-1]) || isBreak(r.src[i-1]) {
				i = r.lineEnd(i)
			}
		case '-', '.':
			if isBreak(r.src[i-1]) && r.documentEnds(i) {
				return false
			}
		}
	}
	return false
}

// flowEntry reads one key of a mapping in braces, with its value if it has one.
func (r *yamlReader) flowEntry(n *Node, keys *keySet, indent int) {
	if r.mark('?') {
		r.pos++
		r.next()
	}
	k := r.keyText(false, indent)
	n.End = max(n.End, k.end)
	r.pos = max(r.pos, k.end)
	k.value = r.flowPair(n, &k, indent)
	r.addKey(keys, k)
}

// flowPair reads the value behind a key's colon, which may stand on a later line; without a colon it is a Null.
func (r *yamlReader) flowPair(n *Node, k *yamlKey, indent int) *Node {
	if r.broken {
		return r.null(k.end)
	}
	pos, line := r.pos, r.lineStart
	r.next()
	if r.peek() != ':' || r.end() || k.plain && !r.blankAt(r.pos+1) && !isFlowSign(r.src[r.pos+1]) {
		r.pos, r.lineStart = pos, line
		return r.null(k.end)
	}
	r.pos++
	n.End = max(n.End, r.pos)
	v := r.flowValue(n, indent)
	n.End = max(n.End, v.End)
	return v
}

// flowItem reads one item of a list in brackets; a key with its value in it is a mapping of one entry.
func (r *yamlReader) flowItem(n *Node, indent int) {
	start := r.pos
	if r.mark('?') {
		r.pos++
		r.next()
	}
	item := r.flowValue(n, indent)
	if pair := r.singlePair(start, item, indent); pair != nil {
		item = pair
	}
	n.End = max(n.End, item.End)
	r.items = append(r.items, item)
}

// singlePair turns an item that a colon follows on its line into a mapping; nil when there is none.
func (r *yamlReader) singlePair(start int, item *Node, indent int) *Node {
	pos := r.pos
	r.skipBlanks()
	plain := item.Kind == Scalar && item.End > item.Start && r.src[item.Start] != '"' && r.src[item.Start] != '\''
	if r.broken || r.peek() != ':' || plain && !r.blankAt(r.pos+1) && !isFlowSign(r.src[r.pos+1]) {
		r.pos = pos
		return nil
	}
	if item.Kind != Scalar {
		r.report(item.Start, item.End, "a key is a word, not a %s", item.Kind)
	}
	m := r.node(Mapping, start, item.End)
	keys := keySet{first: len(r.entries)}
	k := yamlKey{text: item.Value, start: item.Start, end: item.End, plain: plain, wrong: item.Kind != Scalar}
	k.value = r.flowPair(m, &k, indent)
	r.addKey(&keys, k)
	r.merge(&keys)
	keys.close(r.tree, m)
	return m
}

// flowValue reads a value inside brackets; where nothing is written it is a Null of no length.
func (r *yamlReader) flowValue(n *Node, indent int) *Node {
	at := r.pos
	var p yamlProperties
	for {
		if !r.flowSpace(n, indent, r.src[n.Start]) {
			return r.apply(&p, r.null(at))
		}
		switch c := r.peek(); c {
		case ',', ']', '}':
			return r.apply(&p, r.null(at))
		case '&', '!':
			r.property(&p)
			at = r.pos
			continue
		case '[', '{':
			return r.apply(&p, r.flow(indent))
		case '"', '\'':
			return r.apply(&p, r.quoted(indent, false))
		case '*':
			return r.apply(&p, r.alias())
		case ':':
			if r.blankAt(r.pos+1) || isFlowSign(r.src[r.pos+1]) {
				r.report(r.pos, r.pos+1, "the key before this colon is missing")
				r.pos++
				continue
			}
		}
		return r.apply(&p, r.plain(indent, true))
	}
}
