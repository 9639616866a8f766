package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

var conditionalStability = Rule{
	Name:     "conditional-stability",
	Group:    Loop,
	Severity: Warning,
	Sentence: "A loop that is lost by less gain (a saturated or starting amplifier) has a good margin against that.",
	Formula:  "20·log10 |T| where T is real, negative and larger than one ≥ gain-reduction-margin; a loop without such a frequency holds",
	Source:   "H. Nyquist, \"Regeneration theory\", Bell System Technical Journal 11 (1932); 10 dB is common practice",
	Policy:   []Threshold{reductionMargin},
	Example:  "compensator:   # both zeros above the resonance: the phase passes −180° below crossover\n  network: type-3\n  upper-resistor: 10k\n  feedback-resistor: 10k\n  integrator-capacitor: 220p\n  lead-resistor: 330R\n  lead-capacitor: 220p",
	Hint:     "Measured is by how much the gain may fall. It does fall: at start-up, at a low input, and while the amplifier is at its stop. A plant that is unstable on its own always needs a least gain, and only the limit applies to it.",
	Reads:    Figures,
	Place:    gainPart,
	Decide: func(c *Case) []Finding {
		limit := c.threshold(reductionMargin)
		margin := func(k *analysis.Corner) float64 {
			if !k.Reached || k.Loop == nil || !k.Loop.Stable {
				return math.NaN()
			}
			return k.Loop.GainReductionMargin
		}
		corner, negative := c.worst(func(k *analysis.Corner) float64 { return -margin(k) })
		if corner == nil || -negative >= limit {
			return nil
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("the loop is stable only while its gain holds: it is lost by %s less gain, limit %s", number(-negative, "dB"), number(limit, "dB"))
		if n := corner.Loop.UnstablePlantPoles; n > 0 {
			f.Message = fmt.Sprintf("the plant has %s on its own and only the loop holds it: it is lost by %s less gain, limit %s",
				poles(n), number(-negative, "dB"), number(limit, "dB"))
		}
		f.Formula = fmt.Sprintf("20·log10(%s) = %s", short(math.Pow(10, -negative/20)), number(-negative, "dB"))
		f.Measured, f.Limit, f.Nominal = asNumber(-negative, "dB"), asNumber(limit, "dB"), asNumber(margin(c.nominal()), "dB")
		if c.unstable() != nil {
			// A loop that is lost at one corner is near to being lost at its neighbours.
			f.Cause = &Cause{Rule: "closed-loop-stability"}
		}
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}
