package rules

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/synthesis"
	"halfplane/schema"
)

// slopePath is the field of the external ramp.
const slopePath = "modulator.slope-compensation"

// steeperRamp proposes the smallest external ramp, to two digits, with which the inner current loop is neither unstable nor too lightly damped at any corner. Where none is stated
// one is written behind the current-sense gain.
func steeperRamp(c *Case, f *Finding, _ int) ([]Mend, bool) {
	if f.Severity < Warning {
		return nil, false
	}
	circuit := &c.Design.Nominal.Circuit
	from := circuit.Modulator.SlopeCompensation
	if from <= 0 { // a hundredth of the steepest that the sensed current can be
		from = 0.01 * circuit.Modulator.CurrentSenseGain * (circuit.InputVoltage + circuit.OutputVoltage) / circuit.Inductor.Inductance
	}
	for step := 1; step <= 80; step++ {
		slope, err := strconv.ParseFloat(strconv.FormatFloat(from*math.Pow(1.1, float64(step)), 'e', 1, 64), 64)
		if err != nil || !c.ramped(slope) {
			continue
		}
		if m, ok := c.withRamp(slope); ok {
			return []Mend{m}, false
		}
		return nil, false
	}
	return nil, false
}

// ramped says whether the rule has nothing graver than a note to say with another external ramp (V/s).
func (c *Case) ramped(slope float64) bool {
	d := synthesis.With(c.Design, []analysis.Setting{{Path: slopePath, Value: slope}})
	r, err := analysis.Analyse(context.Background(), d, analysis.Options{Depth: analysis.Quick, Jobs: 1})
	if err != nil {
		return false
	}
	tried := &Case{Spec: c.Spec, Design: d, Settings: c.Settings, Result: r, every: c.every}
	for _, rule := range c.every {
		if rule.Name != "slope-compensation" {
			continue
		}
		for _, left := range decide(tried, rule).Findings {
			if left.Severity >= Warning {
				return false
			}
		}
	}
	return true
}

// withRamp is the edit that states an external ramp.
func (c *Case) withRamp(slope float64) (Mend, bool) {
	pointer := pointerOf(slopePath)
	if q, ok := c.Spec.Quantity(pointer); ok {
		at, start, end, text, ok := schema.RewriteNominal(q, slope)
		if !ok || at.Doc != c.Spec.Document {
			return Mend{}, false
		}
		return Mend{
			Title: "slope-compensation " + string(at.Doc.Text[start:end]) + " → " + text,
			Edits: []Edit{{Doc: at.Doc, Pointer: pointer, Start: start, End: end, Text: text}},
		}, true
	}
	doc := c.Spec.Document
	modulator, gain := doc.Find("/modulator"), doc.FindEntry("/modulator/current-sense-gain")
	if modulator == nil || gain == nil || strings.HasSuffix(doc.Name, ".json") {
		return Mend{}, false
	}
	text := fmt.Sprintf("slope-compensation: %s mV/us", short(slope*1e-3))
	start := gain.Value.End
	if doc.Text[modulator.Start] == '{' {
		text = ", " + text
	} else {
		line := doc.Position(gain.KeyStart)
		text = "\n" + strings.Repeat(" ", line.Column-1) + text
		for start < len(doc.Text) && doc.Text[start] != '\n' && doc.Text[start] != '\r' { // behind the line's comment
			start++
		}
	}
	return Mend{Title: "slope-compensation → " + short(slope*1e-3) + " mV/us", Edits: []Edit{{Doc: doc, Pointer: pointer, Start: start, End: start, Text: text}}}, true
}
