package schema

import (
	"strconv"
	"strings"
)

// Get is the value of a key of a mapping, nil if there is none or n is no mapping.
func (n *Node) Get(key string) *Node {
	if e := n.Entry(key); e != nil {
		return e.Value
	}
	return nil
}

// Entry is the entry of a key of a mapping, nil if there is none or n is no mapping.
func (n *Node) Entry(key string) *Entry {
	if n == nil {
		return nil
	}
	for i := range n.Entries {
		if n.Entries[i].Key == key {
			return &n.Entries[i]
		}
	}
	return nil
}

// Find is the value at a JSON pointer (RFC 6901), nil if there is none. The empty pointer is the whole document.
func (d *Document) Find(pointer string) *Node {
	n, _ := d.Root.walk(pointer)
	return n
}

// FindEntry is the entry whose value stands at a JSON pointer: it has the key's range. It is nil where Find is, and for
// the root and the items of a list, which have no key.
func (d *Document) FindEntry(pointer string) *Entry {
	_, e := d.Root.walk(pointer)
	return e
}

// walk follows a pointer from n and returns the value and, when the last step was a key, its entry.
func (n *Node) walk(pointer string) (*Node, *Entry) {
	var last *Entry
	for pointer != "" && n != nil {
		if pointer[0] != '/' {
			return nil, nil
		}
		step := pointer[1:]
		if i := strings.IndexByte(step, '/'); i >= 0 {
			step = step[:i]
		}
		pointer = pointer[1+len(step):]
		n, last = n.step(unescapePointer(step))
	}
	return n, last
}

// step goes one level down.
func (n *Node) step(name string) (*Node, *Entry) {
	if n.Kind == Sequence {
		if i, ok := itemIndex(name); ok && i < len(n.Items) {
			return n.Items[i], nil
		}
		return nil, nil
	}
	if e := n.Entry(name); e != nil {
		return e.Value, e
	}
	return nil, nil
}

// itemIndex reads an index as RFC 6901 section 4 writes it: digits without a leading zero.
func itemIndex(step string) (int, bool) {
	if step == "" || len(step) > 9 || step[0] == '0' && len(step) > 1 {
		return 0, false
	}
	for i := range len(step) {
		if step[i] < '0' || step[i] > '9' {
			return 0, false
		}
	}
	i, err := strconv.Atoi(step)
	return i, err == nil
}

// escapePointer writes a key as a step of a JSON pointer.
func escapePointer(key string) string {
	if !strings.ContainsAny(key, "~/") {
		return key
	}
	return strings.ReplaceAll(strings.ReplaceAll(key, "~", "~0"), "/", "~1")
}

// unescapePointer is the key that a step of a JSON pointer names.
func unescapePointer(step string) string {
	if !strings.Contains(step, "~") {
		return step
	}
	return strings.ReplaceAll(strings.ReplaceAll(step, "~1", "/"), "~0", "~")
}

// PointerAt is the innermost value at an offset, as a JSON pointer; onKey tells that the offset is in its key. Between a
// key and its value it is that entry's, right behind a text it is still that text's, elsewhere in a mapping or list it
// is the mapping's or list's. What stands behind an alias or a merge key is not at this offset and is left out.
func (d *Document) PointerAt(offset int) (pointer string, onKey bool) {
	var path strings.Builder
	for n := d.Root; n != nil && n.Alias == nil; {
		step, next, key := n.childAt(offset)
		if step == "" {
			break
		}
		path.WriteString(step)
		if key {
			return path.String(), true
		}
		n = next
	}
	return path.String(), false
}

// childAt is the child of n at an offset: its step with the slash, empty if there is none.
func (n *Node) childAt(offset int) (step string, child *Node, onKey bool) {
	for i := range n.Entries {
		e := &n.Entries[i]
		if !e.Merged && e.KeyStart <= offset && offset <= max(e.KeyEnd, e.Value.End) {
			return "/" + escapePointer(e.Key), e.Value, offset <= e.KeyEnd
		}
	}
	for i, item := range n.Items {
		if item.Start <= offset && offset <= item.End {
			return "/" + strconv.Itoa(i), item, false
		}
	}
	return "", nil, false
}
