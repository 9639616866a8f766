package rules

import (
	"fmt"

	"halfplane/analysis"
)

// Need is what the margin rules ask of this design: its targets, the policy and the built-in defaults together.
func (c *Case) Need() analysis.Need {
	return analysis.Need{
		PhaseMargin:   c.atLeast(phaseMarginLimit, "/targets/phase-margin"),
		GainMargin:    c.atLeast(gainMarginLimit, "/targets/gain-margin"),
		ModulusMargin: c.atLeast(modulusMarginLimit, "/targets/modulus-margin"),
	}
}

// CertificateWords says in one line what a proof came to.
func CertificateWords(proof *analysis.Proof) []string {
	if proof == nil {
		return nil
	}
	var lines []string
	for _, part := range certified(proof) {
		if part.certificate != nil {
			lines = append(lines, part.words())
		}
	}
	return lines
}

// certifiedMargin is one margin with its certificate.
type certifiedMargin struct {
	rule        *Rule
	name, unit  string
	certificate *analysis.Certificate
}

func certified(p *analysis.Proof) []certifiedMargin {
	return []certifiedMargin{
		{&phaseMargin, "phase margin", "deg", p.PhaseMargin},
		{&gainMargin, "gain margin", "dB", p.GainMargin},
		{&modulusMargin, "modulus margin", "", p.ModulusMargin},
	}
}

func (m certifiedMargin) words() string {
	c := m.certificate
	head := fmt.Sprintf("%s of at least %s", m.name, number(c.Limit, m.unit))
	switch c.Verdict {
	case analysis.Proved:
		return fmt.Sprintf("%s is proved at every point of the box (%s)", head, boxes(c.Boxes))
	case analysis.Refuted:
		if c.Value != c.Value { // NaN: the closed loop is unstable there, and has no such margin
			return head + " is refuted: the closed loop is unstable at a point of the box"
		}
		return fmt.Sprintf("%s is refuted: it is %s at a point of the box", head, finer(c.Value, c.Limit, m.unit))
	}
	return fmt.Sprintf("%s is undecided: %s", head, m.open())
}

// open says what stands in the way of a proof.
func (m certifiedMargin) open() string {
	c := m.certificate
	if c.Boxes == 0 || c.Left == 1 {
		return c.Why
	}
	return fmt.Sprintf("%s; %s of the box is left", c.Why, percent(c.Left))
}

// boxes is a count with its thousands apart.
func boxes(n int) string {
	if n == 1 {
		return "1 box"
	}
	digits := fmt.Sprint(n)
	for i := len(digits) - 3; i > 0; i -= 3 {
		digits = digits[:i] + "," + digits[i:]
	}
	return digits + " boxes"
}

// Unproved gives a note for each margin whose proof was asked for and stayed undecided.
func Unproved(c *Case, proof *analysis.Proof, today string) []Finding {
	if proof == nil {
		return nil
	}
	severity := notAssessed.Severity
	if s, set := c.Settings.Severities[notAssessed.Name]; set {
		severity = s
	}
	if severity == None {
		return nil
	}
	var notes []Finding
	for _, m := range certified(proof) {
		if m.certificate == nil || m.certificate.Verdict != analysis.Undecided {
			continue
		}
		f := c.at(m.rule.Place(c))
		f.Rule, f.Severity = notAssessed.Name, severity
		f.Message = fmt.Sprintf("the %s is not proved: %s", m.name, m.open())
		notes = append(notes, f)
	}
	waive(c, notes, today)
	return notes
}
