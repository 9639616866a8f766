package rules

import (
	"math"

	"halfplane/analysis/plant"
)

// workings recompute one figure with a slip put in.
type workings struct {
	circuit    *plant.Circuit
	figure     statedFigure
	got, ideal float64
	mode       plant.Mode
}

// factor is a slip that multiplies the figure.
func (w workings) factor(rule, words string, by float64) slip {
	s := slip{rule: rule, words: words, values: []float64{w.got * by}}
	if !math.IsNaN(w.ideal) {
		s.values = append(s.values, w.ideal*by)
	}
	return s
}

// changed is a slip that recomputes the figure from a changed circuit; ok is false where nothing can be computed from it.
func (w workings) changed(rule, words string, change func(*plant.Circuit)) (s slip, ok bool) {
	circuit := *w.circuit
	change(&circuit)
	// Whoever made the slip went on computing in the mode that the figure is stated for.
	circuit.Synchronous = circuit.Synchronous || w.mode == plant.Continuous
	s = slip{rule: rule, words: words}
	if w.figure.ideal != nil {
		ideal := plant.IdealOf(&circuit)
		if v := w.figure.ideal(&ideal); !math.IsNaN(v) && ideal.Duty > 0 && ideal.Duty < 1 {
			s.values = append(s.values, v*w.got/w.ideal, v)
		}
	}
	var solution plant.Solution
	if plant.Solve(&circuit, &solution) == nil {
		if v := w.figure.of(&solution); !math.IsNaN(v) {
			s.values = append(s.values, v)
		}
	}
	return s, len(s.values) > 0 && !math.IsNaN(s.values[0])
}

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
		if s, ok := w.changed("turns-ratio", one.words, func(c *plant.Circuit) {
			c.TurnsSecondary *= change
			if c.InductorOnPrimary {
				c.Inductor.Inductance /= change * change
				c.Inductor.Resistance /= change * change
			}
			c.SwitchResistance /= change * change
		}); ok {
			slips = append(slips, s)
		}
		if !w.figure.inductive || !w.circuit.InductorOnPrimary || one.ratio == 2*n {
			continue
		}
		if s, ok := w.changed("turns-ratio", one.words, func(c *plant.Circuit) { c.TurnsSecondary *= change }); ok {
			slips = append(slips, s)
		}
	}
	return slips
}

// reflections are slips of the inductance alone: n to another power than it should be.
func (w workings) reflections(n float64) []slip {
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
	case "rhp-zero":
		power = -1
	case "resonance":
		power = -1.0 / 2
	}
	for _, one := range all {
		slips = append(slips, w.factor("reflected-inductance", one.words, math.Pow(n, one.power*power)))
	}
	return slips
}

// others are slips of a unit or of the conditions. They matter here as rivals: a figure that one of them explains as well is
// not called a slip of the ratio or of reflection.
func (w workings) others(c *Case) []slip {
	const rule = "stated-figure"
	var slips []slip
	add := func(s slip, ok bool) {
		if ok {
			slips = append(slips, s)
		}
	}
	switch w.figure.key {
	case "duty":
		add(slip{rule, "1 − D for D", []float64{1 - w.got, 1 - w.ideal}}, true)
		add(w.factor(rule, "per cent for a ratio", 100), true)
	case "line-gain", "control-gain":
		add(slip{rule, "decibels for a ratio", []float64{math.Abs(20 * math.Log10(w.got))}}, true)
	case "rhp-zero", "resonance":
		add(w.factor(rule, "radians per second for hertz", 2*math.Pi), true)
		add(w.factor(rule, "hertz taken for radians per second", 1/(2*math.Pi)), true)
	}
	add(w.changed(rule, "nominal load for full load", func(p *plant.Circuit) { p.LoadCurrent = c.Design.Nominal.Circuit.LoadCurrent }))
	if w.figure.key != "resonance" {
		return slips
	}
	add(w.changed(rule, "one piece of the output capacitor counted", func(p *plant.Circuit) { p.Banks = eachBank(p.Banks, func(b *plant.Bank) { b.Count = 1 }) }))
	add(w.changed(rule, "bias derating left out", func(p *plant.Circuit) { p.Banks = eachBank(p.Banks, func(b *plant.Bank) { b.Derating = nil }) }))
	return slips
}

// eachBank is a changed copy of a list of banks.
func eachBank(banks []plant.Bank, change func(*plant.Bank)) []plant.Bank {
	changed := append([]plant.Bank(nil), banks...)
	for i := range changed {
		change(&changed[i])
	}
	return changed
}
