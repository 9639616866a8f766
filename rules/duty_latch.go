package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var dutyLatch = Rule{
	Name:     "duty-latch",
	Group:    Operating,
	Severity: Warning,
	Sentence: "The upper duty limit lies below the duty at which the lossy output voltage peaks, so that a saturated loop comes back.",
	Formula:  "duty-limit.max < D at the peak of vo(D), the load taken as V/I, at every corner",
	Source:   "R. D. Middlebrook, S. Ćuk, \"A general unified approach to modelling switching-converter power stages\", IEEE PESC (1976), for vo(D) with losses; the rule is common practice",
	Example:  "topology: boost\ninput-voltage: {min: 9 V, max: 16 V}\noutput-voltage: 24 V\nmodulator: {scheme: voltage-mode, ramp-amplitude: 1.8 V}   # no duty-limit: it can go to 1",
	Hint:     "The limit is the duty at which the output voltage peaks at the worst corner, lowest input and highest load. A saturated loop that goes beyond it sees the sign of its plant turned and stays there. Set duty-limit between the duty that is needed and the peak.",
	Reads:    Declaration,
	Place:    dutyLimit,
	Applies:  func(c *Case) bool { return c.Design.Nominal.Circuit.Topology.HasDutyPeak() },
	Decide: func(c *Case) []Finding {
		_, high := dutyLimits(c)
		corner, negative := c.worstStage(func(k *analysis.Corner) float64 { return -dutyPeak(c, k) })
		if corner == nil || high < -negative {
			return nil
		}
		peak := -negative
		f := c.atCorner(dutyLimit(c), corner)
		if c.Spec.Has("/modulator/duty-limit") {
			f.Message = fmt.Sprintf("the upper duty limit %s is not below the duty at which the output voltage peaks, %s: beyond it more duty means less output and a saturated loop stays at its stop",
				number(high, ""), number(peak, ""))
		} else {
			f.Message = fmt.Sprintf("no upper duty limit is stated, and the output voltage peaks at a duty of %s: beyond it more duty means less output and a saturated loop stays at its stop",
				number(peak, ""))
		}
		f.Formula = fmt.Sprintf("duty-limit.max < D at the peak of vo(D) = %s; it is %s", number(peak, ""), short(high))
		f.Measured, f.Limit, f.Nominal = asNumber(high, ""), asNumber(peak, ""), asNumber(dutyPeak(c, c.nominal()), "")
		c.relate(&f, "moves the peak", "/input-voltage", "/load/current", "/inductor/resistance", "/switch/on-resistance", "/rectifier/resistance")
		return []Finding{f}
	},
}

// dutyPeak is the duty at which a corner's lossy conversion ratio peaks, NaN in the buck family.
func dutyPeak(c *Case, k *analysis.Corner) float64 {
	if k.DutyPeak > 0 && !math.IsNaN(k.DutyPeak) {
		return k.DutyPeak
	}
	return plant.DutyPeak(c.circuit(k.At))
}
