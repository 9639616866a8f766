package schema

import "fmt"

// tree is what the readers of both syntaxes build: nodes, entries and problems over one text.
type tree struct {
	doc      *Document
	src      string // the text; scalars without escapes or folds are slices of it
	pos      int    // offset of the next byte to read
	depth    int    // levels of mappings and lists open at pos
	stopped  bool   // reading is given up: too deep, or too many problems; the next search for content finds the end
	problems []Problem
	slab     []Node  // nodes are cut from here, many to an allocation
	entries  []Entry // entries of all open mappings, the innermost last
	items    []*Node // items of all open lists, the innermost last
}

// node makes a node without contents.
func (t *tree) node(kind NodeKind, start, end int) *Node {
	if len(t.slab) == 0 {
		t.slab = make([]Node, min(max(16, len(t.src)/24), 512)) // a value takes about 24 bytes of text
	}
	n := &t.slab[0]
	t.slab = t.slab[1:]
	n.Kind, n.Doc, n.Start, n.End = kind, t.doc, start, end
	return n
}

// null makes the value that is not written: empty, at an offset.
func (t *tree) null(at int) *Node {
	n := t.node(Scalar, at, at)
	n.Type = Null
	return n
}

// report notes a problem with a range of the text.
func (t *tree) report(start, end int, format string, args ...any) *Problem {
	if len(t.problems) >= problemLimit {
		t.stopped = true
		return &Problem{}
	}
	t.problems = append(t.problems, Problem{Rule: syntaxRule, Message: fmt.Sprintf(format, args...), Doc: t.doc, Start: start, End: end})
	return &t.problems[len(t.problems)-1]
}

// enter opens a level that begins at an offset; false means that reading was given up.
func (t *tree) enter(at int) bool {
	t.depth++
	if t.depth > nestingLimit && !t.stopped {
		t.report(at, at+1, "nesting deeper than 1,000 levels is not read")
		t.stopped = true
	}
	return !t.stopped
}

// leave closes a level.
func (t *tree) leave() { t.depth-- }

// keySet finds the keys of one open mapping; small mappings need no index.
type keySet struct {
	first int // of its entries in tree.entries
	index map[string]int
}

const indexFrom = 16 // entries; below it a walk is quicker than a map

// find is the position of a key in tree.entries, -1 if it is new.
func (k *keySet) find(t *tree, key string) int {
	open := t.entries[k.first:]
	if len(open) < indexFrom {
		for i := range open {
			if open[i].Key == key {
				return k.first + i
			}
		}
		return -1
	}
	if k.index == nil {
		k.index = make(map[string]int, 4*indexFrom)
		for i := range open {
			k.index[open[i].Key] = k.first + i
		}
	}
	if i, ok := k.index[key]; ok {
		return i
	}
	return -1
}

// add takes an entry into the open mapping, or reports it when its key is there already.
func (t *tree) add(k *keySet, e Entry) {
	if i := k.find(t, e.Key); i >= 0 {
		first := t.entries[i]
		p := t.report(e.KeyStart, e.KeyEnd, "the key '%s' stands here a second time", shortenText(e.Key))
		p.Pointer = "/" + escapePointer(e.Key)
		p.Related = []Related{{Doc: t.doc, Start: first.KeyStart, End: first.KeyEnd, Message: "first given here"}}
		return
	}
	if k.index != nil {
		k.index[e.Key] = len(t.entries)
	}
	t.entries = append(t.entries, e)
}

// close hands the entries of the open mapping to its node.
func (k *keySet) close(t *tree, n *Node) {
	if open := t.entries[k.first:]; len(open) > 0 {
		n.Entries = append(make([]Entry, 0, len(open)), open...)
	}
	t.entries = t.entries[:k.first]
}

// closeItems hands the items of the open list to its node.
func (t *tree) closeItems(first int, n *Node) {
	if open := t.items[first:]; len(open) > 0 {
		n.Items = append(make([]*Node, 0, len(open)), open...)
	}
	t.items = t.items[:first]
}

// shortenText keeps a text that is quoted in a message to a readable length.
func shortenText(text string) string {
	const most = 40
	n := 0
	for i := range text {
		if n == most {
			return text[:i] + "…"
		}
		n++
	}
	return text
}
