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
	reads Reading // what must be known of the corner
	of    func(*analysis.Corner, *plant.Circuit) float64
	ideal func(*plant.Ideal) float64 // nil: no closed form of its own
	// inductive says that the turns ratio is in the figure mainly through the inductance, so that a slip which can be read
	// either way is one of reflection.
	inductive bool
	signed    bool   // a negative value is another figure, not another way to write the same
	absent    string // why the figure need not exist, "" where it always does
}

// statedFigures are the figures of the key `stated`.
func statedFigures() []statedFigure {
	of := func(figure func(*plant.Solution) float64) func(*analysis.Corner, *plant.Circuit) float64 {
		return func(k *analysis.Corner, _ *plant.Circuit) float64 { return figure(&k.Plant) }
	}
	return []statedFigure{
		{key: "turns-ratio", reads: Operation, of: of(func(s *plant.Solution) float64 { return s.TurnsRatio })},
		{key: "effective-inductance", unit: "H", reads: Operation, inductive: true, of: of(func(s *plant.Solution) float64 { return s.EffectiveInductance })},
		{key: "duty", reads: Operation, of: of(func(s *plant.Solution) float64 { return s.Duty }), ideal: func(i *plant.Ideal) float64 { return i.Duty }},
		{key: "line-gain", reads: Model, of: of(func(s *plant.Solution) float64 { return s.LineGain }), ideal: func(i *plant.Ideal) float64 { return i.LineGain }},
		{key: "control-gain", reads: Model, of: of(func(s *plant.Solution) float64 { return s.ControlGain }), ideal: func(i *plant.Ideal) float64 { return i.ControlGain }},
		{key: "rhp-zero", unit: "Hz", reads: Model, inductive: true, absent: "the control-to-output response has no zero in the right half-plane",
			of: of(func(s *plant.Solution) float64 { return s.RHPZero }), ideal: func(i *plant.Ideal) float64 { return i.RHPZero }},
		{key: "resonance", unit: "Hz", reads: Model, inductive: true, absent: "the power stage has no resonance",
			of: of(func(s *plant.Solution) float64 { return s.Resonance }), ideal: func(i *plant.Ideal) float64 { return i.Resonance }},
		{key: "esr-zero", unit: "Hz", reads: Model, absent: "no ESR is given for the output capacitor",
			of: of(func(s *plant.Solution) float64 { return s.ESRZero }), ideal: func(i *plant.Ideal) float64 { return i.ESRZero }},
		{key: "critical-current", unit: "A", reads: Operation, inductive: true, of: criticalCurrent},
		{key: "crossover", unit: "Hz", reads: Figures, absent: "the loop gain never crosses one",
			of: func(k *analysis.Corner, _ *plant.Circuit) float64 { return k.Loop.Crossover }},
		{key: "phase-margin", unit: "deg", reads: Figures, signed: true, absent: "the loop gain never crosses one",
			of: func(k *analysis.Corner, _ *plant.Circuit) float64 { return k.Loop.PhaseMargin }},
	}
}

// criticalCurrent is the load (A) at which the inductor current just touches zero; with a synchronous rectifier it goes on
// below, and the figure is the same.
func criticalCurrent(_ *analysis.Corner, c *plant.Circuit) float64 {
	diode := *c
	diode.Synchronous = false
	return plant.CriticalCurrent(&diode)
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
	var keys []string
	for _, figure := range statedFigures() {
		if c.Spec.Has(statedPointer(figure.key)) && !figure.reads.knows(corner) {
			keys = append(keys, figure.key)
		}
	}
	if len(keys) == 0 {
		return ""
	}
	return fmt.Sprintf("no model for discontinuous conduction of a %s to recompute %s with",
		c.Design.Nominal.Circuit.Topology, strings.Join(keys, ", "))
}

// judgeStated compares every stated figure with its recomputed value and gives the findings that belong to a rule: its own
// figure whenever that disagrees, any other figure by the slip that explains it, and to stated-figure what is left.
func judgeStated(c *Case, rule string) []Finding {
	corner := c.fullLoad()
	if !corner.Reached {
		return nil
	}
	var findings []Finding
	for _, figure := range statedFigures() {
		q, stated := c.Spec.Quantity(statedPointer(figure.key))
		if !stated || !figure.reads.knows(corner) {
			continue
		}
		got := figure.of(corner, c.circuit(corner.At))
		if math.IsNaN(got) {
			if rule == statedFigureName && figure.absent != "" {
				findings = append(findings, absentFinding(c, corner, figure, q.Nominal))
			}
			continue
		}
		if figure.agrees(q.Nominal, got, c.threshold(statedTolerance)) {
			continue
		}
		belongs, words := nameSlip(c, corner, figure, q.Nominal, got)
		switch owner := ownerOf(figure.key); {
		case owner != "":
			belongs = owner
		case belongs == "":
			belongs = statedFigureName
		}
		if belongs == rule {
			findings = append(findings, statedFinding(c, corner, figure, q.Nominal, got, words))
		}
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

// agrees says whether a stated value is a figure to within a tolerance. Magnitudes are compared unless the sign has a meaning.
func (f statedFigure) agrees(stated, figure, tolerance float64) bool {
	if !f.signed {
		stated, figure = math.Abs(stated), math.Abs(figure)
	}
	return math.Abs(stated-figure) <= tolerance*math.Abs(figure)
}

func statedFinding(c *Case, corner *analysis.Corner, figure statedFigure, stated, got float64, slip string) Finding {
	f := c.atCorner(statedPointer(figure.key), corner)
	f.Message = fmt.Sprintf("stated %s %s is not the %s that follows from the parts (limit ±%s)",
		spaced(figure.key), number(stated, figure.unit), number(got, figure.unit), percent(c.threshold(statedTolerance)))
	if slip != "" {
		f.Message += ": it fits " + slip
	}
	f.Formula = fmt.Sprintf("%s / %s = %s; it should be within 1 ± %s", number(stated, figure.unit), bracketed(got, figure.unit), number(stated/got, ""), short(c.threshold(statedTolerance)))
	f.Measured, f.Limit, f.Nominal = asNumber(stated, figure.unit), asNumber(got, figure.unit), asNumber(got, figure.unit)
	c.relate(&f, "decides the figure", deciding(figure)...)
	return f
}

// absentFinding is about a stated figure that this converter does not have.
func absentFinding(c *Case, corner *analysis.Corner, figure statedFigure, stated float64) Finding {
	f := c.atCorner(statedPointer(figure.key), corner)
	why := figure.absent
	if corner.Plant.Mode == plant.Discontinuous && figure.reads == Model && figure.key != "esr-zero" {
		why = "conduction is discontinuous at nominal input and full load"
	}
	f.Message = fmt.Sprintf("stated %s %s does not exist here: %s", spaced(figure.key), number(stated, figure.unit), why)
	f.Measured = asNumber(stated, figure.unit)
	c.relate(&f, "decides the figure", "/topology", "/modulator/scheme")
	return f
}

// deciding lists what a figure follows from.
func deciding(figure statedFigure) []string {
	switch {
	case figure.reads == Figures:
		return []string{"/compensator", "/modulator/ramp-amplitude", "/modulator/current-sense-gain", "/input-voltage", "/load/current"}
	case figure.key == "esr-zero":
		return []string{"/output-capacitor", "/output-capacitors"}
	}
	pointers := []string{"/turns", "/inductor/inductance", "/inductor/side", "/input-voltage", "/output-voltage"}
	if figure.key == "resonance" {
		pointers = append(pointers, "/output-capacitor", "/output-capacitors")
	}
	return pointers
}
