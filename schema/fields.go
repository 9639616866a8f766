package schema

import (
	"embed"
	"fmt"
	"strconv"
	"strings"
	"sync"
)

//go:embed schemas/*.json
var schemaFiles embed.FS

// field is one place of a spec file as its JSON Schema describes it. It is what validation words its messages from, and
// what hover and completion show: there is no second list of fields.
type field struct {
	never bool   // the schema "false": the key is not allowed
	root  *field // of the schema file that it stands in

	ref, title, description string
	fallback                *Node   // "default"
	examples                []*Node // likewise as they stand in the schema

	dimension, sign, because string
	most                     float64
	window, scalar           bool

	types     []string
	enum      []string
	constant  *Node
	required  []string
	order     []string // of properties
	named     map[string]*field
	others    *field // additionalProperties
	items     *field
	prefix    []*field
	then      *field
	otherwise *field // else
	defs      map[string]*field
}

const commonID = "urn:halfplane:schema:common"

// schemaText is one embedded schema file.
func schemaText(name string) []byte {
	text, err := schemaFiles.ReadFile("schemas/" + name + ".json")
	if err != nil {
		panic(fmt.Sprintf("reading the embedded schema %s: %v", name, err)) // the program was built wrong
	}
	return text
}

// schemaTree is an embedded schema file as a tree, in the order of its text.
func schemaTree(name string) *Node {
	doc := Read(name+".json", schemaText(name), 0)
	if len(doc.Problems) > 0 {
		panic(fmt.Sprintf("reading the embedded schema %s: %s", name, doc.Problems[0].Message)) // a test reads them all
	}
	return doc.Root
}

// loadField reads one schema file.
func loadField(name string) *field {
	root := new(field)
	root.fill(schemaTree(name), root)
	return root
}

// fieldFrom makes a field of a schema, nil of no schema.
func fieldFrom(n *Node, root *field) *field {
	if n == nil {
		return nil
	}
	f := new(field)
	f.fill(n, root)
	return f
}

func (f *field) fill(n *Node, root *field) {
	f.root = root
	if n.Kind == Scalar {
		f.never = n.Type == Bool && n.Value == "false"
		return
	}
	f.ref, f.title, f.description = textOf(n.Get("$ref")), textOf(n.Get("title")), textOf(n.Get("description"))
	f.fallback, f.constant = n.Get("default"), n.Get("const")
	if e := n.Get("examples"); e != nil {
		f.examples = e.Items
	}
	f.dimension, f.sign, f.because = textOf(n.Get("dimension")), textOf(n.Get("sign")), textOf(n.Get("because"))
	if most := n.Get("most"); most != nil {
		f.most = most.Number
	}
	f.window, f.scalar = textOf(n.Get("window")) == "true", textOf(n.Get("scalar")) == "true"
	f.types, f.enum, f.required = textsOf(n.Get("type")), textsOf(n.Get("enum")), textsOf(n.Get("required"))
	f.order, f.named = fieldsFrom(n.Get("properties"), root)
	_, f.defs = fieldsFrom(n.Get("$defs"), root)
	f.others, f.items = fieldFrom(n.Get("additionalProperties"), root), fieldFrom(n.Get("items"), root)
	f.then, f.otherwise = fieldFrom(n.Get("then"), root), fieldFrom(n.Get("else"), root)
	if p := n.Get("prefixItems"); p != nil {
		for _, item := range p.Items {
			f.prefix = append(f.prefix, fieldFrom(item, root))
		}
	}
}

// fieldsFrom reads a mapping of schemas and the order of its keys.
func fieldsFrom(n *Node, root *field) ([]string, map[string]*field) {
	if n == nil {
		return nil, nil
	}
	order, named := make([]string, len(n.Entries)), make(map[string]*field, len(n.Entries))
	for i, e := range n.Entries {
		order[i], named[e.Key] = e.Key, fieldFrom(e.Value, root)
	}
	return order, named
}

func textOf(n *Node) string {
	if n == nil {
		return ""
	}
	return n.Value
}

