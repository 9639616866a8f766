package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

var crossoverWindow = Rule{
	Name:     "crossover-window",
	Group:    Plant,
	Severity: Warning,
	Sentence: "Between the output filter's resonance and the limits above it there is room for a crossover at every corner.",
	Formula:  "resonance-clearance · f0 ≤ min(rhp-zero-fraction · fz, switching-fraction · ff)",
	Source:   "common practice",
	Policy:   []Threshold{resonanceClearance, rhpZeroFraction, switchingFraction},
	Example:  "topology: boost\nswitching-frequency: 100 kHz\ninductor: {inductance: 220 uH ± 20 %}   # resonance 900 Hz, right-half-plane zero 4 kHz\noutput-capacitor: {capacitance: 100 uF ± 20 %}",
	Hint:     "Measured is the lowest crossover that clears the resonance, the limit the highest one allowed at that corner. No compensator helps: the message says what inductance or capacitance would make room, and below which crossover a slow loop remains possible.",
	Reads:    Model,
	Place:    gainPart,
	Judges:   continuous,
	Applies: func(c *Case) bool {
		k := c.nominal()
		return voltageMode(c) && continuous(k) && k.Plant.HasModel && crossover(k) > k.Plant.Resonance
	},
	Decide: func(c *Case) []Finding {
		clearance := c.threshold(resonanceClearance)
		corner, ratio := c.worst(func(k *analysis.Corner) float64 {
			if !continuous(k) || !k.Plant.HasModel {
				return math.NaN()
			}
			ceiling, _ := windowCeiling(c, k)
			return clearance * k.Plant.Resonance / ceiling
		})
		if corner == nil || ratio <= 1 {
			return nil
		}
		ceiling, byZero := windowCeiling(c, corner)
		floor := clearance * corner.Plant.Resonance
		f := c.atCorner(gainPart(c), corner)
		what := fmt.Sprintf("%s of the filter frequency", fraction(c.threshold(switchingFraction)))
		inductance := fmt.Sprintf("%s times the inductance", short(ratio*ratio))
		if byZero {
			what = fmt.Sprintf("%s of the right-half-plane zero, %s", fraction(c.threshold(rhpZeroFraction)), number(corner.Plant.RHPZero, "Hz"))
			inductance = part(1/(ratio*ratio)) + " of the inductance"
		}
		f.Message = fmt.Sprintf("no room for a crossover above the resonance: %s times %s is %s, above the ceiling %s set by %s; %s or %s times the output capacitance would make room, or a crossover below %s",
			short(clearance), number(corner.Plant.Resonance, "Hz"), number(floor, "Hz"), number(ceiling, "Hz"), what,
			inductance, short(ratio*ratio), number(corner.Plant.Resonance/clearance, "Hz"))
		f.Formula = fmt.Sprintf("%s · f0 = %s · %s = %s; at most %s", short(clearance), short(clearance), number(corner.Plant.Resonance, "Hz"), number(floor, "Hz"), number(ceiling, "Hz"))
		f.Measured, f.Limit = asNumber(floor, "Hz"), asNumber(ceiling, "Hz")
		f.Nominal = asNumber(clearance*c.nominal().Plant.Resonance, "Hz")
		c.relate(&f, "decides the window", "/inductor/inductance", "/output-capacitor/capacitance", "/output-capacitors", "/switching-frequency", "/input-voltage", "/load/current")
		if byZero {
			c.blameFilter(&f)
		}
		return []Finding{f}
	},
}

// windowCeiling is the highest allowed crossover (Hz) at a corner, and whether the right-half-plane zero sets it.
func windowCeiling(c *Case, k *analysis.Corner) (ceiling float64, byZero bool) {
	ceiling = c.threshold(switchingFraction) * k.Plant.FilterFrequency
	if zero := c.threshold(rhpZeroFraction) * k.Plant.RHPZero; zero < ceiling {
		return zero, true
	}
	return ceiling, false
}
