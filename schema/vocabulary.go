package schema

import (
	"encoding/json"
	"fmt"
	"strings"

	"github.com/santhosh-tekuri/jsonschema/v5"
)

// vocabularyText describes the project's own keywords, so that a misspelt dimension in a schema does not compile.
const vocabularyText = `{
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

// vocabularyMeta compiles the description.
func vocabularyMeta() *jsonschema.Schema {
	meta, err := jsonschema.CompileString("urn:halfplane:schema:vocabulary", vocabularyText)
	if err != nil {
		panic(fmt.Sprintf("compiling the vocabulary: %v", err)) // a test compiles it
	}
	return meta
}

// vocabulary compiles the project's own keywords: quantities with their dimension, and rising lists.
type vocabulary struct{}

func (vocabulary) Compile(_ jsonschema.CompilerContext, m map[string]any) (jsonschema.ExtSchema, error) {
	if keys, ok := m["unused"].([]any); ok {
		return unused(keys), nil
	}
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

// unused is the keyword for keys that are not allowed where a condition holds. It stands in the lean form only, in place
// of a schema "false" for each of them.
type unused []any

func (u unused) Validate(ctx jsonschema.ValidationContext, v any) error {
	m, ok := v.(map[string]any)
	if !ok {
		return nil
	}
	var all *jsonschema.ValidationError
	for _, key := range u {
		name, _ := key.(string)
		if _, found := m[name]; !found {
			continue
		}
		one := ctx.Error("unused", "%s", packIssue(issue{notUsed, "/" + name, ""}))
		if all == nil {
			all = ctx.Error("unused", "several issues")
		}
		all.Causes = append(all.Causes, one)
	}
	if all == nil {
		return nil
	}
	return all
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
