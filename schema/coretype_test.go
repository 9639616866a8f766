package schema

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// Source: YAML 1.2.2 (yaml.org/spec/1.2.2), section 10.3.2, table of tag resolution of the core schema.
func TestScalarsHaveTheTypesOfTheCoreSchema(t *testing.T) {
	for text, want := range map[string]float64{
		"0": 0, "-0": 0, "12": 12, "+7": 7, "007": 7, "0o17": 15, "0x1F": 31, "0xffffffffffffffffff": 0xffffffffffffffffff,
		"22e-6": 22e-6, "1e-3": 1e-3, ".5": .5, "-.5": -.5, "1.": 1, "1.5E+3": 1500, "12e03": 12000, "1e999": math.Inf(1), "-1e999": math.Inf(-1),
		".inf": math.Inf(1), "+.Inf": math.Inf(1), "-.INF": math.Inf(-1), "1e-999": 0,
	} {
		n := Read("n.converter.yaml", []byte("a: "+text), 0).Find("/a")
		require.Equal(t, Number, n.Type, text)
		assert.Equal(t, want, n.Number, text)
		assert.Equal(t, text, n.Value)
	}
	for _, text := range []string{".nan", ".NaN", ".NAN"} {
		n := Read("n.converter.yaml", []byte("a: "+text), 0).Find("/a")
		assert.Equal(t, Number, n.Type, text)
		assert.True(t, math.IsNaN(n.Number), text)
	}
	for text, want := range map[string]ScalarType{
		"true": Bool, "True": Bool, "TRUE": Bool, "false": Bool, "False": Bool, "FALSE": Bool, "null": Null, "Null": Null, "NULL": Null, "~": Null, "": Null,
		"yes": Text, "No": Text, "on": Text, "y": Text, "tRUE": Text, "nULL": Text, "1_000": Text, "0b11": Text, "0x": Text, "0xG": Text, "-0x1F": Text, "0o8": Text,
		"1e": Text, "1e+": Text, ".": Text, "+": Text, ".e5": Text, "1.2.3": Text, "190:20:30": Text, "2026-05-01": Text, ".nAn": Text, "NaN": Text, "inf": Text, "1/4": Text,
		"\"1\"": Text, "'true'": Text, "!!str 1": Text, "! 1": Text, "!!float 1": Number, "!!int \"1\"": Number, "!!bool 'true'": Bool, "!!null ''": Null,
	} {
		d := Read("n.converter.yaml", []byte("a: "+text), 0)
		require.Empty(t, d.Problems, text)
		assert.Equal(t, want, d.Find("/a").Type, text)
	}
}

func TestKindIsToldByTheFileName(t *testing.T) {
	for name, want := range map[string]Kind{
		"beacon.converter.yaml": Design, "shelf/beacon.converter.yml": Design, `C:\shelf\beacon.converter.json`: Design, "file:///pier%207/a.b.converter.yaml": Design,
		"outer.compensator.yaml": Compensator, "outer.compensator.json": Compensator, "store.parts.yml": Parts, "halfplane.yaml": Policy, "/pier/halfplane.yaml": Policy,
	} {
		kind, ok := KindOf(name)
		assert.True(t, ok, name)
		assert.Equal(t, want, kind, name)
	}
	for _, name := range []string{"", "converter.yaml", ".converter.yaml", "pier/.parts.yaml", "beacon.yaml", "beacon.converter.yaml.bak", "halfplane.json", "myhalfplane.yaml", "a.converter", "pier.converter.yaml/"} {
		_, ok := KindOf(name)
		assert.False(t, ok, name)
		assert.Equal(t, Design, Read(name, nil, 0).Kind, name)
	}
}

func TestNamesOfKindsAreWords(t *testing.T) {
	assert.Equal(t, "design compensator parts policy", Design.String()+" "+Compensator.String()+" "+Parts.String()+" "+Policy.String())
	assert.Equal(t, "mapping list value", Mapping.String()+" "+Sequence.String()+" "+Scalar.String())
	assert.Equal(t, "text number yes/no nothing", Text.String()+" "+Number.String()+" "+Bool.String()+" "+Null.String())
	assert.Equal(t, "utf-8 utf-16 utf-32", UTF8.String()+" "+UTF16.String()+" "+UTF32.String())
}
