package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

var inputFilterDamping = Rule{
	Name:     "input-filter-damping",
	Group:    Plant,
	Severity: Warning,
	Sentence: "The input filter alone is damped: no complex pole pair rings.",
	Formula:  "|p| / (−2·Re p) < filter-quality for every complex pole pair of the filter, the converter taken away",
	Source:   "R. D. Middlebrook, \"Design techniques for preventing input filter oscillations\", Powercon 5 (1978)",
	Policy:   []Threshold{filterQuality},
	Example:  "input-filter: {inductance: 22 uH, resistance: 5 mΩ, capacitance: 10 uF, esr: 2 mΩ}   # no damping branch",
	Hint:     "Measured is the quality of the sharpest pole pair with the converter taken away. A branch of three to five times the capacitance with a resistor near √(L/C) damps it.",
	Reads:    Model,
	Place:    firstOf("/input-filter/damping-resistance", "/input-filter"),
	Applies:  func(c *Case) bool { return c.Spec.Has("/input-filter") },
	Decide: func(c *Case) []Finding {
		limit := c.threshold(filterQuality)
		quality := func(k *analysis.Corner) float64 {
			if !hasFilterFigures(k) {
				return math.NaN()
			}
			return k.Plant.Input.Quality
		}
		corner, worst := c.worstStage(quality)
		if corner == nil || worst < limit {
			return nil
		}
		f := c.atCorner(firstOf("/input-filter/damping-resistance", "/input-filter")(c), corner)
		f.Message = fmt.Sprintf("the input filter alone rings with a quality of %s, limit %s", number(worst, ""), number(limit, ""))
		f.Formula = fmt.Sprintf("|p| / (−2·Re p) < %s; it is %s", short(limit), short(worst))
		f.Measured, f.Limit, f.Nominal = asNumber(worst, ""), asNumber(limit, ""), asNumber(quality(c.nominal()), "")
		c.relate(&f, "decides the damping", "/input-filter/damping-capacitance", "/input-filter/inductance", "/input-filter/capacitance", "/input-filter/esr", "/input-filter/resistance")
		return []Finding{f}
	},
}
