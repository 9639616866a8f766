package schema

import (
	"strconv"
)

// source is where a value that `use` or `part` brought in comes from.
type source struct {
	reference string // pointer of the reference in the design: "/compensator/use"
	base      string // pointer in the design of what it fills: "/compensator"
	doc       *Document
	inShared  string // pointer of the same thing in the shared file: "" or "/parts/drum-22u"
}

// grower copies a document's tree into the one that is validated: keys one edit away from a known one are spelt right,
// and `use` and `part` are followed.
type grower struct {
	doc       *Document
	resolver  Resolver
	problems  []Problem
	misspelt  map[spot]string  // the key as it was written, by the place of the key
	sources   map[*Node]source // by the reference node that Via points to
	resolved  map[*Node]bool   // mappings whose reference was followed
	libraries []*Document
	blind     bool // a library could not be read, so an unknown part is no surprise
}

// spot is the place of a key.
type spot struct {
	doc   *Document
	start int
}

func newGrower(doc *Document, r Resolver) *grower {
	return &grower{doc: doc, resolver: r, misspelt: map[spot]string{}, sources: map[*Node]source{}, resolved: map[*Node]bool{}}
}

// grow copies n, which stands at pointer in the document and is described by f (nil: unknown, copied as it is). via is the
// reference that brought it in, nil in the design itself.
func (g *grower) grow(n *Node, f *field, via *Node, pointer string) *Node {
	if n.Kind == Scalar && via == nil {
		return n
	}
	c := *n
	if via != nil {
		c.Via = via
	}
	c.Items = make([]*Node, len(n.Items))
	for i, item := range n.Items {
		step := strconv.Itoa(i)
		c.Items[i] = g.grow(item, childField(f, step), via, pointer+"/"+step)
	}
	c.Entries = make([]Entry, len(n.Entries))
	copy(c.Entries, n.Entries)
	if f != nil && n.Kind == Mapping {
		g.spell(&c, f)
	}
	for i := range c.Entries {
		e := &c.Entries[i]
		e.Value = g.grow(e.Value, childField(f, e.Key), via, pointer+"/"+escapePointer(n.Entries[i].Key))
	}
	return &c
}

func childField(f *field, step string) *field {
	if f == nil {
		return nil
	}
	return f.child(step)
}

// spell gives keys that are one edit away from a known key that is not there the right spelling, and notes how they
// were written.
func (g *grower) spell(n *Node, f *field) {
	if f.open() || len(n.Entries) > crowd {
		return
	}
	for i := range n.Entries {
		e := &n.Entries[i]
		if f.child(e.Key) != nil {
			continue
		}
		if right := oneEditAway(e.Key, f.keys()); right != "" && n.Entry(right) == nil {
			g.misspelt[spot{e.KeyDoc, e.KeyStart}] = e.Key
			e.Key = right
		}
	}
}

// written is the key of an entry as it stands in the file.
func (g *grower) keyAsWritten(e *Entry) string {
	if k, ok := g.misspelt[spot{e.KeyDoc, e.KeyStart}]; ok {
		return k
	}
	return e.Key
}

func containsText(list []string, text string) bool {
	for _, t := range list {
		if t == text {
			return true
		}
	}
	return false
}
