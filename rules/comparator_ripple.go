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
	Also:     []Severity{Error},
	Sentence: "The output ripple that the compensator passes to the comparator does not eat the phase margin that the averaged model promises.",
	Formula:  "not both: margin with ripple < averaged margin − limit, and margin with ripple < target − limit; error when only the loop with ripple is unstable",
	Source:   "A. R. Brown, R. D. Middlebrook, \"Sampled-data modeling of switching regulators\", IEEE PESC (1981), on why ripple matters; first-order term checked against exact switched waveforms",
	Policy:   []Threshold{comparatorRippleDeg},
	Example:  "topology: boost\noutput-capacitor: {capacitance: 220 uF ± 20 %, esr: 33 mΩ}\ncompensator:\n  network: type-3\n  upper-resistor: 100k\n  feedback-resistor: 10k\n  integrator-capacitor: 47n\n  rolloff-capacitor: 220p   # lets the edges through\n  lead-resistor: 1k\n  lead-capacitor: 1n",
	Hint:     "Measured is the phase margin with the ripple counted, the limit the target less the allowance. The averaged model cannot see it; a bench can. Less ESR, a larger rolloff-capacitor or a larger ramp helps. The worst corner usually has the highest ESR, not the lowest.",
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
		corner, _ := c.worst(rippleScore)
		if corner == nil {
			return nil
		}
		breaks := func(k *analysis.Corner) bool {
			return !k.Ripple.Stable || k.Ripple.PhaseMargin < k.Loop.PhaseMargin-limit && k.Ripple.PhaseMargin < target-limit
		}
		if !breaks(corner) { // the lowest margin is low without the ripple already; another corner can lose more
			corner, _ = c.worst(func(k *analysis.Corner) float64 {
				if score := rippleScore(k); !math.IsNaN(score) && breaks(k) {
					return score
				}
				return math.NaN()
			})
		}
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
	Mend:   otherValues,
	WhyNot: noValues,
}

// rippleScore ranks corners whose averaged loop is stable: the lower the margin with ripple the higher, unstable ones first. At the very
// edge of stability, which the analysis closes in on, anything tips the loop over: that is no news of the ripple.
func rippleScore(k *analysis.Corner) float64 {
	const edge = 0.1 // degrees
	switch {
	case !hasRipple(k) || !k.Loop.Stable || k.Loop.PhaseMargin < edge:
		return math.NaN()
	case !k.Ripple.Stable:
		return 1000 + unstableScore(k.Ripple.PhaseMargin)
	}
	return -k.Ripple.PhaseMargin
}

func hasRipple(k *analysis.Corner) bool { return continuous(k) && k.Loop != nil && k.Ripple != nil }
