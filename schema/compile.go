package schema

import (
	"bytes"
	"fmt"
	"strings"
	"sync"

	"github.com/santhosh-tekuri/jsonschema/v5"
)

// lean writes a schema without what validation does not need: annotations, and the general shape of a quantity, which
// the vocabulary checks by itself and words better. The validator checks a schema against the meta-schema each time that
// it compiles it; that takes most of the first validation, and in proportion to the schema's size.
func lean(b *bytes.Buffer, n *Node) {
	if n.Kind == Scalar {
		b.Write(n.Doc.Text[n.Start:n.End])
		return
	}
	separator := byte('{')
	for _, e := range n.Entries {
		if leftOut(e) {
			continue
		}
		b.WriteByte(separator)
		separator = ','
		fmt.Fprintf(b, "%q:", e.Key)
		leanValue(b, e.Key, e.Value)
	}
	if separator == '{' {
		b.WriteByte('{')
	}
	b.WriteByte('}')
}

// leftOut tells the keywords of a schema that lean leaves out.
func leftOut(e Entry) bool {
	switch e.Key {
	case "title", "description", "examples", "default", "$comment":
		return true
	case "$ref":
		return general(e.Value.Value)
	}
	return false
}

// general tells the definitions that only describe the shape of a quantity.
func general(ref string) bool {
	for _, name := range []string{"quantity", "window", "number"} {
		if strings.HasSuffix(ref, "/$defs/"+name) {
			return true
		}
	}
	return false
}

// leanValue writes the value of a keyword: schemas below it are made lean, everything else is kept.
func leanValue(b *bytes.Buffer, keyword string, n *Node) {
	switch keyword {
	case "properties":
		leanProperties(b, n)
	case "$defs":
		b.WriteByte('{')
		for i, e := range n.Entries {
			if i > 0 {
				b.WriteByte(',')
			}
			fmt.Fprintf(b, "%q:", e.Key)
			if general("/$defs/" + e.Key) {
				b.WriteString("true")
				continue
			}
			lean(b, e.Value)
		}
		b.WriteByte('}')
	case "allOf", "anyOf", "prefixItems":
		for i, item := range n.Items {
			b.WriteByte("[,"[min(i, 1)])
			lean(b, item)
		}
		b.WriteByte(']')
	case "if", "then", "else", "items", "additionalProperties":
		lean(b, n)
	default:
		b.Write(n.Doc.Text[n.Start:n.End])
	}
}

// leanProperties writes the keys of a mapping; those that are not allowed go into the one keyword "unused", in place of a
// schema "false" for each.
func leanProperties(b *bytes.Buffer, n *Node) {
	var unused []string
	separator := byte('{')
	for _, e := range n.Entries {
		if e.Value.Kind == Scalar && e.Value.Value == "false" {
			unused = append(unused, fmt.Sprintf("%q", e.Key))
			continue
		}
		b.WriteByte(separator)
		separator = ','
		fmt.Fprintf(b, "%q:", e.Key)
		lean(b, e.Value)
	}
	if separator == '{' {
		b.WriteByte('{')
	}
	b.WriteByte('}')
	if len(unused) > 0 {
		fmt.Fprintf(b, `,"unused":[%s]`, strings.Join(unused, ","))
	}
}

// newCompiler knows the schema of one kind, the shared definitions and the vocabulary; texts gives a schema file's text.
func newCompiler(k Kind, texts func(name string) []byte) *jsonschema.Compiler {
	c := jsonschema.NewCompiler()
	c.AssertFormat = true
	c.RegisterExtension("halfplane", vocabularyMeta(), vocabulary{})
	for id, name := range map[string]string{commonID: "common", schemaID(k): k.String()} {
		if err := c.AddResource(id, bytes.NewReader(texts(name))); err != nil {
			panic(fmt.Sprintf("reading the embedded schema %s: %v", name, err)) // a test compiles them all
		}
	}
	return c
}

// leanText is the lean form of a schema file.
func leanText(name string) []byte {
	var b bytes.Buffer
	lean(&b, schemaTree(name))
	return b.Bytes()
}

// compile builds the validator of one kind.
func compile(k Kind) *jsonschema.Schema {
	compiled, err := newCompiler(k, leanText).Compile(schemaID(k))
	if err != nil {
		panic(fmt.Sprintf("compiling the embedded schema %s: %v", k, err)) // a test compiles them all
	}
	return compiled
}

func schemaID(k Kind) string { return "urn:halfplane:schema:" + k.String() }

var validators = map[Kind]func() *jsonschema.Schema{
	Design:      sync.OnceValue(func() *jsonschema.Schema { return compile(Design) }),
	Compensator: sync.OnceValue(func() *jsonschema.Schema { return compile(Compensator) }),
	Parts:       sync.OnceValue(func() *jsonschema.Schema { return compile(Parts) }),
	Policy:      sync.OnceValue(func() *jsonschema.Schema { return compile(Policy) }),
}

// validatorOf is the compiled schema of a kind, compiled on first use.
func validatorOf(k Kind) *jsonschema.Schema {
	if v, ok := validators[k]; ok {
		return v()
	}
	return validators[Design]()
}

// JSONSchema is the whole JSON Schema (draft 2020-12) of a kind of spec file in one document: the shared definitions are
// embedded under $defs as a resource of their own, as section 9.3 of the draft's core specification describes. It is nil
// for an unknown kind.
func JSONSchema(k Kind) []byte {
	if _, ok := kindFields[k]; !ok {
		return nil
	}
	reference := []byte(`{"$ref": "` + commonID + `"}`)
	shared := bytes.ReplaceAll(bytes.TrimSpace(schemaText("common")), []byte("\n"), []byte("\n    "))
	return bytes.Replace(schemaText(k.String()), reference, shared, 1)
}
