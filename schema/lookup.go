package schema

import (
	"slices"
	"strings"
)

// FieldInfo is what the schema says about one place of a spec file, for hover and completion.
type FieldInfo struct {
	Pointer, Title, Description string
	Dimension                   Dimension // 0: no quantity
	Default                     string    // as it would be written in YAML, "" if there is none
	Examples                    []string  // likewise
	Names                       []string  // the texts that are allowed, when only some are
	Keys                        []string  // the keys of a mapping, in the schema's order
	Required                    bool      // whatever the other fields say
}

// LookupField finds the field at a JSON pointer. List indices match any item, and a part's free name matches any part.
func LookupField(k Kind, pointer string) (FieldInfo, bool) {
	if pointer != "" && pointer[0] != '/' {
		return FieldInfo{}, false
	}
	f := fieldOf(k).at(pointer)
	if f == nil {
		return FieldInfo{}, false
	}
	info := FieldInfo{
		Pointer:     pointer,
		Title:       f.first(func(g *field) string { return g.title }),
		Description: f.first(func(g *field) string { return g.description }),
		Default:     f.first(func(g *field) string { return flow(g.fallback) }),
		Names:       f.names(),
		Keys:        f.keys(),
	}
	info.Dimension, _ = dimensionNamed(f.first(func(g *field) string { return g.dimension }))
	f.each(func(g *field) bool {
		for _, e := range g.examples {
			info.Examples = append(info.Examples, flow(e))
		}
		return len(g.examples) > 0
	})
	info.Required = requiredAt(k, pointer)
	if info.Dimension == 0 {
		info.inherit(k)
	}
	return info, true
}

// inherit gives the ends of a range, and the value of a long form, the dimension of the quantity that they belong to.
func (i *FieldInfo) inherit(k Kind) {
	cut := strings.LastIndexByte(i.Pointer, '/')
	if cut < 0 || i.Pointer[cut:] == "/tolerance" {
		return
	}
	if q, ok := fieldOf(k).at(i.Pointer[:cut]).quantity(); ok && i.Pointer[cut:] != "/frequency" && i.Pointer[cut:] != "/quality" {
		i.Dimension = q.dim
		i.Examples = []string{q.dim.facts().typed}
	}
}

// requiredAt tells whether the mapping above the pointer always needs its key.
func requiredAt(k Kind, pointer string) bool {
	cut := strings.LastIndexByte(pointer, '/')
	if cut < 0 {
		return false
	}
	key, required := unescapePointer(pointer[cut+1:]), false
	fieldOf(k).at(pointer[:cut]).each(func(g *field) bool {
		required = required || slices.Contains(g.required, key)
		return required
	})
	return required
}

// flow writes a value of a schema as YAML flow style writes it: plain texts without quotes.
func flow(n *Node) string {
	var parts []string
	switch {
	case n == nil:
		return ""
	case n.Kind == Mapping:
		for _, e := range n.Entries {
			parts = append(parts, e.Key+": "+flow(e.Value))
		}
		return "{" + strings.Join(parts, ", ") + "}"
	case n.Kind == Sequence:
		for _, item := range n.Items {
			parts = append(parts, flow(item))
		}
		return "[" + strings.Join(parts, ", ") + "]"
	case n.Type == Text && needsQuotes(n.Value):
		return `"` + n.Value + `"`
	}
	return n.Value
}

// needsQuotes tells a text that YAML would read as something else in flow style.
func needsQuotes(text string) bool {
	return text == "" || strings.ContainsAny(text, "#,[]{}\"") || strings.ContainsAny(text[:1], "*&!|>'%@`-?: ") || strings.Contains(text, ": ")
}
