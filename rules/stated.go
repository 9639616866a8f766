package rules

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

// statedFigure is a figure that a file can state and that is recomputed at nominal input, full load and nominal parts.
type statedFigure struct {
	key   string
	unit  string
	of    func(*plant.Solution) float64
	ideal func(*plant.Ideal) float64 // nil: no closed form of its own
	model bool                       // needs a small-signal model
	// inductive says that the turns ratio is in the figure mainly through the inductance, so that a slip which can be read
	// either way is one of reflection.
	inductive bool
}

// statedFigures are the figures in which a turns ratio or a reflected inductance can slip.
func statedFigures() []statedFigure {
	return []statedFigure{
		{key: "turns-ratio", of: func(s *plant.Solution) float64 { return s.TurnsRatio }},
		{key: "effective-inductance", unit: "H", inductive: true, of: func(s *plant.Solution) float64 { return s.EffectiveInductance }},
		{key: "duty", of: func(s *plant.Solution) float64 { return s.Duty }, ideal: func(i *plant.Ideal) float64 { return i.Duty }},
		{key: "line-gain", model: true, of: func(s *plant.Solution) float64 { return s.LineGain }, ideal: func(i *plant.Ideal) float64 { return i.LineGain }},
		{key: "control-gain", model: true, of: func(s *plant.Solution) float64 { return s.ControlGain }, ideal: func(i *plant.Ideal) float64 { return i.ControlGain }},
		{key: "rhp-zero", unit: "Hz", model: true, inductive: true, of: func(s *plant.Solution) float64 { return s.RHPZero }, ideal: func(i *plant.Ideal) float64 { return i.RHPZero }},
		{key: "resonance", unit: "Hz", model: true, inductive: true, of: func(s *plant.Solution) float64 { return s.Resonance }, ideal: func(i *plant.Ideal) float64 { return i.Resonance }},
	}
}

func statedPointer(key string) string { return "/stated/" + key }

// anyStated says whether a file states any of the figures above.
func anyStated(c *Case) bool {
	for _, figure := range statedFigures() {
		if c.Spec.Has(statedPointer(figure.key)) {
			return true
		}
	}
	return false
}

// statedGap names what keeps a stated figure from being recomputed, "" when nothing does.
func statedGap(c *Case) string {
	corner := c.fullLoad()
	if !corner.Reached {
		return "no duty reaches the output voltage at nominal input and full load"
	}
	if corner.Plant.HasModel {
		return ""
	}
	var keys []string
	for _, figure := range statedFigures() {
		if figure.model && c.Spec.Has(statedPointer(figure.key)) {
			keys = append(keys, figure.key)
		}
	}
	if len(keys) == 0 {
		return ""
	}
	return fmt.Sprintf("no model for discontinuous conduction of a %s to recompute %s with",
		c.Design.Nominal.Circuit.Topology, strings.Join(keys, ", "))
}

// judgeStated compares every stated figure with its recomputed value and gives the findings that belong to a rule: the
// rule's own figure whenever it disagrees, any other figure when exactly one slip explains it and that slip is the rule's.
func judgeStated(c *Case, rule string) []Finding {
	corner := c.fullLoad()
	if !corner.Reached {
		return nil
	}
	var findings []Finding
	for _, figure := range statedFigures() {
		q, stated := c.Spec.Quantity(statedPointer(figure.key))
		got := figure.of(&corner.Plant)
		if !stated || figure.model && !corner.Plant.HasModel || math.IsNaN(got) || agrees(q.Nominal, got, c.threshold(statedTolerance)) {
			continue
		}
		belongs, words := nameSlip(c, corner, figure, q.Nominal, got)
		if owner := ownerOf(figure.key); owner != "" {
			belongs = owner
		}
		if belongs != rule {
			continue
		}
		findings = append(findings, statedFinding(c, corner, figure, q.Nominal, got, words))
	}
	return findings
}

// ownerOf is the rule that reports a figure's disagreement whatever the slip, "" for the others.
func ownerOf(key string) string {
	switch key {
	case "turns-ratio":
		return "turns-ratio"
	case "effective-inductance":
		return "reflected-inductance"
	}
	return ""
}

func agrees(stated, got, tolerance float64) bool {
	return math.Abs(math.Abs(stated)-got) <= tolerance*got
}

func statedFinding(c *Case, corner *analysis.Corner, figure statedFigure, stated, got float64, slip string) Finding {
	pointer := statedPointer(figure.key)
	f := c.atCorner(pointer, corner)
	f.Message = fmt.Sprintf("stated %s %s is not the %s that follows from the parts (limit ±%s)",
		spaced(figure.key), number(stated, figure.unit), number(got, figure.unit), percent(c.threshold(statedTolerance)))
	if slip != "" {
		f.Message += ": it fits " + slip
	}
	f.Formula = fmt.Sprintf("%s / %s = %s; it should be within 1 ± %s", number(stated, figure.unit), number(got, figure.unit), short(math.Abs(stated)/got), short(c.threshold(statedTolerance)))
	f.Measured, f.Limit, f.Nominal = asNumber(stated, figure.unit), asNumber(got, figure.unit), asNumber(got, figure.unit)
	c.relate(&f, "decides the figure", "/turns", "/inductor/inductance", "/inductor/side", "/input-voltage", "/output-voltage")
	return f
}
