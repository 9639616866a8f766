package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

var rhpZeroCrossover = Rule{
	Name:     "rhp-zero-crossover",
	Group:    Plant,
	Severity: Error,
	Sentence: "Crossover stays well below the right-half-plane zero at every corner.",
	Formula:  "fc ≤ rhp-zero-fraction · fz, both of the same corner",
	Source:   "K. J. Åström, \"Limitations on control system performance\", European Journal of Control 6 (2000); the fraction of 1/5 is common practice",
	Policy:   []Threshold{rhpZeroFraction},
	Example:  "topology: boost\ncompensator:\n  network: type-3\n  upper-resistor: 100k ± 1 %\n  feedback-resistor: 47k ± 1 %   # crosses at a third of the zero; 24k at a sixth\n  integrator-capacitor: 10n ± 5 %\n  lead-resistor: 2k05 ± 1 %\n  lead-capacitor: 2n7 ± 5 %",
	Hint:     "Measured is the crossover at the corner where it comes nearest to the zero of that same corner; the limit is the fraction of that zero. Lower the gain at crossover, or move the zero up with less inductance. The highest crossover over the lowest zero is told as information: they need not meet at one corner.",
	Reads:    Figures,
	Place:    gainPart,
	Moves:    movedCrossover,
	Applies: func(c *Case) bool {
		return c.Design.Nominal.Circuit.Topology.HasDutyPeak() || anyCorner(c, func(k *analysis.Corner) bool { return rhpZero(k) > 0 })
	},
	Decide: func(c *Case) []Finding {
		limit := c.threshold(rhpZeroFraction)
		corner, ratio := c.worst(crossoverOverZero)
		if corner == nil || ratio <= limit {
			return nil
		}
		fc, fz := corner.Loop.Crossover, corner.Plant.RHPZero
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("crossover %s is above %s of the right-half-plane zero, %s (limit %s)",
			number(fc, "Hz"), fraction(limit), number(fz, "Hz"), number(limit*fz, "Hz"))
		f.Formula = fmt.Sprintf("fc ≤ %s · fz = %s · %s = %s; fc = %s",
			fraction(limit), fraction(limit), number(fz, "Hz"), number(limit*fz, "Hz"), number(fc, "Hz"))
		f.Measured, f.Limit = asNumber(fc, "Hz"), asNumber(limit*fz, "Hz")
		f.Nominal = nominalCrossover(c)
		c.relate(&f, "sets the right-half-plane zero", "/inductor/inductance", "/second-inductor/inductance",
			"/input-voltage", "/load/current", "/output-voltage", "/turns")
		if all := c.Result.Worst.HighestCrossoverOverLowestRHPZero; !math.IsNaN(all) {
			f.tell(fmt.Sprintf("for information: the highest crossover of all over the lowest zero of all is %s", number(all, "")))
		}
		c.blameFilter(&f)
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}

// blameFilter marks a finding about a right-half-plane zero that only an input filter can have made: the buck family has none
// of its own.
func (c *Case) blameFilter(f *Finding) {
	if c.Spec.Has("/input-filter") && !c.Design.Nominal.Circuit.Topology.HasDutyPeak() {
		f.Cause = &Cause{Rule: "input-filter"}
		c.relate(f, "makes the right-half-plane zero", "/input-filter")
	}
}

// rhpZero is a corner's lowest right-half-plane zero (Hz), NaN where there is none or no model.
func rhpZero(k *analysis.Corner) float64 {
	if !k.Reached || !k.Plant.HasModel {
		return math.NaN()
	}
	return k.Plant.RHPZero
}

// crossover is a corner's highest crossover (Hz), NaN where the loop never crosses one or has no model.
func crossover(k *analysis.Corner) float64 {
	if !k.Reached || k.Loop == nil {
		return math.NaN()
	}
	return k.Loop.Crossover
}

func crossoverOverZero(k *analysis.Corner) float64 { return crossover(k) / rhpZero(k) }

func nominalCrossover(c *Case) *Number { return asNumber(crossover(c.nominal()), "Hz") }
