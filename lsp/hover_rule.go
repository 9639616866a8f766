package lsp

import (
	"strings"

	"halfplane/rules"
	"halfplane/schema"
)

// namedRule is the rule whose name stands at the place: in a waiver, in a policy's severities, and behind a policy's key.
func (p *place) namedRule() *rules.Rule {
	steps := strings.Split(strings.TrimPrefix(p.pointer, "/"), "/")
	switch {
	case steps[0] == "waivers" && len(steps) == 3 && steps[2] == "rule" && !p.onKey:
		if n := p.doc.Find(p.pointer); n != nil {
			return rules.Find(n.Value)
		}
	case p.doc.Kind != schema.Policy:
	case len(steps) >= 2 && steps[len(steps)-2] == "severity" && p.onKey:
		return rules.Find(steps[len(steps)-1])
	case len(steps) >= 2 && steps[len(steps)-2] == "thresholds" && p.onKey:
		return ruleOf(steps[len(steps)-1])
	}
	return nil
}

// ruleOf is the first rule that a policy key belongs to.
func ruleOf(key string) *rules.Rule {
	for _, r := range rules.All() {
		for _, t := range r.Policy {
			if t.Key == key {
				return r
			}
		}
	}
	return nil
}

// aboutRule writes a rule's page of the catalogue, the one that the command line prints.
func (p *place) aboutRule(r *rules.Rule) { p.text.WriteString(rules.Page(r)) }

// aboutFinding writes what protects whom here: the rule's sentence, and its formula with this design's numbers put in.
func (p *place) aboutFinding(f *rules.Finding) {
	p.title(f.Rule, f.Severity.String())
	p.say(capital(f.Message) + ".")
	r := rules.Find(f.Rule)
	if r != nil {
		p.say(r.Sentence)
	}
	switch {
	case f.Formula != "":
		p.formula(f.Formula)
	case r != nil:
		p.formula(r.Formula)
	}
	var facts []string
	if f.CornerWords != "" {
		facts = append(facts, "worst at "+f.CornerWords)
	}
	if f.Nominal != nil && f.CornerWords != "" {
		if shown := figure(f.Nominal.Value, f.Nominal.Unit); shown != "" {
			facts = append(facts, "nominal "+shown)
		}
	}
	if f.Cause != nil {
		facts = append(facts, "follows from "+f.Cause.Rule)
	}
	p.list(facts)
}

func capital(s string) string {
	if s == "" || s[0] < 'a' || s[0] > 'z' {
		return s
	}
	return string(s[0]-'a'+'A') + s[1:]
}
