package rules

import (
	"fmt"

	"halfplane/analysis"
)

var switchingCrossover = Rule{
	Name:     "switching-crossover",
	Group:    Plant,
	Severity: Warning,
	Sentence: "Crossover stays well below the frequency at which the output filter is switched, where the averaged model holds.",
	Formula:  "fc ≤ switching-fraction · ff",
	Source:   "R. D. Middlebrook, S. Ćuk, \"A general unified approach to modelling switching-converter power stages\", IEEE PESC (1976), on the averaged model's range; the fraction of 1/5 is common practice",
	Policy:   []Threshold{switchingFraction},
	Example:  "switching-frequency: 100 kHz\ncompensator:\n  network: type-3\n  upper-resistor: 10k ± 1 %\n  feedback-resistor: 100k ± 1 %   # crosses at 40 kHz\n  integrator-capacitor: 1n ± 5 %\n  lead-resistor: 330R ± 1 %\n  lead-capacitor: 470p ± 5 %",
	Hint:     "Measured is the highest crossover, the limit the fraction of the frequency at which the filter works (twice the switching frequency in bridges and push-pulls). Above it the averaged model promises more phase than there is.",
	Reads:    Figures,
	Place:    gainPart,
	Moves:    movedCrossover,
	Decide: func(c *Case) []Finding {
		limit := c.threshold(switchingFraction)
		corner, ratio := c.worst(func(k *analysis.Corner) float64 { return crossover(k) / k.Plant.FilterFrequency })
		if corner == nil || ratio <= limit {
			return nil
		}
		fc, ff := corner.Loop.Crossover, corner.Plant.FilterFrequency
		what := "switching frequency"
		if c.Design.Nominal.Circuit.Topology.FilterMultiple() > 1 {
			what = "filter's own frequency"
		}
		f := c.atCorner(gainPart(c), corner)
		f.Message = fmt.Sprintf("crossover %s is above %s of the %s, %s (limit %s)",
			number(fc, "Hz"), fraction(limit), what, number(ff, "Hz"), number(limit*ff, "Hz"))
		f.Formula = fmt.Sprintf("fc ≤ %s · ff = %s · %s = %s; fc = %s",
			fraction(limit), fraction(limit), number(ff, "Hz"), number(limit*ff, "Hz"), number(fc, "Hz"))
		f.Measured, f.Limit, f.Nominal = asNumber(fc, "Hz"), asNumber(limit*ff, "Hz"), nominalCrossover(c)
		c.relate(&f, "sets the limit", "/switching-frequency")
		return []Finding{f}
	},
	Mend:   otherValues,
	WhyNot: noValues,
}
