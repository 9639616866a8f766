package schema

import "strings"

// yamlAnchor is a value that aliases may stand for.
type yamlAnchor struct {
	node   *Node // nil while the value is being read
	size   int   // values in it, aliases expanded; 0 until first used
	height int   // levels in it
}

// yamlProperties are what may stand before a value: a name for aliases and a type.
type yamlProperties struct {
	anchor           *yamlAnchor
	tag              string
	tagStart, tagEnd int
}

// property reads one of them at pos.
func (r *yamlReader) property(p *yamlProperties) {
	start := r.pos
	name := r.word()
	if name[0] == '!' {
		if p.tag != "" {
			r.report(start, r.pos, "a value has one tag, and this is its second")
		}
		p.tag, p.tagStart, p.tagEnd = name, start, r.pos
		return
	}
	if len(name) == 1 {
		r.report(start, r.pos, "a name has to follow '&'")
		return
	}
	if p.anchor != nil {
		r.report(start, r.pos, "a value has one name for aliases, and this is its second")
	}
	if r.anchors == nil {
		r.anchors = make(map[string]*yamlAnchor)
	}
	p.anchor = &yamlAnchor{}
	r.anchors[name[1:]] = p.anchor
}

// word reads up to a blank, or inside brackets a sign; at least one byte.
func (r *yamlReader) word() string {
	start := r.pos
	for r.pos++; !r.blankAt(r.pos) && !isFlowSign(r.src[r.pos]); r.pos++ {
	}
	return r.src[start:r.pos]
}

// apply gives a value its properties.
func (r *yamlReader) apply(p *yamlProperties, n *Node) *Node {
	if n.Alias != nil && (p.tag != "" || p.anchor != nil) {
		r.report(n.Start, n.End, "an alias takes no tag and no name of its own")
		return n
	}
	if p.tag != "" {
		r.tag(p, n)
	}
	if p.anchor != nil {
		p.anchor.node = n
	}
	return n
}

// tag turns a value into the type that a tag of the core schema names.
func (r *yamlReader) tag(p *yamlProperties, n *Node) {
	name := strings.TrimSuffix(strings.Replace(p.tag, "!<tag:yaml.org,2002:", "!!", 1), ">")
	source := Node{Value: n.Value}
	resolveCore(&source)
	ok := n.Kind == Scalar && n.Alias == nil
	switch name {
	case "!!str", "!":
		if ok {
			n.Type, n.Number = Text, 0
		}
	case "!!int", "!!float":
		ok = ok && source.Type == Number
	case "!!bool":
		ok = ok && source.Type == Bool
	case "!!null":
		ok = ok && source.Type == Null
	case "!!map":
		ok = n.Kind == Mapping
	case "!!seq":
		ok = n.Kind == Sequence
	default:
		r.report(p.tagStart, p.tagEnd, "the tag '%s' means nothing in a spec file", shortenText(p.tag))
		return
	}
	switch {
	case !ok:
		r.report(p.tagStart, p.tagEnd, "the tag '%s' does not fit its value", p.tag)
	case name != "!!str" && name != "!" && n.Kind == Scalar:
		n.Type, n.Number = source.Type, source.Number
	}
}

// alias reads *name: the value of the anchor with its own range.
func (r *yamlReader) alias() *Node {
	start := r.pos
	name := r.word()[1:]
	a := r.anchors[name]
	switch {
	case a == nil:
		r.report(start, r.pos, "no value before this is named '&%s'", shortenText(name))
	case a.node == nil:
		r.report(start, r.pos, "the alias '*%s' stands inside the value that it names", shortenText(name))
	case r.expand(a, start):
		n := r.node(a.node.Kind, start, r.pos)
		to := *a.node
		to.Start, to.End, to.Alias = start, r.pos, a.node
		*n = to
		return n
	}
	n := r.null(start)
	n.End = r.pos
	return n
}

// expand counts what an alias stands for, and refuses when it is too much: a few lines of aliases to aliases could
// stand for more values than any memory holds.
func (r *yamlReader) expand(a *yamlAnchor, start int) bool {
	if a.size == 0 {
		a.size, a.height = measureNode(a.node, aliasLimit+1)
	}
	switch {
	case r.aliased > aliasLimit:
		return false
	case r.aliased+a.size > aliasLimit:
		r.report(start, r.pos, "the aliases of this file stand for more than 20,000 values")
		r.aliased = aliasLimit + 1
		return false
	case r.depth+a.height > nestingLimit:
		r.report(start, r.pos, "nesting deeper than 1,000 levels is not read")
		return false
	}
	r.aliased += a.size
	return true
}

// measureNode counts the values in n up to a limit, and its levels.
func measureNode(n *Node, limit int) (size, height int) {
	size = 1
	count := func(child *Node) {
		if size < limit {
			s, h := measureNode(child, limit-size)
			size += s
			height = max(height, h+1)
		}
	}
	for i := range n.Entries {
		count(n.Entries[i].Value)
	}
	for _, item := range n.Items {
		count(item)
	}
	return size, height
}

// merge replaces a merge key of the open mapping by the entries of the mappings that it names, less those that are
// written here. The order of the others stays.
func (r *yamlReader) merge(keys *keySet) {
	i := -1
	for j := keys.first; j < len(r.entries); j++ {
		if e := &r.entries[j]; e.Key == "<<" && r.src[e.KeyStart] == '<' && !e.Merged {
			i = j
		}
	}
	if i < 0 {
		return
	}
	e := r.entries[i]
	r.entries = append(r.entries[:i], r.entries[i+1:]...)
	keys.index = nil
	from := []*Node{e.Value}
	if e.Value.Kind == Sequence {
		from = e.Value.Items
	}
	for _, m := range from {
		if m.Kind != Mapping {
			r.report(m.Start, m.End, "the merge key '<<' takes a mapping, and this is a %s", m.Kind)
			continue
		}
		for _, entry := range m.Entries {
			if keys.find(r.tree, entry.Key) < 0 {
				entry.Merged = true
				if keys.index != nil {
					keys.index[entry.Key] = len(r.entries)
				}
				r.entries = append(r.entries, entry)
			}
		}
	}
}
