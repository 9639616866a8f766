package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var slopeCompensation = Rule{
	Name:     "slope-compensation",
	Group:    Plant,
	Severity: Error,
	Also:     []Severity{Warning, Note},
	Sentence: "In peak current mode the ramp damps the inner loop at half the filter's frequency at every continuous corner, without drowning the current signal.",
	Formula:  "mc · (1 − D) > 1/2 with mc = 1 + Se/Sn; Q = 1/(π · (mc · (1 − D) − 1/2)) within half-frequency-quality",
	Source:   "R. B. Ridley, \"A new, continuous-time model for current-mode control\", IEEE Trans. Power Electronics 6(2) (1991)",
	Policy:   []Threshold{halfQualityLow, halfQualityHigh},
	Example:  "topology: buck\ninput-voltage: {min: 14 V, nominal: 16 V, max: 24 V}\noutput-voltage: 9 V\nmodulator: {scheme: peak-current-mode, current-sense-gain: 50 mΩ}   # duty above 1/2 without a ramp",
	Hint:     "Below 1/2 the inner loop doubles its period whatever the outer loop does, and the findings about the outer loop are listed below this one. Slopes are at the comparator in V/s; the formula is redone with them. Raise slope-compensation, or the inductance.",
	Reads:    Model,
	Place:    firstOf("/modulator/slope-compensation", "/modulator/scheme"),
	Judges:   continuous,
	Applies: func(c *Case) bool {
		return c.Design.Nominal.Circuit.Modulator.Scheme == plant.PeakCurrentMode
	},
	Decide: func(c *Case) []Finding {
		corner, negative := c.worstStage(func(k *analysis.Corner) float64 {
			if !hasCurrentLoop(k) {
				return math.NaN()
			}
			return -k.Plant.Current.OffDutyProduct
		})
		if corner == nil {
			return nil
		}
		low, high := c.threshold(halfQualityLow), c.threshold(halfQualityHigh)
		product, quality := -negative, corner.Plant.Current.HalfFrequencyQuality
		f := c.atCorner(firstOf("/modulator/slope-compensation", "/modulator/scheme")(c), corner)
		switch {
		case !(product > 0.5):
			f.Severity = Error
			f.Message = fmt.Sprintf("too little slope compensation: mc·(1 − D) is %s and must be above 0.500, or the inner loop doubles its period", number(product, ""))
			f.Measured, f.Limit, f.Nominal = asNumber(product, ""), asNumber(0.5, ""), nominalProduct(c)
		case quality > high:
			f.Severity = Warning
			f.Message = fmt.Sprintf("little slope compensation: the quality at half the filter's frequency is %s, above %s", number(quality, ""), number(high, ""))
			f.Measured, f.Limit, f.Nominal = asNumber(quality, ""), asNumber(high, ""), nominalQuality(c)
		case quality < low:
			// The corner with the least damping has the highest quality of all: when that is too low, every corner is.
			f.Severity = Note
			f.Message = fmt.Sprintf("much slope compensation: the highest quality at half the filter's frequency is %s, below %s; the loop behaves like voltage mode", number(quality, ""), number(low, ""))
			f.Measured, f.Limit, f.Nominal = asNumber(quality, ""), asNumber(low, ""), nominalQuality(c)
		default:
			return nil
		}
		inner := corner.Plant.Current
		f.Formula = fmt.Sprintf("mc = 1 + Se/Sn = 1 + %s/%s = %s; mc · (1 − D) = %s · (1 − %s) = %s, which must be above 1/2; Q = 1/(π · (%s − 1/2)) = %s",
			number(inner.ExternalSlope, "V/s"), number(inner.OnSlope, "V/s"), short(inner.SlopeRatio), short(inner.SlopeRatio), short(corner.Plant.Duty), short(product),
			short(product), short(quality))
		c.relate(&f, "decides the slopes", "/modulator/current-sense-gain", "/inductor/inductance", "/input-voltage", "/output-voltage", "/magnetizing-inductance")
		return []Finding{f}
	},
	Mend: steeperRamp,
}

func hasCurrentLoop(k *analysis.Corner) bool {
	return continuous(k) && k.Plant.HasModel && k.Plant.Current != nil
}

func nominalProduct(c *Case) *Number {
	if k := c.nominal(); hasCurrentLoop(k) {
		return asNumber(k.Plant.Current.OffDutyProduct, "")
	}
	return nil
}

func nominalQuality(c *Case) *Number {
	if k := c.nominal(); hasCurrentLoop(k) {
		return asNumber(k.Plant.Current.HalfFrequencyQuality, "")
	}
	return nil
}
