package rules

import (
	"fmt"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var inductorSaturation = Rule{
	Name:     "inductor-saturation",
	Group:    Operating,
	Severity: Error,
	Sentence: "The inductor's peak current stays clear of its lowest saturation current at every corner, on the winding's own side.",
	Formula:  "average + ripple/2 of one winding ≤ (1 − saturation-headroom) · lowest saturation-current",
	Source:   "common practice",
	Policy:   []Threshold{saturationHeadroom},
	Example:  "inductor: {inductance: 22 uH ± 20 %, saturation-current: 5 A}   # 4.9 A at low input and full load",
	Hint:     "Measured is the peak of one winding on its own side: average plus half the ripple, or the ripple in discontinuous conduction. The limit is the lowest saturation current less the headroom for load steps and heat.",
	Reads:    Operation,
	Applies: func(c *Case) bool {
		return c.Spec.Has("/inductor/saturation-current") || c.Spec.Has("/second-inductor/saturation-current")
	},
	Decide: func(c *Case) []Finding {
		var findings []Finding
		for _, winding := range []string{"/inductor", "/second-inductor"} {
			if q, stated := c.Spec.Quantity(winding + "/saturation-current"); stated {
				findings = append(findings, saturation(c, winding, q.Min)...)
			}
		}
		return findings
	},
}

// saturation judges one winding against its lowest saturation current (A).
func saturation(c *Case, winding string, lowest float64) []Finding {
	limit := (1 - c.threshold(saturationHeadroom)) * lowest
	corner, peak := c.worstStage(func(k *analysis.Corner) float64 { return windingPeak(c, k, winding) })
	if corner == nil || peak <= limit {
		return nil
	}
	f := c.atCorner(winding+"/saturation-current", corner)
	f.Message = fmt.Sprintf("the inductor's peak current %s leaves less than %s below its saturation current %s (limit %s)",
		number(peak, "A"), percent(c.threshold(saturationHeadroom)), number(lowest, "A"), number(limit, "A"))
	if peak > lowest {
		f.Message = fmt.Sprintf("the inductor's peak current %s is above its saturation current %s (limit %s)", number(peak, "A"), number(lowest, "A"), number(limit, "A"))
	}
	f.Formula = fmt.Sprintf("Ipk ≤ (1 − %s) · %s = %s; Ipk = %s", short(c.threshold(saturationHeadroom)), number(lowest, "A"), number(limit, "A"), peakFormula(c, corner, winding, peak))
	f.Measured, f.Limit, f.Nominal = asNumber(peak, "A"), asNumber(limit, "A"), asNumber(windingPeak(c, c.nominal(), winding), "A")
	c.relate(&f, "decides the peak current", "/load/current", "/input-voltage", winding+"/inductance", "/turns", "/phases")
	return []Finding{f}
}

// peakFormula is the sum that leads to a winding's peak current, to be redone with a calculator.
func peakFormula(c *Case, k *analysis.Corner, winding string, peak float64) string {
	average, ripple := k.Plant.InductorCurrent, k.Plant.InductorRipple
	if winding == "/second-inductor" {
		average, ripple = k.Plant.SecondCurrent, k.Plant.SecondRipple
	}
	sum := fmt.Sprintf("%s + %s/2", number(average, "A"), number(ripple, "A"))
	if k.Plant.Mode == plant.Discontinuous {
		sum = "ripple " + number(ripple, "A")
	}
	if circuit := &c.Design.Nominal.Circuit; circuit.Topology.Isolated() && circuit.InductorOnPrimary {
		sum = fmt.Sprintf("(%s) · %s", sum, number(k.Plant.TurnsRatio, ""))
	}
	return sum + " = " + number(peak, "A")
}

// windingPeak is the peak current (A) of one winding on its own side, NaN at a corner out of reach.
func windingPeak(c *Case, k *analysis.Corner, winding string) float64 {
	return atReached(k, func() float64 {
		if winding == "/second-inductor" {
			return k.Plant.SecondPeak
		}
		if circuit := &c.Design.Nominal.Circuit; circuit.Topology.Isolated() && circuit.InductorOnPrimary {
			return k.Plant.InductorPeak * k.Plant.TurnsRatio
		}
		return k.Plant.InductorPeak
	})
}
