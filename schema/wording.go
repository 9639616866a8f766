package schema

import (
	"fmt"
	"strconv"
	"strings"
)

// site is a place of the validated tree with all that a message about it needs.
type site struct {
	node    *Node
	entry   *Entry // nil for the root and items of lists
	parent  *Node
	pointer string // as the file has it, misspelt keys included
	field   *field
	above   *site
	step    string
}

// find follows a pointer of the validated tree as far as it goes; nil if it leads nowhere.
func (v *validation) find(pointer string) *site {
	s := &site{node: v.root, field: v.field}
	for pointer != "" {
		step, rest, more := strings.Cut(pointer[1:], "/")
		pointer = ""
		if more {
			pointer = "/" + rest
		}
		step = unescapePointer(step)
		node, entry := v.step(s.node, step)
		if node == nil {
			return nil
		}
		next := &site{node: node, entry: entry, parent: s.node, field: childField(s.field, step), above: s, step: step, pointer: s.pointer + "/" + step}
		if entry != nil {
			next.pointer = s.pointer + "/" + escapePointer(v.keyAsWritten(entry))
		}
		s = next
	}
	return s
}

// crowd is the number of keys above which a mapping is searched by a table, and above which its unknown keys are not
// compared with the known ones: no spec has such a mapping but a library of parts.
const crowd = 100

// step goes one level down.
func (v *validation) step(n *Node, name string) (*Node, *Entry) {
	if len(n.Entries) < crowd {
		return n.step(name)
	}
	table, ok := v.tables[n]
	if !ok {
		table = make(map[string]*Entry, len(n.Entries))
		for i := range n.Entries {
			table[n.Entries[i].Key] = &n.Entries[i]
		}
		v.tables[n] = table
	}
	if e := table[name]; e != nil {
		return e.Value, e
	}
	return nil, nil
}

// name is what a message calls the place: its key, "item 2 of zeros", "min of input-voltage".
func (s *site) name() string {
	switch {
	case s.above == nil:
		return "the file"
	case s.entry == nil:
		index, _ := strconv.Atoi(s.step)
		return fmt.Sprintf("item %d of %s", index+1, s.above.name())
	}
	return printable(s.step)
}

// word reports one leaf.
func (v *validation) word(l leaf) {
	s := v.find(l.at)
	if s == nil || v.inSpent(s) {
		return
	}
	if i, ok := unpackIssue(l.message); ok {
		v.wordQuantity(s, i)
		return
	}
	switch l.keyword {
	case "required":
		for _, key := range quoted(l.message) {
			v.missing(s, key, "")
		}
	case "dependentRequired":
		astray := !v.resolved[s.node] && (s.node.Get("use") != nil || s.node.Get("part") != nil) // what it brings is not known
		if names := quoted(l.message); len(names) > 0 && !astray && !v.spent[s.node.Get(l.below)] {
			v.missing(s, names[0], fmt.Sprintf(" beside '%s'", l.below))
		}
	case "anyOf":
		v.atKey(s, "anyOf", fmt.Sprintf("%s needs at least one of 'gain', 'integrator', 'zeros' and 'poles'", owner(s)))
	case "additionalProperties":
		for i := range s.node.Entries {
			if e := &s.node.Entries[i]; s.field.child(e.Key) == nil {
				v.unknown(s, e)
			}
		}
	case "unused": // reported by unused
	default:
		v.onValue(s, shapeRule, v.wrongValue(s, l))
	}
}

// inSpent tells whether the place lies in a value whose key is not used.
func (v *validation) inSpent(s *site) bool {
	for ; s != nil; s = s.above {
		if v.spent[s.node] {
			return true
		}
	}
	return false
}

// wordQuantity reports what is wrong with a quantity, at the value that is wrong.
func (v *validation) wordQuantity(s *site, i issue) {
	inner := s
	if i.path != "" {
		if at := v.find(s.path() + i.path); at != nil {
			inner = at
		}
	}
	name := inner.name()
	if inner != s && inner.entry != nil {
		name += " of " + s.name()
	}
	text := name + " " + i.text
	if strings.HasPrefix(i.text, ":") {
		text = name + i.text
	}
	switch i.kind {
	case wrongAmount:
		v.onValue(inner, quantityRule, text)
	case wrongShape:
		v.onValue(inner, shapeRule, text)
	case missingKey:
		v.missing(inner, i.text, "")
	case unknownKey:
		if e := inner.node.Entry(i.text); e != nil {
			v.unknown(inner, e)
		}
	}
}

