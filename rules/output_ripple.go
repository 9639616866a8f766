package rules

import (
	"fmt"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

const outputRippleTarget = "/targets/output-ripple"

var outputRipple = Rule{
	Name:     "output-ripple",
	Group:    Operating,
	Severity: Warning,
	Sentence: "The output ripple meets its target at every corner.",
	Formula:  "peak to peak of Σ Ik/Yk ≤ targets.output-ripple, Ik the harmonics of the output current, Yk the admittance of capacitors and load",
	Source:   "common practice (Fourier series of the piecewise-linear output current; no equivalent series inductance)",
	Example:  "targets: {output-ripple: 20 mV}   # 58 mV at low input and full load",
	Hint:     "Measured is peak to peak, capacitance and ESR together, without equivalent series inductance: spikes of the probe loop are not in it.",
	Reads:    Operation,
	Place:    targetOrGainPart(outputRippleTarget),
	Applies:  func(c *Case) bool { return c.Spec.Has(outputRippleTarget) },
	Decide: func(c *Case) []Finding {
		q, _ := c.Spec.Quantity(outputRippleTarget)
		ripple := func(k *analysis.Corner) float64 {
			return atReached(k, func() float64 {
				return plant.OutputRipple(c.circuit(k.At), &k.Plant)
			})
		}
		corner, volts := c.worstStage(ripple)
		if corner == nil || volts <= q.Nominal {
			return nil
		}
		f := c.atCorner(outputRippleTarget, corner)
		f.Message = fmt.Sprintf("output ripple %s peak to peak is above the target %s", number(volts, "V"), number(q.Nominal, "V"))
		f.Formula = fmt.Sprintf("peak to peak of Σ Ik/Yk = %s; at most %s", number(volts, "V"), number(q.Nominal, "V"))
		f.Measured, f.Limit, f.Nominal = asNumber(volts, "V"), asNumber(q.Nominal, "V"), asNumber(ripple(c.nominal()), "V")
		c.relate(&f, "decides the ripple", "/output-capacitor/esr", "/output-capacitor/capacitance", "/output-capacitor/count",
			"/output-capacitors", "/inductor/inductance", "/load/current")
		return []Finding{f}
	},
}
