package schema

import (
	"bytes"
	"encoding/json"
	"fmt"
	"strings"
	"sync"

	"github.com/santhosh-tekuri/jsonschema/v5"
)

// vocabularyMeta describes the project's own keywords, so that a misspelt dimension in a schema does not compile.
const vocabularyMeta = `{
  "$schema": "https://json-schema.org/draft/2020-12/schema",
  "properties": {
    "dimension": {"enum": ["plain", "count", "ratio", "gain", "angle", "decibel", "inductance", "capacitance", "resistance", "transresistance",
      "conductance", "voltage", "current", "frequency", "time", "slope"]},
    "sign": {"enum": ["positive", "nonnegative", "from-zero", "nonzero", "any"]},
    "most": {"type": "number", "exclusiveMinimum": 0},
    "window": {"type": "boolean"}, "scalar": {"type": "boolean"}, "ascending": {"type": "boolean"},
    "because": {"type": "string"}
  },
  "dependentRequired": {"sign": ["dimension"], "most": ["dimension"], "window": ["dimension"], "scalar": ["dimension"], "because": ["dimension"]}
}`

// vocabulary compiles the project's own keywords: quantities with their dimension, and rising lists.
type vocabulary struct{}

func (vocabulary) Compile(_ jsonschema.CompilerContext, m map[string]any) (jsonschema.ExtSchema, error) {
	if rising, _ := m["ascending"].(bool); rising {
		return ascending{}, nil
	}
	name, ok := m["dimension"].(string)
	if !ok {
		return nil, nil
	}
	f := quantityField{sign: "positive"}
	if f.dim, ok = dimensionNamed(name); !ok {
		return nil, fmt.Errorf("compiling a schema: no dimension is named %q", name)
	}
	if sign, ok := m["sign"].(string); ok {
		f.sign = sign
	}
	if most, ok := m["most"].(json.Number); ok {
		f.most, _ = most.Float64()
	}
	f.because, _ = m["because"].(string)
	f.window, _ = m["window"].(bool)
	f.scalar, _ = m["scalar"].(bool)
	return f, nil
}

// Validate reports each issue of a quantity as a cause of its own, told apart by packIssue.
func (f quantityField) Validate(ctx jsonschema.ValidationContext, v any) error {
	_, issues := f.read(v)
	if len(issues) == 0 {
		return nil
	}
	var all *jsonschema.ValidationError
	for _, i := range issues {
		if one := ctx.Error("dimension", "%s", packIssue(i)); all == nil && len(issues) == 1 {
			return one
		} else if all == nil {
			all = ctx.Error("dimension", "several issues")
			all.Causes = append(all.Causes, one)
		} else {
			all.Causes = append(all.Causes, one)
		}
	}
	return all
}

// An issue travels through the validator as a message: kind, path and text with a separator that no message holds.
const issueSeparator = "\x1f"

func packIssue(i issue) string {
	return string(i.kind) + issueSeparator + i.path + issueSeparator + i.text
}

func unpackIssue(message string) (issue, bool) {
	parts := strings.SplitN(message, issueSeparator, 3)
	if len(parts) != 3 {
		return issue{}, false
	}
	return issue{issueKind(parts[0]), parts[1], parts[2]}, true
}

// ascending is the keyword for lists of pairs whose first numbers rise.
type ascending struct{}

func (ascending) Validate(ctx jsonschema.ValidationContext, v any) error {
	items, ok := v.([]any)
	if !ok {
		return nil
	}
	field := quantityField{dim: Voltage, sign: "any"}
	last := 0.0
	for i, item := range items {
		pair, ok := item.([]any)
		if !ok || len(pair) == 0 {
			return nil // the shape of the items is reported by itself
		}
		q, issues := field.read(pair[0])
		if len(issues) > 0 {
			return nil
		}
		if i > 0 && q.Nominal <= last {
			return ctx.Error("ascending", "%s", packIssue(issue{wrongAmount, fmt.Sprintf("/%d/0", i), fmt.Sprintf("expects a voltage above the one before, found '%s'", shown(writtenText(pair[0])))}))
		}
		last = q.Nominal
	}
	return nil
}

// newCompiler knows the schema of one kind, the shared definitions and the vocabulary.
func newCompiler(k Kind) *jsonschema.Compiler {
	c := jsonschema.NewCompiler()
	c.AssertFormat = true
	meta, err := jsonschema.CompileString("urn:halfplane:schema:vocabulary", vocabularyMeta)
	if err != nil {
		panic(fmt.Sprintf("compiling the vocabulary: %v", err)) // a test compiles it
	}
	c.RegisterExtension("halfplane", meta, vocabulary{})
	for id, name := range map[string]string{commonID: "common", schemaID(k): k.String()} {
		if err := c.AddResource(id, bytes.NewReader(schemaText(name))); err != nil {
			panic(fmt.Sprintf("reading the embedded schema %s: %v", name, err)) // a test compiles them all
		}
	}
	return c
}

// compile builds the validator of one kind.
func compile(k Kind) *jsonschema.Schema {
	compiled, err := newCompiler(k).Compile(schemaID(k))
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
