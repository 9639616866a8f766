package rules

import (
	"math"

	"halfplane/analysis/plant"
)

// duties are slips of the duty in a figure that is written with it: 1 − D for D, and the duty of one switch for that of the
// filter, whose period is half as long in the bridges.
func (w workings) duties() []slip {
	const rule = statedFigureName
	if w.mode != plant.Continuous || w.figure.ideal == nil && w.figure.key != "critical-current" {
		return nil
	}
	slips := w.atDuty(rule, "1 − D for D", func(d float64) float64 { return 1 - d })
	if w.circuit.Topology.FilterMultiple() == 1 {
		return slips
	}
	const one = "one switch's period for the filter's"
	ofSwitch := func(d float64) float64 { return d / 2 }
	if w.circuit.Topology == plant.IsolatedBoost { // both switches conduct while the inductor is shorted
		ofSwitch = func(d float64) float64 { return (1 + d) / 2 }
	}
	slips = append(slips, w.atDuty(rule, one, ofSwitch)...)
	if w.figure.key == "critical-current" {
		slips = append(slips, w.factor(rule, one, w.circuit.Topology.FilterMultiple()))
	}
	return slips
}

// atDuty is the figure with another duty put into its closed form.
func (w workings) atDuty(rule, words string, other func(float64) float64) []slip {
	stage := plant.Reflect(w.circuit)
	ideal := plant.IdealOf(w.circuit).Duty
	s := slip{rule: rule, words: words}
	for _, form := range closedForms(w.figure.key, &stage) {
		for _, d := range [...]float64{ideal, w.duty} {
			if v := form(other(d)); !math.IsNaN(v) && !math.IsInf(v, 0) {
				s.values = append(s.values, w.got*v/form(d))
				if w.figure.key != "resonance" { // its form leaves out what does not change
					s.values = append(s.values, v)
				}
			}
		}
	}
	if len(s.values) == 0 {
		return nil
	}
	if w.figure.key == "duty" { // nothing to scale
		s.values = []float64{other(w.duty), other(ideal)}
	}
	return []slip{s}
}

// closedForms are the loss-free forms of a figure in continuous conduction as functions of the duty D, in each way that it
// is commonly written (theory: IdealOf; the ripple of the inductor current gives the critical current). Vi is the input at
// the filter, R = V/I, D' = 1 − D; none where the duty is not in the figure.
func closedForms(key string, s *plant.Stage) []func(d float64) float64 {
	type form = func(float64) float64
	v, vi, r := s.Output, s.Drive*s.Input, s.Output/s.Load
	l, t := s.Inductance, s.Period
	buck, boost := s.Family == plant.BuckLike, s.Family == plant.BoostLike
	pick := func(ofBuck, ofBoost, ofBuckBoost []form) []form {
		switch {
		case buck:
			return ofBuck
		case boost:
			return ofBoost
		}
		return ofBuckBoost
	}
	if s.Second.Inductance > 0 && (key == "resonance" || key == "rhp-zero") {
		return nil // of fourth order: no such form
	}
	switch key {
	case "duty":
		return []form{func(d float64) float64 { return d }}
	case "line-gain":
		return pick([]form{func(d float64) float64 { return s.Drive * d }},
			[]form{func(d float64) float64 { return s.Drive / (1 - d) }},
			[]form{func(d float64) float64 { return s.Drive * d / (1 - d) }})
	case "control-gain":
		return pick(nil, // written with the input, as it mostly is, a buck's has no duty
			[]form{func(d float64) float64 { return v / (1 - d) }, func(d float64) float64 { return vi / ((1 - d) * (1 - d)) }},
			[]form{func(d float64) float64 { return v / (d * (1 - d)) }, func(d float64) float64 { return vi / ((1 - d) * (1 - d)) }})
	case "resonance":
		return pick(nil, []form{func(d float64) float64 { return 1 - d }}, []form{func(d float64) float64 { return 1 - d }})
	case "rhp-zero":
		return pick(nil, []form{func(d float64) float64 { return (1 - d) * (1 - d) * r / l / (2 * math.Pi) }},
			[]form{func(d float64) float64 { return (1 - d) * (1 - d) * r / (d * l) / (2 * math.Pi) }})
	case "critical-current":
		return pick([]form{func(d float64) float64 { return v * (1 - d) * t / (2 * l) }, func(d float64) float64 { return vi * d * (1 - d) * t / (2 * l) }},
			[]form{func(d float64) float64 { return v * d * (1 - d) * (1 - d) * t / (2 * l) }, func(d float64) float64 { return vi * d * (1 - d) * t / (2 * l) }},
			[]form{func(d float64) float64 { return v * (1 - d) * (1 - d) * t / (2 * l) }, func(d float64) float64 { return vi * d * (1 - d) * t / (2 * l) }})
	}
	return nil
}
