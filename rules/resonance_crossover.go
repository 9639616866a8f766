package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var resonanceCrossover = Rule{
	Name:     "resonance-crossover",
	Group:    Plant,
	Severity: Warning,
	Sentence: "No crossover lies on or beside a sharp output-filter resonance, where phase and gain turn quickest.",
	Formula:  "fc ≤ f0 / resonance-clearance, or fc ≥ f0 · resonance-clearance, wherever Q > 1",
	Source:   "common practice",
	Policy:   []Threshold{resonanceClearance},
	Example:  "compensator: {network: type-1, upper-resistor: 10k, integrator-capacitor: 10n}   # an integrator that crosses on the resonance",
	Hint:     "Measured is the crossover nearest to the resonance, the limit the near end of the range to keep out of. There phase and gain turn so quickly that a few per cent of inductance decide the margin.",
	Reads:    Figures,
	Place:    gainPart,
	Judges:   sharpResonance,
	Applies: func(c *Case) bool {
		return voltageMode(c) && anyCorner(c, sharpResonance)
	},
	Decide: func(c *Case) []Finding {
		clearance := c.threshold(resonanceClearance)
		corner, closeness := c.worst(func(k *analysis.Corner) float64 {
			if !sharpResonance(k) || k.Loop == nil {
				return math.NaN()
			}
			return 1 / distance(nearest(k.Loop.Crossovers, k.Plant.Resonance), k.Plant.Resonance)
		})
		if corner == nil || 1/closeness >= clearance {
			return nil
		}
		f0, q := corner.Plant.Resonance, corner.Plant.Quality
		fc := nearest(corner.Loop.Crossovers, f0)
		limit := f0 * clearance
		if fc < f0 {
			limit = f0 / clearance
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("crossover %s lies within a factor of %s of the output filter's resonance, %s with quality %s (keep out of %s to %s)",
			number(fc, "Hz"), short(clearance), number(f0, "Hz"), number(q, ""), number(f0/clearance, "Hz"), number(f0*clearance, "Hz"))
		f.Formula = fmt.Sprintf("f0 / %s = %s, f0 · %s = %s; fc = %s",
			short(clearance), number(f0/clearance, "Hz"), short(clearance), number(f0*clearance, "Hz"), number(fc, "Hz"))
		f.Measured, f.Limit, f.Nominal = asNumber(fc, "Hz"), asNumber(limit, "Hz"), nominalCrossover(c)
		c.relate(&f, "sets the resonance", "/inductor/inductance", "/output-capacitor/capacitance", "/output-capacitors")
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}

func voltageMode(c *Case) bool {
	return c.Design.Nominal.Circuit.Modulator.Scheme == plant.VoltageMode
}

// sharpResonance says whether a corner's output filter rings: continuous conduction, quality above one.
func sharpResonance(k *analysis.Corner) bool {
	return continuous(k) && k.Plant.HasModel && k.Plant.Quality > 1
}

func anyCorner(c *Case, is func(*analysis.Corner) bool) bool {
	for i := range c.Result.Corners {
		if is(&c.Result.Corners[i]) {
			return true
		}
	}
	return false
}

// nearest is the value nearest to a mark by ratio, NaN of none.
func nearest(values []float64, mark float64) float64 {
	found := math.NaN()
	for _, v := range values {
		if math.IsNaN(found) || distance(v, mark) < distance(found, mark) {
			found = v
		}
	}
	return found
}

// distance is the ratio between two positive values, the larger over the smaller.
func distance(a, b float64) float64 { return math.Max(a/b, b/a) }
