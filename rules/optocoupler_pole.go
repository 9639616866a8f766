package rules

import (
	"fmt"

	"halfplane/analysis/network"
)

const optocouplerPolePointer = "/compensator/optocoupler-pole"

var optocouplerPole = Rule{
	Name:     "optocoupler-pole",
	Group:    Loop,
	Severity: Warning,
	Also:     []Severity{Note},
	Sentence: "The optocoupler's pole is stated; stated without a spread it lies well above crossover, for it moves with load resistance, current and temperature.",
	Formula:  "optocoupler-pole is given; without a spread it is ≥ optocoupler-clearance · highest fc",
	Source:   "common practice",
	Policy:   []Threshold{optoClearance},
	Example:  "compensator:\n  network: optocoupler\n  upper-resistor: 38k3\n  integrator-capacitor: 8n2\n  led-resistor: 931R\n  pull-up-resistor: 4k75\n  current-transfer-ratio: {min: 0.7, nominal: 1, max: 1.4}\n  optocoupler-pole: 10 kHz   # no spread; crosses at 6 kHz",
	Hint:     "A missing pole is a warning: the loop was computed without one. A pole without a spread must lie far enough above the highest crossover that its wandering does not matter; with a spread it is in the corners and the margins judge it.",
	Reads:    Figures,
	Place:    firstOf(optocouplerPolePointer, "/compensator/network"),
	Applies:  func(c *Case) bool { return c.Design.Nominal.Network.Kind == network.Optocoupler },
	Decide: func(c *Case) []Finding {
		q, stated := c.Spec.Quantity(optocouplerPolePointer)
		if !stated {
			f := c.at("/compensator/network")
			f.Message = "the optocoupler's pole is not stated: the loop is computed without it, and real ones lie at a few tens of kilohertz"
			c.relate(&f, "makes the pole with the optocoupler's own capacitance", "/compensator/pull-up-resistor")
			return []Finding{f}
		}
		corner, fc := c.worst(crossover)
		limit := c.threshold(optoClearance) * fc
		if q.Spread || corner == nil || q.Nominal >= limit {
			return nil
		}
		f := c.atCorner(optocouplerPolePointer, corner)
		f.Severity = Note
		f.Message = fmt.Sprintf("the optocoupler's pole %s has no spread and lies below %s times the highest crossover %s (limit %s): it moves with load resistance, current and temperature",
			number(q.Nominal, "Hz"), short(c.threshold(optoClearance)), number(fc, "Hz"), number(limit, "Hz"))
		f.Formula = fmt.Sprintf("%s · %s = %s", short(c.threshold(optoClearance)), number(fc, "Hz"), number(limit, "Hz"))
		f.Measured, f.Limit, f.Nominal = asNumber(q.Nominal, "Hz"), asNumber(limit, "Hz"), asNumber(q.Nominal, "Hz")
		c.relate(&f, "decides crossover or pole", "/compensator/led-resistor", "/compensator/pull-up-resistor", "/compensator/current-transfer-ratio")
		return []Finding{f}
	},
}
