package schema

import (
	"bytes"
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

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

// TestTheLeanSchemaJudgesLikeTheWholeOne compares the compiled form with the published one, on every marked file and
// reference design: whole with the vocabulary, and whole without it, as another program would take it.
func TestTheLeanSchemaJudgesLikeTheWholeOne(t *testing.T) {
	compared := 0
	for _, pattern := range []string{"testdata/validate/*.yaml", "testdata/validate/*/*.yaml", "../testdata/reference/*.yaml"} {
		files, err := filepath.Glob(pattern)
		require.NoError(t, err)
		for _, path := range files {
			doc := readFile(t, path)
			if doc.Root == nil || len(doc.Problems) > 0 {
				continue
			}
			value := valueOf(doc.Root, nil)
			lean := validatorOf(doc.Kind).Validate(value) == nil
			whole, err := newCompiler(doc.Kind, schemaText).Compile(schemaID(doc.Kind))
			require.NoError(t, err)
			assert.Equal(t, whole.Validate(value) == nil, lean, path)
			if lean {
				plain := jsonschema.NewCompiler()
				require.NoError(t, plain.AddResource(schemaID(doc.Kind), strings.NewReader(string(JSONSchema(doc.Kind)))))
				elsewhere, err := plain.Compile(schemaID(doc.Kind))
				require.NoError(t, err)
				assert.NoError(t, elsewhere.Validate(value), path)
			}
			compared++
		}
	}
	assert.Greater(t, compared, 30)
}

func TestASchemaWithAMisspeltDimensionDoesNotCompile(t *testing.T) {
	broken := func(name string) []byte {
		return bytes.Replace(schemaText(name), []byte(`"dimension": "slope"`), []byte(`"dimension": "slop"`), 1)
	}
	_, err := newCompiler(Design, broken).Compile(schemaID(Design))
	assert.ErrorContains(t, err, "slop")
}
