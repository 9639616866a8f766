package rules

import (
	"fmt"
)

var closedLoopStability = Rule{
	Name:     "closed-loop-stability",
	Group:    Loop,
	Severity: Error,
	Sentence: "Every closed-loop pole is in the left half-plane at every corner.",
	Formula:  "Re s < 0 for every root of 1 + T(s) = 0",
	Source:   "H. Nyquist, \"Regeneration theory\", Bell System Technical Journal 11 (1932)",
	Example:  "compensator: {network: type-1, upper-resistor: 10k, integrator-capacitor: 100p}   # crosses far above the resonance",
	Hint:     "Measured is the phase margin at the worst corner, negative by how much the loop is past the edge. The margins of that corner are listed below as consequences. A plant with right-half-plane poles of its own is named as such: then too little gain is as bad as too much.",
	Reads:    Figures,
	Place:    gainPart,
	Decide: func(c *Case) []Finding {
		corner := c.unstable()
		if corner == nil {
			return nil
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = "the closed loop is unstable"
		switch n := corner.Loop.UnstablePlantPoles; {
		case n > 0 && len(corner.Loop.Crossovers) == 0:
			f.Message += fmt.Sprintf(": the plant has %s on its own and the loop gain never reaches one", poles(n))
		case n > 0:
			f.Message += fmt.Sprintf(": the plant has %s on its own and the loop does not hold it", poles(n))
		case len(corner.Loop.Crossovers) > 0:
			f.Message += fmt.Sprintf(": phase margin %s at the crossover %s (limit 0°)",
				number(corner.Loop.PhaseMargin, "deg"), number(corner.Loop.Crossover, "Hz"))
		}
		if stable := c.nominal().Loop; stable != nil && stable.Stable {
			f.Message += "; it is stable at nominal"
		}
		f.Formula = "1 + T(s) = 0 has a root with Re s ≥ 0"
		f.Measured, f.Limit = asNumber(corner.Loop.PhaseMargin, "deg"), asNumber(0, "deg")
		if nominal := c.nominal().Loop; nominal != nil {
			f.Nominal = asNumber(nominal.PhaseMargin, "deg")
		}
		c.relate(&f, "is what the loop was unstable at", "/input-voltage", "/load/current", "/inductor/inductance",
			"/output-capacitor/capacitance", "/output-capacitor/esr", "/output-capacitors")
		c.relate(&f, "sets the inner loop", "/modulator/slope-compensation", "/modulator/current-sense-gain")
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}

// poles words a count of right-half-plane poles.
func poles(n int) string {
	if n == 1 {
		return "a right-half-plane pole"
	}
	return fmt.Sprintf("%d right-half-plane poles", n)
}
