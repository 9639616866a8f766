package rules

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var conductionMode = Rule{
	Name:     "conduction-mode",
	Group:    Operating,
	Severity: Note,
	Also:     []Severity{Warning},
	Sentence: "Every corner has the conduction mode that is intended; without an intention, all corners have one mode.",
	Formula:  "continuous where the load exceeds the critical current, at which the inductor current just touches zero",
	Source:   "common practice",
	Example:  "conduction: ccm\nload: {current: {min: 0.1 A, nominal: 1 A, max: 2 A}}   # discontinuous below 0.6 A",
	Hint:     "Measured is the load at the corner furthest into the other mode, the limit is the critical current there. The message gives the critical current at each input voltage with the parts of that corner. A loop in both modes is judged in both.",
	Reads:    Operation,
	Place: func(c *Case) string {
		if c.Spec.Has("/conduction") && c.Spec.Text("/conduction") != "either" {
			return "/conduction"
		}
		return "/inductor/inductance"
	},
	Decide: func(c *Case) []Finding {
		light, heavy := modeExtremes(c)
		intended := c.Spec.Text("/conduction")
		var f Finding
		switch {
		case intended == "ccm" && light != nil:
			f = c.atCorner("/conduction", light)
			f.Severity = Warning
			f.Message = fmt.Sprintf("continuous conduction is intended, but the inductor current is discontinuous %s", criticalWords(c, light))
		case intended == "dcm" && heavy != nil:
			f = c.atCorner("/conduction", heavy)
			f.Severity = Warning
			f.Message = fmt.Sprintf("discontinuous conduction is intended, but the inductor current is continuous above %s", strings.TrimPrefix(criticalWords(c, heavy), "below "))
		case intended != "ccm" && intended != "dcm" && light != nil && heavy != nil:
			f = c.atCorner("/inductor/inductance", light)
			f.Message = fmt.Sprintf("both conduction modes occur: discontinuous %s", criticalWords(c, light))
		default:
			return nil
		}
		corner := &analysis.Corner{At: f.Corner}
		load, critical := c.valueAt(corner, "load.current"), c.boundary(corner)
		f.Formula = fmt.Sprintf("load %s, critical current %s at this corner", number(load, "A"), number(critical, "A"))
		f.Measured, f.Limit = asNumber(load, "A"), asNumber(critical, "A")
		f.Nominal = asNumber(c.boundary(c.nominal()), "A")
		c.relate(&f, "sets the critical current", "/load/current", "/input-voltage", "/inductor/inductance", "/second-inductor/inductance", "/switching-frequency")
		return []Finding{f}
	},
}

// modeExtremes are the discontinuous corner with the lowest load over critical current, and the continuous one with the highest;
// nil where a mode does not occur.
func modeExtremes(c *Case) (light, heavy *analysis.Corner) {
	light = c.deepest(func(k *analysis.Corner) bool { return k.Reached && k.Plant.Mode == plant.Discontinuous }, -1)
	heavy = c.deepest(continuous, 1)
	return light, heavy
}

// deepest finds the corner of a mode that lies furthest from the boundary: sign 1 asks for the highest load over critical
// current, −1 for the lowest. The critical current falls with the inductance, so that one corner for each input voltage, the
// one with the extreme product of load and inductance, is solved for.
func (c *Case) deepest(of func(*analysis.Corner) bool, sign float64) *analysis.Corner {
	candidates := make(map[float64]*analysis.Corner)
	var inputs []float64
	for i := range c.Result.Corners {
		k := &c.Result.Corners[i]
		if !of(k) {
			continue
		}
		input := c.valueAt(k, "input-voltage")
		held, known := candidates[input]
		if !known {
			inputs = append(inputs, input)
		}
		product := func(k *analysis.Corner) float64 {
			return sign * c.valueAt(k, "load.current") * k.Plant.EffectiveInductance
		}
		if !known || product(k)-product(held) > 1e-9*math.Abs(product(held)) {
			candidates[input] = k
		}
	}
	inputs = slices.DeleteFunc(inputs, func(volts float64) bool {
		axis := c.axis("input-voltage")
		return len(inputs) > 3 && volts != axis.Min && volts != axis.Nominal && volts != axis.Max
	})
	var r race
	for _, input := range inputs {
		k := candidates[input]
		ratio := c.valueAt(k, "load.current") / c.boundary(k)
		if math.IsNaN(ratio) { // a synchronous rectifier knows no boundary
			ratio = c.valueAt(k, "load.current")
		}
		r.enter(k, sign*ratio)
	}
	return r.leader
}

// criticalWords says the load below which each input voltage leaves continuous conduction, with a corner's parts.
func criticalWords(c *Case, parts *analysis.Corner) string {
	input := c.axis("input-voltage")
	var words []string
	for _, volts := range distinct(input.Min, input.Nominal, input.Max) {
		at := append(slices.Clone(parts.At), analysis.Setting{Path: "input-voltage", Value: volts})
		load := c.boundary(&analysis.Corner{At: at})
		if !math.IsNaN(load) {
			words = append(words, number(load, "A")+" at "+number(volts, "V")+" in")
		}
	}
	if len(words) == 0 {
		return "at the lightest loads"
	}
	return "below " + strings.Join(words, ", ")
}
