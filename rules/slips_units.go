package rules

import (
	"math"

	"halfplane/analysis/plant"
)

// units are slips of a unit, or of what a number is counted in.
func (w workings) units() []slip {
	const rule = statedFigureName
	switch w.figure.key {
	case "duty", "turns-ratio":
		return []slip{w.factor(rule, "per cent for a ratio", 100)}
	case "line-gain", "control-gain":
		return []slip{
			{rule, "decibels for a ratio", []float64{20 * math.Log10(w.got)}},
			w.factor(rule, "per cent for a ratio", 100),
		}
	case "rhp-zero", "resonance", "esr-zero", "crossover":
		return []slip{
			w.factor(rule, "radians per second for hertz", 2*math.Pi),
			w.factor(rule, "hertz taken for radians per second", 1/(2*math.Pi)),
		}
	case "critical-current":
		return []slip{
			w.factor(rule, "the ripple from peak to peak for its peak", 2),
			w.factor(rule, "the ripple's peak taken for its value from peak to peak", 1.0/2),
		}
	}
	return nil
}

// conditions are slips of what the figure is computed for.
func (w workings) conditions() []slip {
	const rule = statedFigureName
	slips := w.changed(rule, "nominal load for full load", func(p *plant.Circuit) { p.LoadCurrent = w.c.Design.Nominal.Circuit.LoadCurrent })
	switch w.figure.key {
	case "resonance", "esr-zero", "crossover", "phase-margin":
		slips = append(slips, w.changed(rule, "bias derating left out", func(p *plant.Circuit) {
			for i := range p.Banks {
				p.Banks[i].Derating = nil
			}
		})...)
	}
	if w.figure.reads == Figures && w.circuit.Modulator.Scheme == plant.VoltageMode {
		slips = append(slips, w.changed(rule, "the ramp's peak for its value from peak to peak", func(p *plant.Circuit) { p.Modulator.RampAmplitude /= 2 })...)
		slips = append(slips, w.changed(rule, "the ramp's value from peak to peak taken for its peak", func(p *plant.Circuit) { p.Modulator.RampAmplitude *= 2 })...)
	}
	return slips
}
