package schema

import (
	"cmp"
	"slices"
	"strings"
)

const (
	sizeLimit     = 4 << 20 // bytes; a design of 5,000 lines has about 0.2 MB
	nestingLimit  = 1000    // levels; the deepest design has about six
	problemLimit  = 50      // after that many syntax problems reading stops: the file is not a spec
	aliasLimit    = 20000   // values that all aliases of a file may stand for together
	syntaxRule    = "spec-syntax"
	sizeMessage   = "the file is larger than the limit of 4 MB"
	emptyMessage  = "the file is empty"
	byteOrderMark = "\ufeff"
)

// Read turns a text into a document. It never fails: what is wrong with bytes and syntax is in Problems, and the tree
// holds what could be read around it. The syntax is strict JSON when name ends in ".json", else YAML 1.2; a name of no
// known kind is taken for a design. The document keeps text, which must not be changed afterwards.
func Read(name string, text []byte, version int32) *Document {
	kind, ok := KindOf(name)
	if !ok {
		kind = Design
	}
	d := &Document{Name: name, Version: version, Text: text, Kind: kind, lines: lineStarts(text)}
	if len(text) > sizeLimit {
		d.Problems = []Problem{{Rule: syntaxRule, Message: sizeMessage, Doc: d}}
		return d
	}
	t := &tree{doc: d, src: string(text)}
	t.pos = bomLength(text)
	if t.bytes() {
		if strings.HasSuffix(name, ".json") {
			d.Root = (&jsonReader{tree: t}).document()
		} else {
			d.Root = newYAMLReader(t).document()
		}
		t.top()
	}
	d.Problems = t.finish()
	return d
}

// top judges the top level: there is one, and it is a mapping.
func (t *tree) top() {
	root := t.doc.Root
	switch {
	case root == nil && len(t.problems) == 0:
		t.report(0, 0, emptyMessage)
	case root != nil && root.Kind != Mapping && len(t.problems) == 0:
		t.report(root.Start, root.End, "a spec file holds keys with values at its top level, and this is a single %s", root.Kind)
	}
}

// finish sorts the problems by place and names the value that each stands in.
func (t *tree) finish() []Problem {
	slices.SortStableFunc(t.problems, func(a, b Problem) int {
		return cmp.Or(cmp.Compare(a.Start, b.Start), cmp.Compare(a.End, b.End))
	})
	for i := range t.problems {
		p := &t.problems[i]
		at, _ := t.doc.PointerAt(p.Start)
		p.Pointer = at + p.Pointer // a dropped duplicate brings its own last step
		for j := range p.Related {
			p.Related[j].Pointer, _ = t.doc.PointerAt(p.Related[j].Start)
		}
	}
	return t.problems
}
