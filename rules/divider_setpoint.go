package rules

import (
	"fmt"
	"math"

	"halfplane/analysis/network"
	"halfplane/schema"
)

var dividerSetpoint = Rule{
	Name:     "divider-setpoint",
	Group:    Declared,
	Severity: Error,
	Sentence: "The divider and the reference set the output voltage that the file states.",
	Formula:  "|Vref · (1 + R1/RL) − |V|| ≤ setpoint-tolerance · |V|, with nominal parts",
	Source:   "common practice",
	Policy:   []Threshold{setpointTolerance},
	Example:  "output-voltage: 24 V\ncompensator:\n  network: type-2\n  reference-voltage: 1.25 V\n  upper-resistor: 100k ± 1 %\n  lower-resistor: 5k94 ± 1 %   # sets 22.3 V; 5k49 sets 24.0 V\n  feedback-resistor: 10k\n  integrator-capacitor: 22n",
	Hint:     "Measured is the output voltage that the divider sets with nominal parts; the message adds what it becomes over their tolerances, which is told and not judged here.",
	Reads:    Declaration,
	Place:    here("/compensator/lower-resistor"),
	Needs:    []string{"/compensator/reference-voltage", "/compensator/upper-resistor"},
	Applies:  func(c *Case) bool { return c.Spec.Has("/compensator/lower-resistor") },
	Decide: func(c *Case) []Finding {
		parts := &c.Design.Nominal.Network
		volts := c.Design.Nominal.Circuit.OutputVoltage
		set := network.SetPoint(parts)
		tolerance := c.threshold(setpointTolerance)
		if off := math.Abs(set - volts); off <= tolerance*volts {
			return nil
		}
		low, high := setpointExtremes(c)
		f := c.at("/compensator/lower-resistor")
		f.Message = fmt.Sprintf("the divider sets %s, %s off the output voltage %s (limit %s); over the parts' tolerances it sets %s to %s",
			number(set, "V"), percent(math.Abs(set-volts)/volts), number(volts, "V"), percent(tolerance), number(low, "V"), number(high, "V"))
		f.Formula = fmt.Sprintf("Vref · (1 + R1/RL) = %s · (1 + %s/%s) = %s", number(parts.ReferenceVoltage, "V"),
			number(parts.UpperResistor, "Ω"), number(parts.LowerResistor, "Ω"), number(set, "V"))
		limit := volts * (1 + math.Copysign(tolerance, set-volts))
		f.Measured, f.Limit, f.Nominal = asNumber(set, "V"), asNumber(limit, "V"), asNumber(set, "V")
		c.relate(&f, "sets the output voltage too", "/output-voltage", "/compensator/reference-voltage", "/compensator/upper-resistor")
		return []Finding{f}
	},
}

// setpointExtremes are the lowest and highest set-point over the tolerances of the reference and both resistors.
func setpointExtremes(c *Case) (low, high float64) {
	spread := func(pointer string) schema.Quantity {
		q, _ := c.Spec.Quantity(pointer)
		return q
	}
	reference, upper, lower := spread("/compensator/reference-voltage"), spread("/compensator/upper-resistor"), spread("/compensator/lower-resistor")
	return reference.Min * (1 + upper.Min/lower.Max), reference.Max * (1 + upper.Max/lower.Min)
}
