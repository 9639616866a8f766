package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

const crossoverTarget = "/targets/crossover"

var crossoverRange = Rule{
	Name:     "crossover-range",
	Group:    Loop,
	Severity: Warning,
	Sentence: "Crossover is inside the target range at every corner.",
	Formula:  "targets.crossover.min ≤ fc ≤ targets.crossover.max",
	Source:   "common practice",
	Example:  "targets: {crossover: {min: 2 kHz, max: 6 kHz}}   # the corners spread from 1.4 kHz to 5.3 kHz",
	Hint:     "Measured is the crossover furthest outside by ratio, the limit the end of the range that it passes. A plain number as target is the upper end.",
	Reads:    Figures,
	Place:    targetOrGainPart(crossoverTarget),
	Moves:    movedCrossover,
	Applies:  func(c *Case) bool { return c.Spec.Has(crossoverTarget) },
	Decide: func(c *Case) []Finding {
		low, high := crossoverLimits(c)
		corner, excess := c.worst(func(k *analysis.Corner) float64 {
			fc := crossover(k)
			if k.Loop != nil && k.Reached && math.IsNaN(fc) {
				return math.MaxFloat64 // it never crosses: further out than any frequency
			}
			return math.Max(fc/high, low/fc)
		})
		if corner == nil || excess <= 1 {
			return nil
		}
		f := c.atCorner(crossoverTarget, corner)
		fc := corner.Loop.Crossover
		limit := high
		switch {
		case math.IsNaN(fc):
			limit = low
			f.Message = fmt.Sprintf("the loop gain never crosses one, target %s to %s", number(low, "Hz"), number(high, "Hz"))
		case fc > high:
			f.Message = fmt.Sprintf("crossover %s is above the target range's upper end, %s", number(fc, "Hz"), number(high, "Hz"))
		default:
			limit = low
			f.Message = fmt.Sprintf("crossover %s is below the target range's lower end, %s", number(fc, "Hz"), number(low, "Hz"))
		}
		f.Formula = fmt.Sprintf("%s ≤ fc ≤ %s; fc = %s", number(low, "Hz"), number(high, "Hz"), number(fc, "Hz"))
		f.Measured, f.Limit, f.Nominal = asNumber(fc, "Hz"), asNumber(limit, "Hz"), nominalCrossover(c)
		c.relate(&f, "sets the gain at crossover", gainPart(c))
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}

// crossoverLimits are the ends of the target range (Hz). A plain number is an upper limit, as it is for a duty limit.
func crossoverLimits(c *Case) (low, high float64) {
	q, _ := c.Spec.Quantity(crossoverTarget)
	if !q.Spread {
		return 0, q.Nominal
	}
	return q.Min, q.Max
}
