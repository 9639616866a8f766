package rules

import (
	"fmt"
	"slices"

	"halfplane/analysis"
	"halfplane/schema"
)

// waiver is one entry of a design's list of waivers.
type waiver struct {
	pointer             string // of the entry
	rule, reason, until string
}

// waiversOf lists a design's waivers in the order of the file.
func waiversOf(spec *schema.Spec) []waiver {
	node := spec.Node("/waivers")
	if node == nil {
		return nil
	}
	var all []waiver
	for i := range node.Items {
		at := fmt.Sprintf("/waivers/%d", i)
		all = append(all, waiver{at, spec.Text(at + "/rule"), spec.Text(at + "/reason"), spec.Text(at + "/until")})
	}
	return all
}

// expired says whether the waiver's last day is over; dates are YYYY-MM-DD, whose order is that of their text.
func (w waiver) expired(today string) bool { return today != "" && today > w.until }

// unwaivable are the rules whose findings no waiver covers: a file that cannot be read has not been checked, a defect of the
// program is no property of the design, and an exception to an exception would never end.
func unwaivable(rule string) bool {
	switch rule {
	case specSyntax.Name, specShape.Name, quantity.Name, internal.Name, waiverExpired.Name, waiverUnused.Name, waiverUnknown.Name:
		return true
	}
	return false
}

// waive marks the findings that a waiver in force covers, the one that holds longest where there are several. A consequence
// whose cause is waived and which is not stands on its own from then on.
func waive(c *Case, findings []Finding, today string) {
	waivers := waiversOf(c.Spec)
	if len(waivers) == 0 {
		return
	}
	for i := range findings {
		f := &findings[i]
		for _, w := range waivers {
			if w.rule == f.Rule && !unwaivable(w.rule) && !w.expired(today) && (f.Waiver == nil || w.until > f.Waiver.Until) {
				f.Waiver = &Waiver{Reason: w.reason, Until: w.until}
			}
		}
	}
	for i := range findings {
		f := &findings[i]
		if f.Cause == nil || f.Waiver != nil {
			continue
		}
		cause := slices.IndexFunc(findings, func(g Finding) bool { return g.Rule == f.Cause.Rule && g.Pointer == f.Cause.Pointer })
		if cause >= 0 && findings[cause].Waiver != nil {
			f.Cause = nil
		}
	}
}

// keep is what the rules about waivers have to say: those that ran out, cover nothing, or name no rule.
func keep(c *Case, judged Judgement, o RunOptions) []Finding {
	var findings []Finding
	add := func(rule *Rule, pointer, message string) {
		severity := rule.Severity
		if s, set := c.Settings.Severities[rule.Name]; set {
			severity = s
		}
		if severity == None || !o.chosen(rule.Name) {
			return
		}
		f := c.at(pointer)
		f.Rule, f.Severity, f.Message = rule.Name, severity, message
		findings = append(findings, f)
	}
	for _, w := range waiversOf(c.Spec) {
		named := Find(w.rule)
		switch {
		case named == nil:
			add(&waiverUnknown, w.pointer+"/rule", noSuchRule(w.rule))
		case w.expired(o.Today):
			add(&waiverExpired, w.pointer+"/until", fmt.Sprintf("the waiver of %s held until %s, and today is %s: what it covered counts again", w.rule, w.until, o.Today))
		case unwaivable(w.rule):
			add(&waiverUnused, w.pointer+"/rule", fmt.Sprintf("the waiver of %s covers nothing: findings of that rule cannot be waived", w.rule))
		case w.coversNothing(c, judged):
			add(&waiverUnused, w.pointer+"/rule", fmt.Sprintf("the waiver of %s covers no finding: it can be taken out", w.rule))
		}
	}
	return findings
}

// noSuchRule words a name that is no rule's.
func noSuchRule(name string) string {
	var known []string
	for _, r := range list {
		known = append(known, r.Name)
	}
	words := fmt.Sprintf("there is no rule %q to waive", name)
	if best := schema.Nearest(name, known); best != "" {
		words += fmt.Sprintf("; did you mean %q?", best)
	}
	return words
}

// coversNothing says that the waiver's rule was judged and found nothing. A rule that was left out or could not be assessed may
// find something another time, and quick depth may have missed what the loop does at its worst.
func (w waiver) coversNothing(c *Case, judged Judgement) bool {
	if slices.ContainsFunc(judged.Findings, func(f Finding) bool { return f.Rule == w.rule }) {
		return false
	}
	at := slices.IndexFunc(judged.Outcomes, func(out Outcome) bool { return out.Rule.Name == w.rule })
	if at < 0 || judged.Outcomes[at].Status == NotAssessed {
		return false
	}
	return judged.Outcomes[at].Rule.Reads != Figures || c.Result.Depth == analysis.Full
}
