package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var inputFilter = Rule{
	Name:     "input-filter",
	Group:    Plant,
	Severity: Warning,
	Also:     []Severity{Error},
	Sentence: "The input filter's output impedance stays well below the converter's input impedances, so that the loop does not see the filter.",
	Formula:  "|Zo/ZN| and |Zo/ZD| < impedance-ratio up to half the filter frequency",
	Source:   "R. D. Middlebrook, \"Input filter considerations in design and application of switching regulators\", IEEE IAS Annual Meeting (1976)",
	Policy:   []Threshold{impedanceRatio},
	Example:  "input-filter: {inductance: 22 uH, resistance: 5 mΩ, capacitance: 10 uF, esr: 2 mΩ}   # rings at 10.7 kHz",
	Hint:     "Measured is the larger of the two ratios, at its largest up to half the filter's frequency. A warning says that the loop sees the filter; an error that the loop with it is unstable or misses a margin that the loop without it meets.",
	Reads:    Model,
	Place:    here("/input-filter"),
	Applies:  func(c *Case) bool { return c.Spec.Has("/input-filter") },
	Decide: func(c *Case) []Finding {
		limit := c.threshold(impedanceRatio)
		corner, ratio := c.worstStage(impedance)
		if corner == nil || ratio < limit {
			return nil
		}
		harm, at := filterHarm(c)
		if harm != "" {
			corner, ratio = at, impedance(at)
		}
		f := c.atCorner("/input-filter", corner)
		which := "ZN"
		if corner.Plant.Input.ZoOverZd > corner.Plant.Input.ZoOverZn {
			which = "ZD"
		}
		f.Message = fmt.Sprintf("the input filter's output impedance reaches %s times the converter's %s, limit %s", number(ratio, ""), which, number(limit, ""))
		f.Formula = fmt.Sprintf("max |Zo/%s| < %s; it is %s", which, short(limit), short(ratio))
		f.Measured, f.Limit, f.Nominal = asNumber(ratio, ""), asNumber(limit, ""), asNumber(impedance(c.nominal()), "")
		if harm != "" {
			f.Severity = Error
			f.Message += ", and " + harm
		}
		c.relate(&f, "decides the filter's impedance", "/input-filter/inductance", "/input-filter/capacitance", "/input-filter/damping-resistance", "/input-filter/damping-capacitance")
		c.relate(&f, "decides the converter's input impedance", "/input-voltage", "/load/current")
		return []Finding{f}
	},
}

func hasFilterFigures(k *analysis.Corner) bool {
	return k.Reached && k.Plant.HasModel && k.Plant.Input != nil
}

// impedance is the larger of a corner's two Middlebrook ratios, NaN without a filter or model.
func impedance(k *analysis.Corner) float64 {
	if !hasFilterFigures(k) {
		return math.NaN()
	}
	return math.Max(k.Plant.Input.ZoOverZn, k.Plant.Input.ZoOverZd)
}

// filterHarm looks for what the filter does to the loop where a ratio is one or more: an unstable loop, or a missed margin
// that the loop without the filter meets. It gives the corner with the lowest phase margin of those.
func filterHarm(c *Case) (harm string, at *analysis.Corner) {
	bare := *c.Design
	bare.Nominal.Circuit.Filter = plant.Filter{}
	lowest := math.Inf(1)
	for i := range c.Result.Corners {
		k := &c.Result.Corners[i]
		if !(impedance(k) >= 1) || k.Loop == nil || at != nil && !(k.Loop.PhaseMargin < lowest) {
			continue
		}
		missed := missedTarget(c, k)
		if missed == "" {
			continue
		}
		without, err := analysis.At(&bare, withoutFilter(k.At))
		if err != nil || without.Loop == nil || missedTarget(c, &without) != "" {
			continue
		}
		harm, at, lowest = missed, k, k.Loop.PhaseMargin
	}
	return harm, at
}

// missedTarget says what a corner's loop misses, "" when it is stable and meets its margins.
func missedTarget(c *Case, k *analysis.Corner) string {
	switch limit := c.atLeast(phaseMarginLimit, "/targets/phase-margin"); {
	case !k.Loop.Stable:
		return "with it the closed loop is unstable"
	case k.Loop.PhaseMargin < limit:
		return fmt.Sprintf("with it the phase margin %s misses %s", number(k.Loop.PhaseMargin, "deg"), number(limit, "deg"))
	}
	switch limit := c.atLeast(gainMarginLimit, "/targets/gain-margin"); {
	case k.Loop.GainMargin < limit:
		return fmt.Sprintf("with it the gain margin %s misses %s", number(k.Loop.GainMargin, "dB"), number(limit, "dB"))
	}
	return ""
}

// withoutFilter drops a corner's settings of the input filter.
func withoutFilter(settings []analysis.Setting) []analysis.Setting {
	var kept []analysis.Setting
	for _, s := range settings {
		if !isFilterPath(s.Path) {
			kept = append(kept, s)
		}
	}
	return kept
}

func isFilterPath(path string) bool {
	const prefix = "input-filter."
	return len(path) > len(prefix) && path[:len(prefix)] == prefix
}