// textsOf are the texts of a list, or the one text that stands in place of a list.
func textsOf(n *Node) []string {
	if n == nil {
		return nil
	}
	if n.Kind == Scalar {
		return []string{n.Value}
	}
	texts := make([]string, len(n.Items))
	for i, item := range n.Items {
		texts[i] = item.Value
	}
	return texts
}

var (
	commonField = sync.OnceValue(func() *field { return loadField("common") })
	kindFields  = map[Kind]func() *field{
		Design:      sync.OnceValue(func() *field { return loadField("design") }),
		Compensator: sync.OnceValue(func() *field { return loadField("compensator") }),
		Parts:       sync.OnceValue(func() *field { return loadField("parts") }),
		Policy:      sync.OnceValue(func() *field { return loadField("policy") }),
	}
)

// fieldOf is the top level of the kind's schema; a document of no known kind is taken for a design.
func fieldOf(k Kind) *field {
	if f, ok := kindFields[k]; ok {
		return f()
	}
	return kindFields[Design]()
}

// target is the field that f refers to with $ref, nil if it has none.
func (f *field) target() *field {
	if f.ref == "" {
		return nil
	}
	id, path, _ := strings.Cut(f.ref, "#")
	at := f.root
	if id == commonID {
		at = commonField()
	}
	for _, step := range strings.Split(strings.TrimPrefix(path, "/"), "/") {
		if step == "" || step == "$defs" {
			continue
		}
		if at = at.defs[step]; at == nil {
			panic("the embedded schema refers to nothing: " + f.ref) // a test follows every reference
		}
	}
	return at
}

// each calls visit with f, what it refers to, and both branches of its conditions, until visit says that it is done.
func (f *field) each(visit func(*field) bool) bool {
	if f == nil || f.never {
		return false
	}
	return visit(f) || f.target().each(visit) || f.then.each(visit) || f.otherwise.each(visit)
}

// child is the field of a key of the mapping, or of an item of the list, that f describes; nil if it has none.
func (f *field) child(step string) *field {
	var found *field
	hidden := false
	f.each(func(g *field) bool {
		if c, ok := g.named[step]; ok {
			if !c.never {
				found = c
			}
			hidden = c.never
			return true
		}
		return false
	})
	if found != nil || hidden {
		return found
	}
	index, isIndex := itemIndex(step)
	f.each(func(g *field) bool {
		switch {
		case isIndex && index < len(g.prefix):
			found = g.prefix[index]
		case isIndex && g.items != nil:
			found = g.items
		case g.others != nil && !g.others.never:
			found = g.others
		}
		return found != nil
	})
	return found
}

// keys are the names of all keys that the mapping may have, in the order of the schema.
func (f *field) keys() []string {
	var keys []string
	seen := map[string]bool{}
	f.each(func(g *field) bool {
		for _, k := range g.order {
			if !seen[k] && !g.named[k].never {
				keys = append(keys, k)
			}
			seen[k] = true
		}
		return false
	})
	return keys
}

// first returns the first text that pick finds in f and what it refers to.
func (f *field) first(pick func(*field) string) string {
	var found string
	f.each(func(g *field) bool {
		found = pick(g)
		return found != ""
	})
	return found
}

// open tells a mapping whose keys are free names, as the parts of a library.
func (f *field) open() bool { return f.others != nil && !f.others.never }

// at is the field at a JSON pointer below f, nil if the schema has none.
func (f *field) at(pointer string) *field {
	for f != nil && pointer != "" {
		step, rest, more := strings.Cut(pointer[1:], "/")
		f = f.child(unescapePointer(step))
		pointer = ""
		if more {
			pointer = "/" + rest
		}
	}
	return f
}

// names are the texts that the field may have: of an enumeration, or true and false.
func (f *field) names() []string {
	var names []string
	f.each(func(g *field) bool {
		names = append(names, g.enum...)
		if g.constant != nil && g.constant.Type == Text {
			names = append(names, g.constant.Value)
		}
		if len(g.types) == 1 && g.types[0] == "boolean" {
			names = append(names, strconv.FormatBool(true), strconv.FormatBool(false))
		}
		return false
	})
	return names
}
