package schema

import (
	"bytes"
	"encoding/json"
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
		Title:       f.first(func(g *field) string { return g.Title }),
		Description: f.first(func(g *field) string { return g.Description }),
		Default:     flow(json.RawMessage(f.first(func(g *field) string { return string(g.Default) }))),
		Names:       f.names(),
		Keys:        f.keys(),
	}
	info.Dimension, _ = dimensionNamed(f.first(func(g *field) string { return g.Dimension }))
	f.each(func(g *field) bool {
		for _, e := range g.Examples {
			info.Examples = append(info.Examples, flow(e))
		}
		return len(g.Examples) > 0
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
		required = required || slices.Contains(g.Required, key)
		return required
	})
	return required
}

// flow writes a JSON value as YAML flow style writes it: plain texts without quotes.
func flow(text json.RawMessage) string {
	if len(text) == 0 {
		return ""
	}
	d := json.NewDecoder(bytes.NewReader(text))
	d.UseNumber()
	return flowValue(d)
}

func flowValue(d *json.Decoder) string {
	token, err := d.Token()
	if err != nil {
		return ""
	}
	switch v := token.(type) {
	case json.Delim:
		var parts []string
		for d.More() {
			part := flowValue(d)
			if v == '{' {
				part += ": " + flowValue(d)
			}
			parts = append(parts, part)
		}
		end, _ := d.Token()
		return v.String() + strings.Join(parts, ", ") + end.(json.Delim).String()
	case string:
		if v == "" || strings.ContainsAny(v, "#,[]{}\"") || strings.ContainsAny(v[:1], "*&!|>'%@`-?: ") || strings.Contains(v, ": ") {
			return `"` + v + `"`
		}
		return v
	case json.Number:
		return v.String()
	case bool:
		return map[bool]string{true: "true", false: "false"}[v]
	}
	return "null"
}
