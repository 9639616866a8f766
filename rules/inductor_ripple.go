package rules

import (
	"fmt"
)

var inductorRipple = Rule{
	Name:     "inductor-ripple",
	Group:    Operating,
	Severity: Note,
	Sentence: "At nominal input and full load the inductor's ripple is a usual part of its average current.",
	Formula:  "ripple-band.min ≤ peak-to-peak ripple / average of one phase ≤ ripple-band.max",
	Source:   "common practice",
	Policy:   []Threshold{rippleBandLow, rippleBandHigh},
	Example:  "inductor: {inductance: 470 uH}   # ripple 3 % of the average",
	Hint:     "Above the band the part carries much alternating flux and the load must be heavy to stay continuous; below it the part is large and slow and gives current mode little to compare. A flyback that runs deep in its ripple is a choice: widen the band in the policy.",
	Reads:    Declaration,
	Place:    here("/inductor/inductance"),
	Applies: func(c *Case) bool {
		return c.Spec.Text("/conduction") != "dcm" && continuous(c.fullLoad())
	},
	Decide: func(c *Case) []Finding {
		corner := c.fullLoad()
		low, high := c.threshold(rippleBandLow), c.threshold(rippleBandHigh)
		ratio := corner.Plant.InductorRipple / corner.Plant.InductorCurrent
		if ratio >= low && ratio <= high {
			return nil
		}
		limit, side := high, "above"
		if ratio < low {
			limit, side = low, "below"
		}
		f := c.atCorner("/inductor/inductance", corner)
		f.Message = fmt.Sprintf("inductor ripple %s is %s of the average %s, %s the usual band (%s to %s)",
			number(corner.Plant.InductorRipple, "A"), percent(ratio), number(corner.Plant.InductorCurrent, "A"), side, percent(low), percent(high))
		f.Formula = fmt.Sprintf("%s / %s = %s", number(corner.Plant.InductorRipple, "A"), number(corner.Plant.InductorCurrent, "A"), short(ratio))
		f.Measured, f.Limit, f.Nominal = asNumber(ratio, ""), asNumber(limit, ""), asNumber(ratio, "")
		c.relate(&f, "decides the ripple", "/switching-frequency", "/input-voltage", "/output-voltage", "/load/current")
		return []Finding{f}
	},
}
