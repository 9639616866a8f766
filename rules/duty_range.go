package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var dutyRange = Rule{
	Name:     "duty-range",
	Group:    Operating,
	Severity: Error,
	Sentence: "The duty that regulation needs exists and lies inside the duty limits at every corner, losses included.",
	Formula:  "duty-limit.min ≤ D ≤ duty-limit.max, with vo(D) = V",
	Source:   "R. D. Middlebrook, S. Ćuk, \"A general unified approach to modelling switching-converter power stages\", IEEE PESC (1976), for D with losses",
	Example:  "topology: boost\ninput-voltage: {min: 9 V, nominal: 12 V, max: 16 V}\noutput-voltage: 24 V\nmodulator: {scheme: voltage-mode, ramp-amplitude: 1.8 V, duty-limit: {min: 0, max: 0.6}}   # 0.632 is needed at 9 V",
	Hint:     "Measured is the duty at the worst corner with all losses; the closed form without losses stands in the formula. Where no duty reaches the output voltage there is no measured figure: less resistance, a higher input or another turns ratio is needed, and what other rules found beside that corner is listed below it.",
	Reads:    Operation,
	Place:    dutyLimit,
	Decide: func(c *Case) []Finding {
		if f, broken := unreached(c); broken {
			return []Finding{f}
		}
		low, high := dutyLimits(c)
		corner, excess := c.worstStage(func(k *analysis.Corner) float64 {
			if !k.Reached {
				return math.NaN()
			}
			return math.Max(k.Plant.Duty-high, low-k.Plant.Duty)
		})
		if corner == nil || excess <= 0 {
			return nil
		}
		duty, limit, side := corner.Plant.Duty, high, "above the upper"
		if duty < low {
			limit, side = low, "below the lower"
		}
		f := c.atCorner(dutyLimit(c), corner)
		f.Message = fmt.Sprintf("the duty that is needed, %s, is %s duty limit, %s", number(duty, ""), side, number(limit, ""))
		f.Formula = fmt.Sprintf("%s ≤ D ≤ %s; D = %s, without losses %s", short(low), short(high), number(duty, ""), number(plant.IdealOf(c.circuit(corner.At)).Duty, ""))
		f.Measured, f.Limit = asNumber(duty, ""), asNumber(limit, "")
		if c.nominal().Reached {
			f.Nominal = asNumber(c.nominal().Plant.Duty, "")
		}
		if duty < low {
			c.relate(&f, "is the limit that is passed", "/modulator/duty-limit/min")
		}
		c.relate(&f, "sets the duty", "/input-voltage", "/output-voltage", "/load/current", "/turns")
		return []Finding{f}
	},
}

// unreached is the finding for the corner whose output voltage no duty reaches: lowest input first, then the highest load.
func unreached(c *Case) (Finding, bool) {
	var corner *analysis.Corner
	for i := range c.Result.Corners {
		k := &c.Result.Corners[i]
		if k.Reached {
			continue
		}
		if corner == nil || c.valueAt(k, "input-voltage") < c.valueAt(corner, "input-voltage") ||
			c.valueAt(k, "input-voltage") == c.valueAt(corner, "input-voltage") && c.valueAt(k, "load.current") > c.valueAt(corner, "load.current") {
			corner = k
		}
	}
	if corner == nil {
		return Finding{}, false
	}
	f := c.atCorner(dutyLimit(c), corner)
	f.Message, f.Formula = unreachedWords(c.circuit(corner.At))
	if c.nominal().Reached {
		f.Nominal = asNumber(c.nominal().Plant.Duty, "")
	}
	c.relate(&f, "sets the duty", "/output-voltage", "/input-voltage", "/load/current", "/turns")
	c.relate(&f, "takes part of the voltage", "/inductor/resistance", "/switch/on-resistance", "/rectifier/forward-drop", "/rectifier/resistance")
	return f, true
}

// unreachedWords says why no duty reaches the output voltage: a boost-like stage cannot step down; any other has losses that
// eat too much.
func unreachedWords(circuit *plant.Circuit) (message, formula string) {
	volts := number(circuit.OutputVoltage, "V")
	message, formula = "no duty reaches the output voltage "+volts, "vo(D) < "+volts+" for every D between 0 and 1"
	if stage := plant.Reflect(circuit); stage.Family == plant.BoostLike && stage.Drive*stage.Input >= stage.Output {
		driven := number(stage.Drive*stage.Input, "V")
		return fmt.Sprintf("%s: a %s gives no less than its input, %s on the output side", message, circuit.Topology, driven), volts + " < " + driven
	}
	return message + ": the losses leave less at every duty", formula
}

// dutyLimits are the modulator's lowest and highest duty: 0 and 1 unless stated; a plain number is the upper limit.
func dutyLimits(c *Case) (low, high float64) {
	q, stated := c.Spec.Quantity("/modulator/duty-limit")
	switch {
	case !stated:
		return 0, 1
	case !q.Spread || q.Min == q.Max:
		return 0, q.Max
	}
	return q.Min, q.Max
}
