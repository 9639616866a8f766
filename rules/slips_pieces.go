package rules

import (
	"math"

	"halfplane/analysis/plant"
)

// pieces are slips of how often a part is there: capacitors in parallel and interleaved phases.
func (w workings) pieces() []slip {
	const rule = statedFigureName
	var slips []slip
	switch w.figure.key {
	case "resonance", "crossover", "phase-margin":
		slips = append(slips, w.changed(rule, "one piece of the output capacitor counted", func(p *plant.Circuit) {
			for i := range p.Banks {
				p.Banks[i].Count = 1
			}
		})...)
		slips = append(slips, w.changed(rule, "the pieces of the output capacitor counted twice", func(p *plant.Circuit) {
			for i := range p.Banks {
				p.Banks[i].Count *= p.Banks[i].Count
			}
		})...)
	case "esr-zero":
		if len(w.circuit.Banks) == 1 { // of several banks the lowest zero counts, whichever that is then
			count := w.circuit.Banks[0].Count
			slips = append(slips,
				w.factor(rule, "the pieces counted for the capacitance and not for the ESR", 1/count),
				w.factor(rule, "the pieces counted for the ESR and not for the capacitance", count))
		}
	}
	return append(slips, w.phases()...)
}

// phases are slips of the number of interleaved phases, which share the load and lie in parallel for the output filter.
func (w workings) phases() []slip {
	count := float64(w.circuit.Phases)
	if count == 1 {
		return nil
	}
	power := 0.0 // of the number of phases in the figure
	switch w.figure.key {
	case "rhp-zero", "critical-current":
		power = 1
	case "resonance":
		power = 1.0 / 2
	case "effective-inductance": // of one phase: here it is counting them that is the slip
		return []slip{w.factor(statedFigureName, "the phases counted, though it is the inductance of one", 1/count)}
	default:
		return nil
	}
	return []slip{
		w.factor(statedFigureName, "the phases not counted", math.Pow(count, -power)),
		w.factor(statedFigureName, "the phases counted twice", math.Pow(count, power)),
	}
}