// path is the pointer in the validated tree.
func (s *site) path() string {
	if s.above == nil {
		return ""
	}
	return s.above.path() + "/" + escapePointer(s.step)
}

// onValue reports a problem with a value, one of each rule for one value.
func (v *validation) onValue(s *site, rule, message string) {
	p := Problem{Rule: rule, Message: message, Pointer: s.pointer}
	v.place(&p, s.node)
	v.report(p, fmt.Sprint("value", s.node.Start))
}

// unknown reports a key that the schema has not, with the nearest that it has.
func (v *validation) unknown(s *site, e *Entry) {
	message := fmt.Sprintf("unknown key '%s'%s", shown(e.Key), within(s))
	if len(s.node.Entries) < crowd {
		if near := Nearest(e.Key, s.field.keys()); near != "" {
			message += fmt.Sprintf(": did you mean '%s'?", near)
		}
	}
	v.onKey(s, e, message)
}

// onKey reports a problem with the key of an entry of the mapping at s.
func (v *validation) onKey(s *site, e *Entry, message string) {
	p := Problem{Rule: shapeRule, Message: message, Pointer: s.pointer + "/" + escapePointer(v.keyAsWritten(e))}
	if e.Value.Via != nil {
		v.place(&p, e.Value)
		if n := len(p.Related) - 1; n >= 0 {
			p.Related[n].Doc, p.Related[n].Start, p.Related[n].End = e.KeyDoc, e.KeyStart, e.KeyEnd
		}
	} else {
		p.Doc, p.Start, p.End = e.KeyDoc, e.KeyStart, e.KeyEnd
	}
	v.report(p, fmt.Sprint("key", e.KeyStart))
}

// missing reports that the mapping at s needs a key, at the mapping's own key.
func (v *validation) missing(s *site, key, because string) {
	message := fmt.Sprintf("%s needs '%s'%s", owner(s), key, because)
	if s.above == nil {
		message = fmt.Sprintf("'%s' is missing", key)
		if s.node.Via == nil && v.doc.Kind == Design {
			message += ": " + v.whyNeeded(key)
		}
		message = strings.TrimSuffix(message, ": ")
	}
	v.atKey(s, "missing "+key, message)
}

// whyNeeded says why a design needs a key that not every design needs.
func (v *validation) whyNeeded(key string) string {
	switch key {
	case "turns", "second-inductor", "coupling-capacitor":
		return fmt.Sprintf("topology '%s' needs it", v.textAt("topology"))
	case "output-capacitor":
		return "write 'output-capacitor', or 'output-capacitors' for several banks"
	}
	return ""
}

// textAt is a text of the design's top level, or of one of its mappings.
func (v *validation) textAt(keys ...string) string {
	n := v.root
	for _, k := range keys {
		n = n.Get(k)
	}
	if n == nil || n.Kind != Scalar {
		return ""
	}
	return shown(n.Value)
}

// atKey reports a problem with the contents of the mapping at s: at its key; for the top level and for items of a list,
// which have none, at their first key.
func (v *validation) atKey(s *site, identity, message string) {
	p := Problem{Rule: shapeRule, Message: message, Pointer: s.pointer}
	switch {
	case s.node.Via != nil && (s.entry == nil || s.entry.Value.Via != nil):
		v.place(&p, s.node)
	case s.entry != nil:
		p.Doc, p.Start, p.End = s.entry.KeyDoc, s.entry.KeyStart, s.entry.KeyEnd
	case len(s.node.Entries) > 0:
		e := s.node.Entries[0]
		p.Doc, p.Start, p.End = e.KeyDoc, e.KeyStart, e.KeyEnd
	default:
		p.Doc, p.Start, p.End = s.node.Doc, s.node.Start, s.node.End
	}
	v.report(p, identity)
}

// quoted are the names that a message of the validator holds in single quotes.
func quoted(message string) []string {
	var names []string
	for i, part := range strings.Split(message, "'") {
		if i%2 == 1 {
			names = append(names, part)
		}
	}
	return names
}
