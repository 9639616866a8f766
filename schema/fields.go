package schema

import (
	"bytes"
	"embed"
	"encoding/json"
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

	ID          string            `json:"$id"`
	Ref         string            `json:"$ref"`
	Title       string            `json:"title"`
	Description string            `json:"description"`
	Default     json.RawMessage   `json:"default"`
	Examples    []json.RawMessage `json:"examples"`

	Dimension string  `json:"dimension"`
	Sign      string  `json:"sign"`
	Because   string  `json:"because"`
	Most      float64 `json:"most"`
	Window    bool    `json:"window"`
	Scalar    bool    `json:"scalar"`

	Type     oneOrMore         `json:"type"`
	Enum     []string          `json:"enum"`
	Const    json.RawMessage   `json:"const"`
	Required []string          `json:"required"`
	Keys     properties        `json:"properties"`
	Others   *field            `json:"additionalProperties"`
	Items    *field            `json:"items"`
	Prefix   []*field          `json:"prefixItems"`
	Then     *field            `json:"then"`
	Else     *field            `json:"else"`
	Defs     map[string]*field `json:"$defs"`
}

// properties are the keys of a mapping in the order of the schema file.
type properties struct {
	order []string
	named map[string]*field
}

// oneOrMore is a JSON Schema "type": one name or several.
type oneOrMore []string

func (o *oneOrMore) UnmarshalJSON(text []byte) error {
	if text[0] == '"' {
		*o = make(oneOrMore, 1)
		return json.Unmarshal(text, &(*o)[0])
	}
	return json.Unmarshal(text, (*[]string)(o))
}

func (f *field) UnmarshalJSON(text []byte) error {
	switch text[0] {
	case 't':
		return nil
	case 'f':
		f.never = true
		return nil
	}
	type plain field
	return json.Unmarshal(text, (*plain)(f))
}

func (p *properties) UnmarshalJSON(text []byte) error {
	if err := json.Unmarshal(text, &p.named); err != nil {
		return err
	}
	d := json.NewDecoder(bytes.NewReader(text))
	if _, err := d.Token(); err != nil {
		return err
	}
	for d.More() {
		key, err := d.Token()
		if err != nil {
			return err
		}
		p.order = append(p.order, key.(string))
		var skipped json.RawMessage
		if err := d.Decode(&skipped); err != nil {
			return err
		}
	}
	return nil
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

// loadField reads one schema file and ties every place in it to its root.
func loadField(name string) *field {
	f := new(field)
	if err := json.Unmarshal(schemaText(name), f); err != nil {
		panic(fmt.Sprintf("reading the embedded schema %s: %v", name, err)) // a test reads them all
	}
	f.tie(f)
	return f
}

func (f *field) tie(root *field) {
	if f == nil || f.root != nil {
		return
	}
	f.root = root
	for _, c := range f.Keys.named {
		c.tie(root)
	}
	for _, c := range f.Defs {
		c.tie(root)
	}
	for _, c := range f.Prefix {
		c.tie(root)
	}
	for _, c := range []*field{f.Others, f.Items, f.Then, f.Else} {
		c.tie(root)
	}
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
	if f.Ref == "" {
		return nil
	}
	id, path, _ := strings.Cut(f.Ref, "#")
	at := f.root
	if id == commonID {
		at = commonField()
	}
	for _, step := range strings.Split(strings.TrimPrefix(path, "/"), "/") {
		if step == "" || step == "$defs" {
			continue
		}
		if at = at.Defs[step]; at == nil {
			panic("the embedded schema refers to nothing: " + f.Ref) // a test follows every reference
		}
	}
	return at
}

// each calls visit with f, what it refers to, and both branches of its conditions, until visit says that it is done.
func (f *field) each(visit func(*field) bool) bool {
	if f == nil || f.never {
		return false
	}
	return visit(f) || f.target().each(visit) || f.Then.each(visit) || f.Else.each(visit)
}

// child is the field of a key of the mapping, or of an item of the list, that f describes; nil if it has none.
func (f *field) child(step string) *field {
	var found *field
	hidden := false
	f.each(func(g *field) bool {
		if c, ok := g.Keys.named[step]; ok {
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
		case isIndex && index < len(g.Prefix):
			found = g.Prefix[index]
		case isIndex && g.Items != nil:
			found = g.Items
		case g.Others != nil && !g.Others.never:
			found = g.Others
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
		for _, k := range g.Keys.order {
			if !seen[k] && !g.Keys.named[k].never {
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
func (f *field) open() bool { return f.Others != nil && !f.Others.never }

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
		names = append(names, g.Enum...)
		var text string
		if json.Unmarshal(g.Const, &text) == nil && text != "" {
			names = append(names, text)
		}
		if len(g.Type) == 1 && g.Type[0] == "boolean" {
			names = append(names, strconv.FormatBool(true), strconv.FormatBool(false))
		}
		return false
	})
	return names
}
