package rules

import (
	"slices"

	"halfplane/schema"
)

// RunOptions choose rules by name; empty Only means all of them.
type RunOptions struct {
	Only, Without []string
	Today         string // the day that waivers are judged on, YYYY-MM-DD; "": none has run out
}

func (o RunOptions) chosen(name string) bool {
	return (len(o.Only) == 0 || slices.Contains(o.Only, name)) && !slices.Contains(o.Without, name)
}

// Judgement is all that the rules say about a case.
type Judgement struct {
	Findings []Finding // worded and sorted
	Outcomes []Outcome // of the rules that were chosen, in the order of the catalogue
}

// Run applies the rules to a case and gives their findings, worded and sorted: what is broken, what could not be assessed,
// and what failed inside the program. Consequences name their cause.
func Run(c *Case, o RunOptions) []Finding { return Judge(c, o).Findings }

// Judge is Run that also tells what became of each rule.
func Judge(c *Case, o RunOptions) Judgement {
	var j Judgement
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
			j.Findings = append(j.Findings, f)
		}
		switch {
		case out.Panic != "" && o.chosen(internal.Name):
			j.Findings = append(j.Findings, Internal(c.Spec.Document, "rule "+rule.Name+" failed inside the program: "+out.Panic))
		case out.Reason != "" && o.chosen(notAssessed.Name):
			j.Findings = appendNotAssessed(j.Findings, c, &out)
		}
		j.Outcomes = append(j.Outcomes, out)
	}
	tieCauses(c, j.Findings)
	waive(c, j.Findings, o.Today)
	j.Findings = append(j.Findings, keep(c, j, o)...)
	for i := range j.Outcomes { // the rules of the runner itself
		if out := &j.Outcomes[i]; out.Rule.Decide == nil && broken(j.Findings, out.Rule) != nil {
			out.Status = Broken
		}
	}
	nameDeciders(c, j.Findings)
	Sort(j.Findings)
	return j
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
	f.About, f.Reason = out.Rule.Name, out.Reason
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
