package rules

import (
	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var switchCarries = rating{
	pointer: "/switch/current-rating", what: "the switch carries a peak of", unit: "A", derate: currentDerating,
	of: func(c *Case, k *analysis.Corner) float64 {
		return atReached(k, func() float64 {
			return plant.SwitchPeak(c.circuit(k.At), &k.Plant)
		})
	},
	sum:     switchCurrentSum,
	decided: []string{"/load/current", "/input-voltage", "/inductor/inductance", "/turns"},
}

var switchCurrent = Rule{
	Name:     "switch-current",
	Group:    Operating,
	Severity: Error,
	Also:     []Severity{Warning},
	Sentence: "The switch's rating stands clear of its peak current at every corner, on its own side.",
	Formula:  "peak switch current ≤ current-derating · rating (warning), ≤ rating (error)",
	Source:   "common practice",
	Policy:   []Threshold{currentDerating},
	Example:  "switch: {current-rating: 5 A}   # 6.2 A at low input and full load",
	Hint:     "Measured is the peak in one switch on its own side, both windings of a two-inductor stage together, the magnetizing current added where its inductance is given.",
	Reads:    Operation,
	Place:    here("/switch/current-rating"),
	Applies:  switchCarries.applies,
	Decide:   switchCarries.decide,
}
