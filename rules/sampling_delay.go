package rules

import (
	"fmt"

	"halfplane/analysis/network"
)

var samplingDelay = Rule{
	Name:     "sampling-delay",
	Group:    Loop,
	Severity: Warning,
	Sentence: "A digital loop crosses well below its sampling frequency, and its delay costs little phase there.",
	Formula:  "fc ≤ sampling-fraction · sampling-frequency, and 360° · delay · fc ≤ delay-phase",
	Source:   "common practice",
	Policy:   []Threshold{samplingFraction, delayPhase},
	Example:  "compensator:   # crosses at 8 kHz: 360° · 15 us · 8 kHz = 43°\n  network: digital\n  sampling-frequency: 100 kHz\n  delay: 15 us\n  numerator: [0.9, -0.8]\n  denominator: [1, -1]",
	Hint:     "Measured is the crossover where the fraction is broken, else the phase of the delay. delay is the whole time from sampling to the modulated edge.",
	Reads:    Figures,
	Place:    gainPart,
	Applies:  func(c *Case) bool { return c.Design.Nominal.Network.Kind == network.Digital },
	Decide: func(c *Case) []Finding {
		parts := &c.Design.Nominal.Network
		corner, fc := c.worst(crossover)
		if corner == nil {
			return nil
		}
		share, cost := c.threshold(samplingFraction)*parts.SamplingFrequency, 360*c.valueAt(corner, "compensator.delay")*fc
		costLimit := c.threshold(delayPhase)
		f := c.atCorner(gainPart(c), corner)
		f.Nominal = nominalCrossover(c)
		sampling := fmt.Sprintf("crossover %s is above %s of the sampling frequency %s (limit %s)", number(fc, "Hz"),
			fraction(c.threshold(samplingFraction)), number(parts.SamplingFrequency, "Hz"), number(share, "Hz"))
		delay := fmt.Sprintf("the delay costs %s of phase at the crossover %s, limit %s", number(cost, "deg"), number(fc, "Hz"), number(costLimit, "deg"))
		f.Formula = fmt.Sprintf("%s · %s = %s; 360° · delay · %s = %s", fraction(c.threshold(samplingFraction)), number(parts.SamplingFrequency, "Hz"),
			number(share, "Hz"), number(fc, "Hz"), number(cost, "deg"))
		switch {
		case fc <= share && cost <= costLimit:
			return nil
		case fc <= share:
			f.Message = delay
			f.Measured, f.Limit = asNumber(cost, "deg"), asNumber(costLimit, "deg")
			f.Nominal = asNumber(360*c.valueAt(c.nominal(), "compensator.delay")*crossover(c.nominal()), "deg")
		case cost <= costLimit:
			f.Message = sampling
			f.Measured, f.Limit = asNumber(fc, "Hz"), asNumber(share, "Hz")
		default:
			f.Message = sampling + ", and " + delay
			f.Measured, f.Limit = asNumber(fc, "Hz"), asNumber(share, "Hz")
		}
		c.relate(&f, "decides the limit", "/compensator/sampling-frequency", "/compensator/delay")
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}
