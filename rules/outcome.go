package rules

import (
	"fmt"
	"runtime/debug"
	"strings"

	"halfplane/analysis"
)

// Status is one of the four outcomes that a rule can have on a file.
type Status int

const (
	Holds Status = iota + 1
	Broken
	NotApplicable
	NotAssessed
)

// String is the status in words.
func (s Status) String() string {
	switch s {
	case Holds:
		return "holds"
	case Broken:
		return "broken"
	case NotApplicable:
		return "does not apply"
	case NotAssessed:
		return "not assessed"
	}
	return "unknown"
}

// Key is the status as a word of the output forms.
func (s Status) Key() string { return strings.ReplaceAll(s.String(), " ", "-") }

// Outcome is what became of one rule on one file. A rule that is broken at some corners and could not be assessed at
// others has its findings and Reason both.
type Outcome struct {
	Rule     *Rule
	Status   Status
	Reason   string // what was missing, "" when everything could be assessed
	Findings []Finding
	// Unreached says that the only thing missing is an operating point: duty-range reports that.
	Unreached bool
	Panic     string // what a rule that failed inside the program said, "" normally
}

// Outcomes applies every rule to the case, in the order of the catalogue. Consequences are not tied to their causes yet;
// Run does that.
func Outcomes(c *Case) []Outcome {
	outcomes := make([]Outcome, 0, len(list))
	for _, rule := range list {
		outcomes = append(outcomes, decide(c, rule))
	}
	return outcomes
}

// decide applies one rule. A panic inside it becomes part of its outcome, so that everything else is still reported.
func decide(c *Case, rule *Rule) (out Outcome) {
	out = Outcome{Rule: rule, Status: Holds}
	defer func() {
		if fault := recover(); fault != nil {
			out.Status, out.Findings = NotAssessed, nil
			out.Panic = fmt.Sprintf("%v (%s)", fault, faultPlace(debug.Stack()))
		}
	}()
	if rule.Decide == nil {
		return out
	}
	if rule.Applies != nil && !rule.Applies(c) {
		out.Status = NotApplicable
		return out
	}
	if missing := missingNeeds(c, rule); missing != "" {
		out.Status, out.Reason = NotAssessed, missing
		return out
	}
	out.Reason, out.Unreached = uncovered(c, rule)
	if rule.Unassessed != nil && out.Reason == "" {
		out.Reason = rule.Unassessed(c)
		out.Unreached = out.Reason != "" && !c.fullLoad().Reached
	}
	out.Findings = rule.Decide(c)
	switch {
	case len(out.Findings) > 0:
		out.Status = Broken
	case out.Reason != "":
		out.Status = NotAssessed
	}
	for i := range out.Findings {
		stamp(c, rule, &out.Findings[i])
	}
	return out
}

// stamp puts on a finding what the rule does not say itself.
func stamp(c *Case, rule *Rule, f *Finding) {
	f.Rule = rule.Name
	if f.Severity == 0 {
		f.Severity = rule.Severity
	}
	if rule.Reads != Figures {
		f.Corner = c.withoutCompensator(f.Corner)
	}
	f.CornerWords = c.cornerWords(f.Corner)
	f.Message = toldApart(f)
}

// toldApart is a finding's message with the measured figure to more digits where it reads like the limit to three. The
// measured figure is the first of the two in every message.
func toldApart(f *Finding) string {
	if f.Measured == nil || f.Limit == nil || f.Measured.Unit != f.Limit.Unit {
		return f.Message
	}
	measured, limit := f.Measured.Value, f.Limit.Value
	for _, unit := range []string{f.Measured.Unit, "%"} {
		if three := number(measured, unit); three == number(limit, unit) && strings.Count(f.Message, three) > 1 {
			return strings.Replace(f.Message, three, finer(measured, limit, unit), 1)
		}
	}
	return f.Message
}

func missingNeeds(c *Case, rule *Rule) string {
	var missing []string
	for _, pointer := range rule.Needs {
		if !c.Spec.Has(pointer) {
			missing = append(missing, lastKey(pointer))
		}
	}
	switch len(missing) {
	case 0:
		return ""
	case 1:
		return missing[0] + " is not given"
	}
	return strings.Join(missing, ", ") + " are not given"
}

// knows says whether a corner has what a rule reads.
func (r Reading) knows(corner *analysis.Corner) bool {
	switch r {
	case Operation:
		return corner.Reached
	case Model:
		return corner.Reached && corner.Plant.HasModel
	case Figures:
		return corner.Reached && corner.Loop != nil
	}
	return true
}

// faultPlace is the source line at which a program fault arose, without the machine's folders.
func faultPlace(stack []byte) string {
	afterPanic := false
	for line := range strings.SplitSeq(string(stack), "\n") {
		if strings.HasPrefix(line, "panic(") {
			afterPanic = true
			continue
		}
		line = strings.TrimSpace(line)
		if !afterPanic || !strings.Contains(line, ".go:") || strings.Contains(line, "runtime/") {
			continue
		}
		line, _, _ = strings.Cut(line, " ")
		parts := strings.Split(line, "/")
		return strings.Join(parts[max(0, len(parts)-2):], "/")
	}
	return "place unknown"
}
