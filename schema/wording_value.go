package schema

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// wrongValue words a value that is of the wrong type or has a name that the schema does not know.
func (v *validation) wrongValue(s *site, l leaf) string {
	found := kindOf(valueOf(s.node, nil))
	switch l.keyword {
	case "enum":
		return wrongName(s, found)
	case "const":
		if names := s.field.names(); len(names) > 0 {
			return fmt.Sprintf("%s expects '%s' or a list, found %s", s.name(), names[0], found)
		}
		if s.node.Type == Text && s.node.Value == "1" {
			return fmt.Sprintf("%s expects the number 1, found the text '1': write it without quotes", s.name())
		}
		return fmt.Sprintf("%s expects 1, the only version there is, found %s", s.name(), found)
	case "format":
		return fmt.Sprintf("%s expects a date such as 2027-03-31, found %s", s.name(), found)
	case "minLength":
		return fmt.Sprintf("%s is empty, a text is expected", s.name())
	case "minItems", "maxItems":
		return wrongLength(s)
	}
	return fmt.Sprintf("%s expects %s, found %s", s.name(), v.wantedType(s), found) + typeHint(s)
}

// wrongName lists the names that are allowed, the nearest first.
func wrongName(s *site, found string) string {
	names := s.field.names()
	message := fmt.Sprintf("%s expects one of %s, found %s", s.name(), strings.Join(names, ", "), found)
	if s.node.Kind == Scalar {
		if near := Nearest(s.node.Value, names); near != "" {
			message += fmt.Sprintf(": did you mean '%s'?", near)
		}
	}
	return message
}

// wrongLength words a list that is too short or too long.
func wrongLength(s *site) string {
	switch {
	case s.above != nil && s.above.step == "bias-derating":
		return fmt.Sprintf("%s expects a pair [voltage, factor], found a list of %d", s.name(), len(s.node.Items))
	case len(s.node.Items) == 0:
		return fmt.Sprintf("%s is empty, at least one item is expected", s.name())
	}
	return fmt.Sprintf("%s has %d items, too many", s.name(), len(s.node.Items))
}

// wantedType says what a field holds.
func (v *validation) wantedType(s *site) string {
	kind := s.field.first(func(f *field) string { return strings.Join(f.types, " ") })
	switch kind {
	case "object":
		if s.field.open() {
			return "a group of names, each with its values"
		}
		keys := s.field.keys()
		if len(keys) > 3 {
			keys = append(slices.Clone(keys[:3]), "…")
		}
		return "a group of keys (" + strings.Join(keys, ", ") + ")"
	case "array":
		return "a list"
	case "boolean":
		return "true or false"
	}
	return "a text"
}

// typeHint adds how the likely meaning is written.
func typeHint(s *site) string {
	if s.node.Kind != Scalar {
		return ""
	}
	kind := s.field.first(func(f *field) string { return strings.Join(f.types, " ") })
	switch {
	case kind == "boolean" && slices.Contains([]string{"yes", "on", "y"}, strings.ToLower(s.node.Value)):
		return ": did you mean true?"
	case kind == "boolean" && slices.Contains([]string{"no", "off", "n"}, strings.ToLower(s.node.Value)):
		return ": did you mean false?"
	case kind == "string" && (s.node.Type == Number || s.node.Type == Bool):
		return ": put it in quotes"
	}
	return ""
}

// unused reports a key that the network, scheme or topology has no use for; everything inside it is then beside the point.
func (v *validation) unused(l leaf) {
	if l.keyword != "unused" {
		return
	}
	s := v.find(l.at)
	if s == nil || s.entry == nil {
		return
	}
	v.spent[s.node] = true
	if _, wrong := v.misspelt[spot{s.entry.KeyDoc, s.entry.KeyStart}]; wrong {
		return
	}
	v.onKey(s.above, s.entry, v.whyUnused(s))
}

// whyUnused names what makes the key useless.
func (v *validation) whyUnused(s *site) string {
	key, above := s.name(), s.above
	if above.field.child(s.step) == nil { // of the schema, but not here
		if v.doc.Kind == Policy {
			return fmt.Sprintf("the severity of '%s' cannot be changed", key)
		}
		return fmt.Sprintf("unknown key '%s' in %s", key, above.name())
	}
	switch {
	case key == "output-capacitor":
		return "'output-capacitor' and 'output-capacitors' cannot both be there"
	case above.step == "amplifier":
		return fmt.Sprintf("%s does not use 'amplifier.%s'", owner(above.above), key)
	case above.step == "turns":
		return fmt.Sprintf("topology '%s' does not use 'turns.%s'", v.textAt("topology"), key)
	case key == "side":
		return fmt.Sprintf("topology '%s' has no transformer and does not use 'inductor.side'", v.textAt("topology"))
	case key == "turns":
		return fmt.Sprintf("topology '%s' has no transformer and does not use 'turns'", v.textAt("topology"))
	case key == "magnetizing-inductance" && v.textAt("topology") == "flyback":
		return "topology 'flyback' does not use 'magnetizing-inductance': 'inductor.inductance' is the magnetizing inductance"
	case v.doc.Kind == Design && above.above == nil:
		return fmt.Sprintf("topology '%s' does not use '%s'", v.textAt("topology"), key)
	}
	return fmt.Sprintf("%s does not use '%s'", owner(above), key)
}

// owner names a mapping by what decides its keys: "network 'type-2'", "scheme 'voltage-mode'", else by its key.
func owner(s *site) string {
	for _, decides := range []string{"network", "scheme"} {
		if n := s.node.Get(decides); n != nil && n.Kind == Scalar && n.Value != "" && s.field.child(decides) != nil {
			return fmt.Sprintf("%s '%s'", decides, shown(n.Value))
		}
	}
	if n := s.node.Get("type"); n != nil && n.Kind == Scalar && s.field.child("type") != nil {
		return fmt.Sprintf("part '%s' of type '%s'", s.name(), shown(n.Value))
	}
	return s.name()
}

// reportMisspelt walks the tree and reports each key that was put right, under its right spelling.
func (v *validation) reportMisspelt(s *site) {
	for i := range s.node.Entries {
		e := &s.node.Entries[i]
		next := &site{
			node: e.Value, entry: e, parent: s.node, field: childField(s.field, e.Key), above: s, step: e.Key,
			pointer: s.pointer + "/" + escapePointer(v.keyAsWritten(e)),
		}
		if key, ok := v.misspelt[spot{e.KeyDoc, e.KeyStart}]; ok {
			v.onKey(s, e, fmt.Sprintf("unknown key '%s'%s: did you mean '%s'?", shown(key), within(s), e.Key))
		}
		v.reportMisspelt(next)
	}
	for i, item := range s.node.Items {
		step := strconv.Itoa(i)
		v.reportMisspelt(&site{node: item, parent: s.node, field: childField(s.field, step), above: s, step: step, pointer: s.pointer + "/" + step})
	}
}

// within says in which mapping a key stands; nothing at the top level.
func within(s *site) string {
	if s.above == nil {
		return ""
	}
	return " in " + s.name()
}
