package rules

import (
	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var switchBlocks = rating{
	pointer: "/switch/voltage-rating", what: "the switch blocks", unit: "V", derate: voltageDerating,
	of: func(c *Case, k *analysis.Corner) float64 {
		return plant.StressOf(c.circuit(k.At)).Switch
	},
	sum: func(c *Case, k *analysis.Corner) string {
		symbols, _ := blockingSums(c.Design.Nominal.Circuit.Topology)
		return voltageSum(c, k, symbols)
	},
	decided: []string{"/input-voltage", "/output-voltage", "/turns"},
}

var switchVoltage = Rule{
	Name:     "switch-voltage",
	Group:    Operating,
	Severity: Error,
	Also:     []Severity{Warning},
	Sentence: "The switch's rating stands clear of the voltage that it blocks at every corner, ringing not counted.",
	Formula:  "ideal blocking voltage ≤ voltage-derating · rating (warning), ≤ rating (error)",
	Source:   "common practice (volt-second balance of each topology)",
	Policy:   []Threshold{voltageDerating},
	Example:  "topology: flyback\nturns: {primary: 18, secondary: 6}\ninput-voltage: {min: 36 V, nominal: 48 V, max: 72 V}\noutput-voltage: 12 V\nswitch: {voltage-rating: 100 V}   # blocks 72 V + 12 V/0.333 = 108 V",
	Hint:     "Measured is the ideal blocking voltage. Ringing of leakage inductance and wiring comes on top: the derating is what is left for it.",
	Reads:    Declaration,
	Place:    here("/switch/voltage-rating"),
	Applies:  switchBlocks.applies,
	Decide:   switchBlocks.decide,
}
