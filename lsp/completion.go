package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"go.lsp.dev/protocol"

	"halfplane/rules"
	"halfplane/schema"
)

// candidate is something that can be typed at a spot.
type candidate struct {
	label  string
	insert string // what is put in the text
	kind   protocol.CompletionItemKind
	detail string // one line beside it
	about  string // Markdown
	first  bool   // before the others: it must be there
}

// completion offers the keys that are still missing at a place, or what a value can be. It goes by the text before the place
// alone, so that it works while the document does not parse.
func (s *server) completion(raw json.RawMessage) (answer, error) {
	var p placeParams
	if err := decode(raw, &p); err != nil {
		return nil, err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	d := s.desks[*p.Document.URI]
	if d == nil || !d.served || d.lost {
		return nothing, nil
	}
	snap := d.current
	return func(context.Context) (any, error) {
		doc := snap.document()
		offset := snap.text.offset(*p.Position, s.columns)
		spot, ok := schema.SpotAt(doc.Text, offset)
		if !ok {
			return nil, nil
		}
		var all []candidate
		if spot.Value {
			all = values(doc, spot)
		} else {
			all = keys(doc, spot, offset)
		}
		return s.items(snap, spot, offset, all), nil
	}, nil
}

// items is the candidates in the protocol's form, in their order.
func (s *server) items(snap *snapshot, spot schema.Spot, offset int, all []candidate) *protocol.CompletionList {
	list := &protocol.CompletionList{Items: make([]protocol.CompletionItem, 0, len(all))}
	area := snap.text.area(spot.Start, max(offset, spot.Start), s.columns)
	for i, c := range all {
		group := "1"
		if c.first {
			group = "0"
		}
		item := protocol.CompletionItem{
			Label: c.label, Kind: c.kind, Detail: protocol.NewOptional(c.detail),
			SortText:   protocol.NewOptional(fmt.Sprintf("%s%03d", group, i)),
			FilterText: protocol.NewOptional(strings.TrimSuffix(c.insert, ": ")),
			TextEdit:   &protocol.TextEdit{Range: area, NewText: c.insert},
		}
		if c.about != "" {
			kind := protocol.MarkupKindMarkdown
			if !s.can.markdown {
				kind = protocol.MarkupKindPlainText
			}
			item.Documentation = &protocol.MarkupContent{Kind: kind, Value: c.about}
		}
		list.Items = append(list.Items, item)
	}
	return list
}

// keys lists what the mapping at a spot can still hold.
func keys(doc *schema.Document, spot schema.Spot, offset int) []candidate {
	info, ok := schema.LookupField(doc.Kind, spot.Pointer)
	if !ok {
		return nil
	}
	taken := slices.Clone(spot.Keys)
	if n := doc.Find(spot.Pointer); n != nil {
		for _, e := range n.Entries {
			if e.KeyStart > offset { // what stands behind is there too; what is just being typed is not
				taken = append(taken, e.Key)
			}
		}
	}
	after := ": "
	if rest := strings.TrimLeft(string(doc.Text[min(offset, len(doc.Text)):]), " "); strings.HasPrefix(rest, ":") {
		after = ""
	}
	var all []candidate
	for _, key := range info.Keys {
		if slices.Contains(taken, key) {
			continue
		}
		pointer := spot.Pointer + "/" + key
		field, _ := schema.LookupField(doc.Kind, pointer)
		c := candidate{label: key, insert: key + after, kind: protocol.CompletionItemKindProperty, detail: field.Title, about: field.Description, first: field.Required}
		if spot.Quoted {
			c.insert = `"` + key + `"` + after
		}
		if field.Default != "" {
			c.about += "\n\nDefault: `" + field.Default + "`"
		}
		if doc.Kind == schema.Policy {
			c.ofPolicy(pointer, key)
		}
		all = append(all, c)
	}
	return all
}

// ofPolicy says what a policy's key stands for: the rule whose severity it sets, or the rules that a threshold belongs to.
func (c *candidate) ofPolicy(pointer, key string) {
	steps := strings.Split(pointer, "/")
	switch steps[len(steps)-2] {
	case "severity":
		if rule := rules.Find(key); rule != nil {
			c.detail = rule.Severities() + " by default"
			c.about = rule.Sentence
		}
	case "thresholds":
		var of []string
		for _, rule := range rules.All() {
			for _, d := range rule.Defaults() {
				if d.Key == key {
					of = append(of, rule.Name)
					if len(of) == 1 {
						c.detail = d.Value + " by default"
						c.about = rule.Sentence + " " + rule.Formula
					}
				}
			}
		}
		if len(of) > 0 {
			c.about = "Rule " + strings.Join(of, ", ") + ".\n\n" + c.about
		}
	}
}

// values lists what the value at a spot can be: a name that is allowed, else examples of how it is written.
func values(doc *schema.Document, spot schema.Spot) []candidate {
	info, ok := schema.LookupField(doc.Kind, spot.Pointer)
	if !ok {
		return nil
	}
	quoted := func(text string) string {
		if spot.Quoted {
			return `"` + text + `"`
		}
		return text
	}
	steps := strings.Split(spot.Pointer, "/")
	var all []candidate
	add := func(kind protocol.CompletionItemKind, text, detail, about string) {
		if !slices.ContainsFunc(all, func(c candidate) bool { return c.label == text }) {
			all = append(all, candidate{label: text, insert: quoted(text), kind: kind, detail: detail, about: about})
		}
	}
	switch {
	case len(steps) == 4 && steps[1] == "waivers" && steps[3] == "rule":
		for _, rule := range rules.All() {
			add(protocol.CompletionItemKindEnumMember, rule.Name, rule.Severities(), rule.Sentence)
		}
	case len(info.Names) > 0:
		for _, name := range info.Names {
			add(protocol.CompletionItemKindEnumMember, name, info.Title, info.Description)
		}
	default:
		if rest := strings.Join(steps[1:], "/"); doc.Kind == schema.Policy && strings.Contains(rest, "thresholds/") {
			for _, rule := range rules.All() {
				for _, d := range rule.Defaults() {
					if d.Key == steps[len(steps)-1] {
						add(protocol.CompletionItemKindValue, d.Value, "the default", rule.Sentence)
					}
				}
			}
		}
		if info.Default != "" {
			add(protocol.CompletionItemKindValue, info.Default, "the default", info.Description)
		}
		for _, example := range info.Examples {
			add(protocol.CompletionItemKindValue, example, "for example", info.Description)
		}
	}
	return all
}
