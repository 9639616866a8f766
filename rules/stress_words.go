package rules

import (
	"fmt"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

// blockingSums are the ideal blocking voltages of switch and rectifier in symbols: Vg the input, V the output, n secondary over
// primary. A forward resets through a winding like its primary; the full-wave secondaries are centre-tapped.
func blockingSums(t plant.Topology) (ofSwitch, ofRectifier string) {
	switch t {
	case plant.Buck:
		return "Vg", "Vg"
	case plant.Boost:
		return "V", "V"
	case plant.BuckBoost, plant.Sepic, plant.Cuk, plant.Zeta:
		return "Vg + V", "Vg + V"
	case plant.TwoSwitchBuckBoost:
		return "max(Vg, V)", "max(Vg, V)"
	case plant.Flyback:
		return "Vg + V/n", "V + n·Vg"
	case plant.Forward:
		return "2·Vg", "n·Vg"
	case plant.TwoSwitchForward, plant.HalfBridge:
		return "Vg", "n·Vg"
	case plant.PushPull:
		return "2·Vg", "2·n·Vg"
	case plant.FullBridge:
		return "Vg", "2·n·Vg"
	case plant.IsolatedBoost:
		return "2·V/n", "V"
	}
	return "", ""
}

// voltageSum is a blocking voltage's sum in symbols and with a corner's numbers: "Vg + V/n = 60.0 V + 12.0 V/0.333".
func voltageSum(c *Case, k *analysis.Corner, symbols string) string {
	circuit := c.circuit(k.At)
	numbers := strings.NewReplacer("Vg", number(circuit.InputVoltage, "V"), "V", number(circuit.OutputVoltage, "V"),
		"n", number(circuit.TurnsSecondary/circuit.TurnsPrimary, ""))
	if !strings.ContainsAny(symbols, "+·/(") { // the corner's number alone
		return symbols
	}
	return symbols + " = " + numbers.Replace(symbols)
}

// switchCurrentSum is what a switch's peak current is made of: the windings' average and half ripple, the ratio, and the
// magnetizing current where it counts.
func switchCurrentSum(c *Case, k *analysis.Corner) string {
	sum := func(average, ripple float64) string {
		if k.Plant.Mode == plant.Discontinuous {
			return "ripple " + number(ripple, "A")
		}
		return number(average, "A") + " + " + number(ripple, "A") + "/2"
	}
	topology := c.Design.Nominal.Circuit.Topology
	words := sum(k.Plant.InductorCurrent, k.Plant.InductorRipple)
	if topology.TwoInductor() {
		words += " + " + sum(k.Plant.SecondCurrent, k.Plant.SecondRipple)
	}
	if !topology.Isolated() {
		return words
	}
	words = fmt.Sprintf("(%s) · %s", words, number(k.Plant.TurnsRatio, ""))
	whole := plant.SwitchPeak(c.circuit(k.At), &k.Plant)
	if magnetizing := whole - k.Plant.InductorPeak*k.Plant.TurnsRatio; magnetizing > 1e-9*whole {
		words += " + magnetizing " + number(magnetizing, "A")
	}
	return words
}
