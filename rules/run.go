package rules

import (
	"slices"

	"halfplane/schema"
)

// RunOptions choose rules by name; empty Only means all of them.
type RunOptions struct{ Only, Without []string }

func (o RunOptions) chosen(name string) bool {
	return (len(o.Only) == 0 || slices.Contains(o.Only, name)) && !slices.Contains(o.Without, name)
}

// Run applies the rules to a case and gives their findings, worded and sorted: what is broken, what could not be assessed,
// and what failed inside the program. Consequences name their cause.
func Run(c *Case, o RunOptions) []Finding {
	var findings []Finding
	for _, rule := range list {
		severity, set := c.Settings.Severities[rule.Name]
		if !o.chosen(rule.Name) || set && severity == None {
			continue
		}
		out := decide(c, rule)
		for _, f := range out.Findings {
			if set {
				f.Severity = severity
			}
			findings = append(findings, f)
		}
		switch {
		case out.Panic != "" && o.chosen(internal.Name):
			findings = append(findings, Internal(c.Spec.Document, "rule "+rule.Name+" failed inside the program: "+out.Panic))
		case out.Reason != "" && o.chosen(notAssessed.Name):
			findings = appendNotAssessed(findings, c, &out)
		}
	}
	tieCauses(findings)
	Sort(findings)
	return findings
}

// appendNotAssessed adds the note for a rule that applies but could not be assessed everywhere.
func appendNotAssessed(findings []Finding, c *Case, out *Outcome) []Finding {
	severity := notAssessed.Severity
	if s, set := c.Settings.Severities[notAssessed.Name]; set {
		severity = s
	}
	if severity == None {
		return findings
	}
	f := c.at(placeOfNote(c, out.Rule))
	f.Rule, f.Severity = notAssessed.Name, severity
	f.Message = out.Rule.Name + " is not assessed: " + out.Reason
	if out.Unreached {
		f.Cause = &Cause{Rule: dutyRange.Name}
	}
	return append(findings, f)
}

// placeOfNote is where a not-assessed note goes: the value that calls for the rule when one is missing, else what has no
// model.
func placeOfNote(c *Case, rule *Rule) string {
	if missingNeeds(c, rule) != "" && rule.Place != nil {
		return rule.Place(c)
	}
	if c.Design.Nominal.Circuit.Topology.TwoInductor() {
		return "/topology"
	}
	return "/modulator/scheme"
}

// Internal is the finding for a defect of the program itself, at the first key of the file.
func Internal(doc *schema.Document, message string) Finding {
	f := Finding{Rule: internal.Name, Severity: internal.Severity, Message: message + "; please report it with this file", Doc: doc}
	if doc != nil && doc.Root != nil && len(doc.Root.Entries) > 0 {
		f.Start, f.End = doc.Root.Entries[0].KeyStart, doc.Root.Entries[0].KeyEnd
	}
	return f
}

// causeOf names the rule whose finding explains a rule's findings at the same corner, "" for a rule that stands alone.
func causeOf(rule string) string {
	switch rule {
	case "phase-margin", "gain-margin", "modulus-margin":
		return "closed-loop-stability"
	}
	return ""
}

// tieCauses points consequences at the finding that they follow from, and lets go of causes that are not in the list.
func tieCauses(findings []Finding) {
	for i := range findings {
		f := &findings[i]
		cause, anyCorner := causeOf(f.Rule), false
		if f.Cause != nil { // the rule knows better
			cause, anyCorner = f.Cause.Rule, true
		}
		f.Cause = nil
		at := slices.IndexFunc(findings, func(g Finding) bool { return g.Rule == cause })
		if cause == "" || at < 0 || !anyCorner && !sameCorner(f.Corner, findings[at].Corner) {
			continue
		}
		f.Cause = &Cause{Rule: cause, Pointer: findings[at].Pointer}
		f.Related = append(f.Related, schema.Related{
			Doc: findings[at].Doc, Pointer: findings[at].Pointer, Start: findings[at].Start, End: findings[at].End,
			Message: "follows from " + cause,
		})
	}
}
