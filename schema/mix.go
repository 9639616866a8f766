package schema

import (
	"maps"
	"strings"
)

// With is the spec with the values at some JSON pointers taken from another spec: replaced, added where this one has none, and left out
// where the other has none. Neither spec changes. What comes out is not validated again: the values are valid each by itself.
func (s *Spec) With(other *Spec, pointers ...string) *Spec {
	root := s.Root
	for _, pointer := range pointers {
		value, _ := other.Root.walk(pointer)
		root = grafted(root, strings.Split(strings.TrimPrefix(pointer, "/"), "/"), value)
	}
	sources := maps.Clone(s.sources)
	maps.Copy(sources, other.sources)
	return newSpec(s.Document, sources, root, fieldOf(Design))
}

// grafted is a copy of a mapping with the value below some keys in place; nil takes the key out.
func grafted(n *Node, keys []string, value *Node) *Node {
	copied := Node{Kind: Mapping}
	if n != nil {
		copied = *n
	}
	key := unescapePointer(keys[0])
	copied.Entries = make([]Entry, 0, len(copied.Entries)+1)
	found := false
	if n != nil {
		for _, e := range n.Entries {
			if e.Key == key {
				found = true
				if e.Value = below(e.Value, keys[1:], value); e.Value == nil {
					continue
				}
			}
			copied.Entries = append(copied.Entries, e)
		}
	}
	if !found {
		if fresh := below(nil, keys[1:], value); fresh != nil {
			copied.Entries = append(copied.Entries, Entry{Key: key, KeyDoc: fresh.Doc, Value: fresh})
		}
	}
	return &copied
}

func below(n *Node, keys []string, value *Node) *Node {
	if len(keys) == 0 {
		return value
	}
	if n == nil && value == nil {
		return nil
	}
	return grafted(n, keys, value)
}
