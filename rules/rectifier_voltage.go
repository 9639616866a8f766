package rules

import (
	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var rectifierBlocks = rating{
	pointer: "/rectifier/voltage-rating", what: "the rectifier blocks", unit: "V", derate: voltageDerating,
	of: func(c *Case, k *analysis.Corner) float64 {
		return plant.StressOf(c.circuit(k.At)).Rectifier
	},
	sum: func(c *Case, k *analysis.Corner) string {
		_, symbols := blockingSums(c.Design.Nominal.Circuit.Topology)
		return voltageSum(c, k, symbols)
	},
	decided: []string{"/input-voltage", "/output-voltage", "/turns"},
}

var rectifierVoltage = Rule{
	Name:     "rectifier-voltage",
	Group:    Operating,
	Severity: Error,
	Also:     []Severity{Warning},
	Sentence: "The rectifier's rating stands clear of the voltage that it blocks at every corner, ringing not counted.",
	Formula:  "ideal blocking voltage ≤ voltage-derating · rating (warning), ≤ rating (error)",
	Source:   "common practice (volt-second balance of each topology)",
	Policy:   []Threshold{voltageDerating},
	Example:  "topology: boost\noutput-voltage: 48 V\nrectifier: {voltage-rating: 40 V}",
	Hint:     "Measured is the ideal reverse voltage. Ringing comes on top: the derating is what is left for it. Full-wave secondaries are taken as centre-tapped.",
	Reads:    Declaration,
	Place:    here("/rectifier/voltage-rating"),
	Applies:  rectifierBlocks.applies,
	Decide:   rectifierBlocks.decide,
}
