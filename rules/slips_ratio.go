package rules

import (
	"math"

	"halfplane/analysis/plant"
)

// gainFactors are slips of a gain whose duty is right: the line gain has the ratio once, the control gain written with the
// input voltage once, written with the output voltage not at all.
func (w workings) gainFactors(n float64) []slip {
	slips := []slip{
		w.factor("turns-ratio", "the turns ratio inverted", 1/(n*n)),
		w.factor("turns-ratio", "the turns ratio left out", 1/n),
	}
	twice := "the turns ratio applied twice"
	if w.figure.key == "control-gain" {
		twice = "the turns ratio applied where it cancels"
	}
	slips = append(slips, w.factor("turns-ratio", twice, n))
	if w.circuit.Topology == plant.HalfBridge {
		slips = append(slips, w.factor("turns-ratio", "the half of the half-bridge left out", 2))
	}
	return slips
}

// ratioEverywhere are slips of the ratio from which the duty is wrong already; with the inductance reflected rightly or by
// the same wrong ratio.
func (w workings) ratioEverywhere(n float64) []slip {
	type wrong struct {
		words string
		ratio float64
	}
	all := []wrong{{"the turns ratio inverted", 1 / n}, {"the turns ratio left out", 1}, {"the turns ratio applied twice", n * n}}
	if w.circuit.Topology == plant.HalfBridge {
		all = append(all, wrong{"the half of the half-bridge left out", 2 * n})
	}
	var slips []slip
	for _, one := range all {
		change := one.ratio / n
		if change == 1 {
			continue
		}
		slips = append(slips, w.changed("turns-ratio", one.words, func(c *plant.Circuit) {
			c.TurnsSecondary *= change
			if c.InductorOnPrimary {
				c.Inductor.Inductance /= change * change
				c.Inductor.Resistance /= change * change
			}
			c.SwitchResistance /= change * change
		})...)
		if !w.figure.inductive || !w.circuit.InductorOnPrimary || one.ratio == 2*n {
			continue
		}
		slips = append(slips, w.changed("turns-ratio", one.words, func(c *plant.Circuit) { c.TurnsSecondary *= change })...)
	}
	return slips
}

// reflections are slips of the inductance alone: n to another power than it should be.
func (w workings) reflections(n float64) []slip {
	if !w.circuit.Topology.Isolated() {
		return nil
	}
	type wrong struct {
		words string
		power float64 // of n, beyond the right one
	}
	all := []wrong{
		{"an inductance that is reflected although it is given for the output side", 2},
		{"an inductance that is reflected to the primary although it is given for the output side", -2},
		{"an inductance that is multiplied by n although it is given for the output side", 1},
	}
	if w.circuit.InductorOnPrimary {
		all = []wrong{
			{"an inductance that is not reflected", -2},
			{"an inductance that is reflected twice", 2},
			{"an inductance that is reflected with n for n²", -1},
			{"an inductance that is reflected the wrong way", -4},
		}
	}
	var slips []slip
	power := 1.0 // of the inductance in the figure
	switch w.figure.key {
	case "rhp-zero", "critical-current":
		power = -1
	case "resonance":
		power = -1.0 / 2
	}
	for _, one := range all {
		slips = append(slips, w.factor("reflected-inductance", one.words, math.Pow(n, one.power*power)))
	}
	return slips
}
