package schema

import (
	"encoding/json"
	"strings"
	"testing"
	"time"

	"github.com/santhosh-tekuri/jsonschema/v5"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func kinds() []Kind { return []Kind{Design, Compensator, Parts, Policy} }

func TestEverySchemaIsValidAgainstTheMetaSchemaOfTheDraft(t *testing.T) {
	meta := jsonschema.MustCompile("https://json-schema.org/draft/2020-12/schema")
	for _, k := range kinds() {
		var v any
		d := json.NewDecoder(strings.NewReader(string(JSONSchema(k))))
		d.UseNumber()
		require.NoError(t, d.Decode(&v), k.String())
		assert.NoError(t, meta.Validate(v), k.String())
	}
}

func TestEverySchemaStandsAloneInOneDocument(t *testing.T) {
	for _, k := range kinds() {
		c := jsonschema.NewCompiler()
		require.NoError(t, c.AddResource(schemaID(k), strings.NewReader(string(JSONSchema(k)))))
		_, err := c.Compile(schemaID(k))
		assert.NoError(t, err, k.String())
	}
}

func TestEverySchemaCompilesQuickly(t *testing.T) {
	for _, k := range kinds() {
		start := time.Now()
		compile(k)
		t.Logf("%s: %v", k, time.Since(start))
	}
}
