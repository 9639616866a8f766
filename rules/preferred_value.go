package rules

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/schema"
)

var preferredValue = Rule{
	Name:     "preferred-value",
	Group:    Declared,
	Severity: Note,
	Sentence: "Resistors and capacitors have values that are made in their tolerance.",
	Formula:  "tolerance ≤ 0.5 %: E192, E96 or E24; ≤ 1 %: E96 or E24; ≤ 2 %: E48 or E24; ≤ 5 %: E24; ≤ 10 %: E12; wider: E6",
	Source:   "IEC 60063:2015, Preferred number series for resistors and capacitors; that E24 values are made in finer tolerances too is common practice",
	Example:  "compensator:\n  network: type-2\n  upper-resistor: 100k ± 1 %\n  feedback-resistor: 7k9 ± 1 %   # E96 has 7.87 kΩ and 8.06 kΩ\n  integrator-capacitor: 22n ± 5 %",
	Hint:     "Measured is the nominal value, the limit is the nearest value of the series. A part without a tolerance, or with a range, is not judged.",
	Reads:    Declaration,
	Applies: func(c *Case) bool {
		applies := false
		c.eachBought(func(string, schema.Quantity, float64) { applies = true })
		return applies
	},
	Decide: func(c *Case) []Finding {
		var findings []Finding
		c.eachBought(func(pointer string, q schema.Quantity, tolerance float64) {
			series := analysis.SeriesFor(tolerance)
			below, above := analysis.Preferred(q.Nominal, series...)
			if below == above {
				return
			}
			nearest := below
			if above/q.Nominal < q.Nominal/below {
				nearest = above
			}
			f := c.at(pointer)
			f.Message = fmt.Sprintf("%s %s is no value of %s, in which parts of ±%s are made: the nearest are %s and %s",
				placeWords(pointer), exact(q.Nominal, q.Unit), seriesWords(series), shortPercent(tolerance), exact(below, q.Unit), exact(above, q.Unit))
			f.Formula = fmt.Sprintf("%s < %s < %s", exact(below, q.Unit), exact(q.Nominal, q.Unit), exact(above, q.Unit))
			f.Measured, f.Limit, f.Nominal = asNumber(q.Nominal, q.Unit), asNumber(nearest, q.Unit), asNumber(q.Nominal, q.Unit)
			findings = append(findings, f)
		})
		return findings
	},
}

// eachBought visits every resistor and capacitor that is bought as such and states a tolerance.
func (c *Case) eachBought(visit func(pointer string, q schema.Quantity, tolerance float64)) {
	c.Spec.Quantities(func(pointer string, q schema.Quantity) {
		if tolerance, ok := q.Tolerance(); ok && q.Nominal > 0 && isBought(pointer) {
			visit(pointer, q, tolerance)
		}
	})
}

// isBought tells resistors and capacitors from resistances that come with something else (windings, ESR, what a load or a
// source brings) and from what a compensator was designed for.
func isBought(pointer string) bool {
	steps := strings.Split(pointer, "/")
	switch owner, last := steps[1], steps[len(steps)-1]; owner {
	case "compensator":
		return len(steps) == 3 && (strings.HasSuffix(last, "-resistor") || strings.HasSuffix(last, "-capacitor"))
	case "output-capacitor", "output-capacitors", "coupling-capacitor", "input-filter":
		return last == "capacitance" || last == "damping-capacitance" || last == "damping-resistance"
	}
	return false
}

func seriesWords(series []analysis.Series) string {
	var names []string
	for _, s := range series {
		names = append(names, fmt.Sprintf("E%d", s))
	}
	if len(names) == 1 {
		return names[0]
	}
	return strings.Join(names[:len(names)-1], ", ") + " or " + names[len(names)-1]
}

// exact prints a value with as many digits, up to six, as it takes to tell it from its neighbours in a series.
func exact(value float64, unit string) string {
	three := number(value, unit)
	for digits := 3; digits < 6; digits++ {
		step := math.Pow(10, math.Floor(math.Log10(math.Abs(value)))-float64(digits)+1)
		if math.Abs(math.Round(value/step)*step-value) <= 1e-7*math.Abs(value) {
			if digits == 3 {
				return three
			}
			return finer(value, math.Round(value/(step*10))*step*10, unit)
		}
	}
	return three
}

// shortPercent is a tolerance as it is written: 1 %, 0.5 %.
func shortPercent(ratio float64) string { return short(100*ratio) + " %" }
