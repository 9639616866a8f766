package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/rules"
)

// models says in a line each which model is in force where, and what decides the mode.
func (p *figurePage) models() error {
	circuit := &p.design.Nominal.Circuit
	peak := circuit.Modulator.Scheme == plant.PeakCurrentMode
	continuous, discontinuous, ripple := p.modes()
	var lines []string
	if continuous {
		words := "ccm: state-space averaging with losses (Middlebrook and Ćuk 1976)"
		if peak {
			words += ", the inner current loop sampled (Ridley 1991)"
		}
		lines = append(lines, words)
	}
	if discontinuous {
		switch {
		case circuit.Topology.TwoInductor():
			lines = append(lines, "dcm: none for two inductors; the loop is not assessed there")
		case peak:
			lines = append(lines, "dcm: full-order averaged model (Sun et al. 2001), the sensed peak setting the duty, no sampling term")
		default:
			lines = append(lines, "dcm: full-order averaged model (Sun et al. 2001)")
		}
	}
	lines = append(lines, p.modeWords())
	if ripple {
		lines = append(lines,
			"with ripple: the same loop with the output ripple at the comparator as a first-order term (after Brown and",
			"  Middlebrook 1981); the averaged figures leave it out. Trust the lower of the two.")
	}
	if circuit.Filter.Capacitance > 0 {
		lines = append(lines, "the input filter is in the model; Zo/ZN and Zo/ZD say how much the loop sees of it (Middlebrook 1976)")
	}
	if p.design.Nominal.Network.Kind == network.Digital {
		lines = append(lines, "digital network: N(z)/D(z) on the unit circle with its delay, up to half the sampling frequency")
	}
	_, err := fmt.Fprintf(p.w, "\n%s\n  %s\n", p.bold("Models in force"), strings.Join(lines, "\n  "))
	return err
}

// modes says which conduction modes the listed corners have, and whether any has figures with ripple.
func (p *figurePage) modes() (continuous, discontinuous, ripple bool) {
	look := func(c *analysis.Corner) {
		continuous = continuous || c.Reached && c.Plant.Mode == plant.Continuous
		discontinuous = discontinuous || c.Reached && c.Plant.Mode == plant.Discontinuous
		ripple = ripple || c.Ripple != nil
	}
	if p.o.At != nil {
		look(p.o.At)
		return
	}
	for i := range p.file.Result.Corners {
		look(&p.file.Result.Corners[i])
	}
	return
}

// modeWords says what decides the conduction mode: the rectifier, and the load at which each input leaves continuous
// conduction with nominal parts.
func (p *figurePage) modeWords() string {
	point := p.design.Nominal.Circuit
	if point.Synchronous {
		return "mode: ccm at every load, the rectifier is synchronous"
	}
	var words []string
	input := p.axis("input-voltage", point.InputVoltage)
	for i, volts := range []float64{input.Min, input.Nominal, input.Max} {
		if i > 0 && volts == []float64{input.Min, input.Min, input.Nominal}[i] {
			continue
		}
		point.InputVoltage = volts
		if load := plant.CriticalCurrent(&point); !math.IsNaN(load) && load > 0 {
			words = append(words, shown(load, "A")+" at "+shown(volts, "V")+" in")
		}
	}
	if len(words) == 0 {
		return "mode: the critical load is unknown, no duty reaches the output voltage with nominal parts"
	}
	return "mode: dcm below the critical load, with nominal parts " + strings.Join(words, ", ")
}

// axis is a field's spread, a single value where it has none.
func (p *figurePage) axis(path string, value float64) analysis.Axis {
	for _, a := range p.design.Axes {
		if a.Path == path {
			return a
		}
	}
	return analysis.Axis{Path: path, Min: value, Nominal: value, Max: value}
}

// outcomes lists what became of each rule, by outcome; what could not be assessed says why.
func (p *figurePage) outcomes() error {
	if p.o.At != nil || len(p.file.Outcomes) == 0 {
		return nil
	}
	var b strings.Builder
	for _, status := range []rules.Status{rules.Broken, rules.NotAssessed, rules.Holds, rules.NotApplicable} {
		label := status.String()
		for _, group := range byReason(p.file.Outcomes, status) {
			for _, part := range atCommas(strings.Join(group.rules, ", "), cornerWidth) {
				fmt.Fprintf(&b, "  %-14s  %s\n", label, part)
				label = ""
			}
			if group.reason != "" {
				fmt.Fprintf(&b, "  %-14s    %s\n", "", safe(group.reason))
			}
		}
	}
	_, err := io.WriteString(p.w, "\n"+p.bold("Rules")+"\n"+b.String())
	return err
}

type reasoned struct {
	reason string
	rules  []string
}

// byReason gathers the rules of one status, those without a reason first.
func byReason(all []rules.Outcome, status rules.Status) []reasoned {
	groups := []reasoned{{}}
	for _, o := range all {
		if o.Status != status {
			continue
		}
		i := 0
		for i < len(groups) && groups[i].reason != o.Reason {
			i++
		}
		if i == len(groups) {
			groups = append(groups, reasoned{reason: o.Reason})
		}
		groups[i].rules = append(groups[i].rules, o.Rule.Name)
	}
	if len(groups[0].rules) == 0 {
		return groups[1:]
	}
	return groups
}
