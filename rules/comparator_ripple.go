package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

var comparatorRipple = Rule{
	Name:     "comparator-ripple",
	Group:    Loop,
	Severity: Warning,
	Sentence: "The output ripple that the compensator passes to the comparator does not eat the phase margin that the averaged model promises.",
	Formula:  "not both: margin with ripple < averaged margin − limit, and margin with ripple < target − limit; error when only the loop with ripple is unstable",
	Source:   "A. R. Brown, R. D. Middlebrook, \"Sampled-data modeling of switching regulators\", IEEE PESC (1981), on why ripple matters; first-order term checked against exact switched waveforms",
	Policy:   []Threshold{comparatorRippleDeg},
	Example:  "topology: boost\noutput-capacitor: {capacitance: 220 uF, esr: 33 mΩ}\ncompensator: {network: type-3, lead-resistor: 1k, lead-capacitor: 1n, …}",
	Reads:    Figures,
	Place:    gainPart,
	Judges:   continuous,
	Applies: func(c *Case) bool {
		circuit := &c.Design.Nominal.Circuit
		return circuit.Modulator.Scheme == plant.VoltageMode && c.Design.Nominal.Network.Kind != network.Digital && anyCorner(c, hasRipple)
	},
	Decide: func(c *Case) []Finding {
		limit := c.threshold(comparatorRippleDeg)
		target := c.atLeast(phaseMarginLimit, "/targets/phase-margin")
		corner, _ := c.worst(func(k *analysis.Corner) float64 {
			switch {
			case !hasRipple(k) || !k.Loop.Stable:
				return math.NaN()
			case !k.Ripple.Stable:
				return 1000 + unstableScore(k.Ripple.PhaseMargin) // before every stable corner
			case k.Ripple.PhaseMargin < k.Loop.PhaseMargin-limit && k.Ripple.PhaseMargin < target-limit:
				return -k.Ripple.PhaseMargin
			}
			return math.NaN()
		})
		if corner == nil {
			return nil
		}
		averaged, with := corner.Loop.PhaseMargin, corner.Ripple.PhaseMargin
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("the output ripple at the comparator takes the phase margin from %s to %s, more than %s below the target %s",
			number(averaged, "deg"), number(with, "deg"), number(limit, "deg"), number(target, "deg"))
		if !corner.Ripple.Stable {
			f.Severity = Error
			f.Message = fmt.Sprintf("the averaged phase margin is %s, but with the output ripple at the comparator the loop is unstable (phase margin %s, target %s)",
				number(averaged, "deg"), number(with, "deg"), number(target, "deg"))
		}
		f.Formula = fmt.Sprintf("lost: %s − %s = %s, at most %s; left: %s, at least %s − %s = %s", number(averaged, "deg"), bracketed(with, "deg"), number(averaged-with, "deg"), number(limit, "deg"), number(with, "deg"),
			number(target, "deg"), number(limit, "deg"), number(target-limit, "deg"))
		f.Measured, f.Limit = asNumber(with, "deg"), asNumber(target-limit, "deg")
		if k := c.nominal(); hasRipple(k) {
			f.Nominal = asNumber(k.Ripple.PhaseMargin, "deg")
		}
		if !(averaged-with > limit) && c.unstable() != nil {
			// The averaged loop is itself at the edge here; the ripple only tips it over.
			f.Cause = &Cause{Rule: "closed-loop-stability"}
		}
		c.relate(&f, "decides the ripple at the comparator", "/output-capacitor/esr", "/output-capacitors", "/compensator/lead-capacitor", "/compensator/rolloff-capacitor", "/modulator/ramp-amplitude")
		return []Finding{f}
	},
}

func hasRipple(k *analysis.Corner) bool { return continuous(k) && k.Loop != nil && k.Ripple != nil }
