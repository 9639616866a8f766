package schema

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestTheSpotIsFoundInTextThatDoesNotParse(t *testing.T) {
	for _, tt := range []struct {
		name, text string // the offset is at ‸
		want       Spot
	}{
		{"empty file", "‸", Spot{}},
		{"a key at the root", "format: 1\nsev‸", Spot{Typed: "sev", Keys: []string{"format"}}},
		{"a new line at the root", "format: 1\nseverity:\n  a: note\n‸", Spot{Keys: []string{"format", "severity"}}},
		{"a value", "format: 1\ntopology: bo‸", Spot{Pointer: "/topology", Value: true, Typed: "bo", Keys: nil}},
		{"a value not begun", "topology: ‸", Spot{Pointer: "/topology", Value: true}},
		{"a value with text behind it", "topology: bo‸ost\nx: {", Spot{Pointer: "/topology", Value: true, Typed: "bo"}},
		{"below a key", "severity:\n  ‸", Spot{Pointer: "/severity"}},
		{"below a key, second", "severity:\n  duty-range: note\n  ph‸", Spot{Pointer: "/severity", Typed: "ph", Keys: []string{"duty-range"}}},
		{"below, a value", "severity:\n  duty-range: no‸", Spot{Pointer: "/severity/duty-range", Value: true, Typed: "no"}},
		{"back at the root", "severity:\n  duty-range: note\nth‸", Spot{Typed: "th", Keys: []string{"severity"}}},
		{"in braces", "severity: {duty-range: note, ph‸", Spot{Pointer: "/severity", Typed: "ph", Keys: []string{"duty-range"}}},
		{"in braces, begun", "severity: {‸", Spot{Pointer: "/severity"}},
		{"in braces, a value", "severity: {duty-range: n‸}", Spot{Pointer: "/severity/duty-range", Value: true, Typed: "n"}},
		{"in braces over lines", "severity: {duty-range: note,\n  phase-margin: ‸", Spot{Pointer: "/severity/phase-margin", Value: true}},
		{"behind braces", "severity: {duty-range: note}\nt‸", Spot{Typed: "t", Keys: []string{"severity"}}},
		{"in a list", "paths:\n  - match: a\n    sev‸", Spot{Pointer: "/paths/0", Typed: "sev", Keys: []string{"match"}}},
		{"in a list at its key's column", "paths:\n- match: a\n- m‸", Spot{Pointer: "/paths/1", Typed: "m"}},
		{"in a list, below", "paths:\n  - match: a\n    severity:\n      ‸", Spot{Pointer: "/paths/0/severity"}},
		{"in a list, a value", "paths:\n  - match: a\n    severity: {duty-range: ‸", Spot{Pointer: "/paths/0/severity/duty-range", Value: true}},
		{"an item of braces", "waivers:\n  - {rule: ‸", Spot{Pointer: "/waivers/0/rule", Value: true}},
		{"the second item of braces", "waivers:\n  - {rule: a, until: 2031-01-01}\n  - {‸", Spot{Pointer: "/waivers/1"}},
		{"in brackets", "libraries: [a.parts.yaml, b‸", Spot{Pointer: "/libraries/1", Value: true, Typed: "b"}},
		{"behind a comment line", "severity:\n  # none yet\n  ‸", Spot{Pointer: "/severity"}},
		{"CRLF", "severity:\r\n  duty-range: note\r\n  ph‸", Spot{Pointer: "/severity", Typed: "ph", Keys: []string{"duty-range"}}},
		{"torn above", "title: \"unclosed\nseverity:\n  ph‸", Spot{Pointer: "/severity", Typed: "ph"}},
		{"a colon inside a value", "title: Lamp: the first\nto‸", Spot{Typed: "to", Keys: []string{"title"}}},
		{"JSON, a key", "{\n  \"format\": 1,\n  \"to‸", Spot{Typed: "\"to", Keys: []string{"format"}, Quoted: true}},
		{"JSON, a value", "{\"load\": {\"behaviour\": \"con‸", Spot{Pointer: "/load/behaviour", Value: true, Typed: "\"con", Quoted: true}},
		{"JSON, behind a mapping", "{\"load\": {\"behaviour\": \"x\"}, \"s‸", Spot{Typed: "\"s", Keys: []string{"load"}, Quoted: true}},
		{"JSON, a list of mappings", "{\"waivers\": [{\"rule\": \"a\"}, {\"rule\": \"‸", Spot{Pointer: "/waivers/1/rule", Value: true, Typed: "\"", Quoted: true}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			offset := strings.Index(tt.text, "‸")
			text := strings.Replace(tt.text, "‸", "", 1)
			got, ok := SpotAt([]byte(text), offset)
			assert.True(t, ok)
			assert.Equal(t, offset-len(tt.want.Typed), got.Start)
			tt.want.Start = got.Start
			if tt.want.Value { // the siblings of a value do not matter
				got.Keys = nil
			}
			if len(tt.want.Keys) == 0 && tt.name != "torn above" {
				assert.Empty(t, got.Keys)
			}
			tt.want.Keys, got.Keys = nonNil(tt.want.Keys), nonNil(got.Keys)
			assert.Equal(t, tt.want, got)
		})
	}
	for _, text := range []string{"# a comm‸", "topology: boost # a‸", "title: |\n  lines\n"} {
		offset := strings.Index(text, "‸")
		if offset < 0 {
			continue
		}
		_, ok := SpotAt([]byte(strings.Replace(text, "‸", "", 1)), offset)
		assert.False(t, ok, text)
	}
}

func nonNil(keys []string) []string {
	if keys == nil {
		return []string{}
	}
	return keys
}

// FuzzSpot asserts that what is typed ends at the offset, whatever the text.
func FuzzSpot(f *testing.F) {
	for _, seed := range []string{"a: {b: [c, {d", "- - a:\n  - b", "\"x\": '", "a:\n\t- b: }]", "}}]]", "{a}:{b}", "µ: ‸"} {
		f.Add([]byte(seed), len(seed))
	}
	f.Fuzz(func(t *testing.T, text []byte, offset int) {
		s, ok := SpotAt(text, offset)
		if !ok {
			return
		}
		offset = min(max(offset, 0), len(text))
		if s.Start < 0 || s.Start > len(text) || s.Start+len(s.Typed) > offset {
			t.Fatalf("%+v at %d", s, offset)
		}
	})
}
