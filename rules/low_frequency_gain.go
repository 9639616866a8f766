package rules

import (
	"fmt"

	"halfplane/analysis"
)

var lowFrequencyGain = Rule{
	Name:     "low-frequency-gain",
	Group:    Loop,
	Severity: Warning,
	Sentence: "The loop's direct-current gain is high enough to hold the set-point, and the loop crosses one somewhere.",
	Formula:  "1/(1 + |T(0)|) ≤ dc-error; a pole at zero counts as 0",
	Source:   "common practice",
	Policy:   []Threshold{dcError},
	Example:  "compensator: {network: transfer-function, gain: 3, poles: [2 kHz]}   # no integrator",
	Hint:     "Measured is the part of a disturbance, and of the set-point, that stays at zero frequency. The amplifier's open-loop gain and a transconductance's output resistance end an integrator.",
	Reads:    Figures,
	Place:    gainPart,
	Decide: func(c *Case) []Finding {
		limit := c.threshold(dcError)
		corner, worst := c.worst(dcErrorOf)
		if corner == nil || worst <= limit && len(corner.Loop.Crossovers) > 0 {
			return nil
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("the loop's direct-current gain %s leaves an error of %s, limit %s", number(corner.Loop.DCGain, ""), percent(dcErrorOf(corner)), percent(limit))
		switch none := len(corner.Loop.Crossovers) == 0; {
		case none && corner.Loop.DCGain > 1:
			f.Message = "the loop gain is still above one at the end of the band in which it means anything: it never crosses one"
		case none:
			f.Message = fmt.Sprintf("the loop gain never reaches one: the output is not regulated (direct-current gain %s, error %s, limit %s)",
				number(corner.Loop.DCGain, ""), percent(dcErrorOf(corner)), percent(limit))
		}
		f.Formula = fmt.Sprintf("1/(1 + |T(0)|) = 1/(1 + %s) = %s; at most %s", short(corner.Loop.DCGain), percent(dcErrorOf(corner)), percent(limit))
		f.Measured, f.Limit, f.Nominal = asNumber(dcErrorOf(corner), ""), asNumber(limit, ""), asNumber(dcErrorOf(c.nominal()), "")
		c.relate(&f, "decides the direct-current gain", "/compensator/amplifier/open-loop-gain", "/compensator/output-resistance", "/compensator/transconductance")
		return []Finding{f}
	},
}

// dcErrorOf is the part of a disturbance that a corner's loop leaves at zero frequency.
func dcErrorOf(k *analysis.Corner) float64 {
	return loopFigure(k, func(k *analysis.Corner) float64 { return 1 / (1 + k.Loop.DCGain) })
}
