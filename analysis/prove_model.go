package analysis

import (
	"fmt"
	"slices"
	"strings"

	"halfplane/analysis/interval"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// enclosed is a design prepared for a proof: what of it is constant, and which symbol each axis that moves has. The last symbol is that
// of the frequency.
type enclosed struct {
	space     interval.Space
	axes      []int // design axes; symbol i belongs to axes[i]
	design    *Design
	point     Point // nominal, for what does not move
	symbol    map[string]int
	frequency int // the frequency's symbol

	stage    plant.Stage // of the nominal circuit: turns, drive, period, interval coefficients
	weights  weights
	branches []branchWeight
}

// weights are the factors with which values as written enter the reflected stage; plant.Reflect is linear in them.
type weights struct {
	inductance            float64
	onWinding, offWinding float64 // into the loss resistance of either interval
	onSwitch, offSwitch   float64
	onDiode, offDiode     float64
}

// branchWeight is one capacitor at the output: the paths of its values and their factors.
type branchWeight struct {
	capacitance, esr string
	c, r             float64
}

// enclose prepares a design, or says in a clause why no proof covers it.
func enclose(d *Design) (*enclosed, string) {
	if why := outside(d); why != "" {
		return nil, why
	}
	e := &enclosed{design: d, point: d.Nominal.clone(), symbol: make(map[string]int)}
	for axis, a := range d.Axes {
		if !(a.Min < a.Max) || inert(d, a.Path) {
			continue
		}
		path := a.Path
		if strings.HasPrefix(path, "output-capacitor.") {
			path = "output-capacitors.0." + strings.TrimPrefix(path, "output-capacitor.")
		}
		if !e.models(path) {
			return nil, "a proof takes " + path + " as exact, and here it has a range"
		}
		e.symbol[path] = len(e.axes)
		e.axes = append(e.axes, axis)
	}
	if len(e.axes) >= interval.Symbols {
		return nil, fmt.Sprintf("a proof covers at most %d ranges and tolerances at once, this design has %d", interval.Symbols-1, len(e.axes))
	}
	e.frequency = len(e.axes)
	e.space.N = len(e.axes) + 1
	e.stage = plant.Reflect(&e.point.Circuit)
	e.weigh()
	return e, ""
}

// inert says whether a field has no part in the loop gain of a covered design, whatever its value.
func inert(d *Design, path string) bool {
	c := &d.Nominal.Circuit
	room, key, _ := strings.Cut(path, ".")
	switch room {
	case "magnetizing-inductance", "second-inductor", "coupling-capacitor":
		return true
	case "input-filter":
		return !strings.HasSuffix(key, "capacitance") && c.Filter.Capacitance == 0
	case "modulator":
		return key == "current-sense-gain" || key == "slope-compensation"
	case "turns":
		return !c.Topology.Isolated()
	case "compensator":
		return !slices.Contains(networkFields(d), key)
	}
	return false
}

// networkFields lists what of a compensator its transfer function holds.
func networkFields(d *Design) []string {
	n := &d.Nominal.Network
	parts := []string{"upper-resistor", "integrator-capacitor"}
	if n.Kind != network.Type1 {
		parts = append(parts, "feedback-resistor", "rolloff-capacitor")
	}
	switch n.Kind {
	case network.Type3:
		parts = append(parts, "lead-resistor", "lead-capacitor")
	case network.Transconductance:
		return append(parts, "lead-resistor", "lead-capacitor", "lower-resistor", "transconductance", "output-resistance")
	}
	ranged := slices.ContainsFunc(d.Axes, func(a Axis) bool { return strings.HasPrefix(a.Path, "compensator.amplifier.") })
	if ranged || n.GainBandwidth > 0 || n.OpenLoopGain > 0 {
		parts = append(parts, "lower-resistor", "amplifier.gain-bandwidth", "amplifier.open-loop-gain")
	}
	return parts
}

// mostBanks bounds the banks of a design that a proof covers; the load's own capacitance comes on top.
const mostBanks = 3

// outside says why a design is not of the kind that a proof covers, "" when it is.
func outside(d *Design) string {
	c, n := &d.Nominal.Circuit, &d.Nominal.Network
	switch {
	case c.Topology.TwoInductor():
		return fmt.Sprintf("a proof covers stages with one inductor, and a %v has two", c.Topology)
	case c.Modulator.Scheme != plant.VoltageMode:
		return "a proof covers voltage mode, and this design is in " + c.Modulator.Scheme.String()
	case len(c.Banks) > mostBanks:
		return fmt.Sprintf("a proof covers up to %d banks of output capacitors", mostBanks)
	case c.Filter.Capacitance > 0 && (c.Filter.Inductance > 0 || c.Filter.Resistance > 0):
		return "a proof covers designs without an input filter"
	}
	switch n.Kind {
	case network.Type1, network.Type2, network.Type3, network.Transconductance:
		return ""
	}
	return "a proof covers the op-amp networks and the transconductance amplifier, and this one is of kind " + n.Kind.String()
}

// modelled are the fields whose ranges a proof follows, besides those of banks.
var modelled = []string{
	"switching-frequency", "input-voltage", "output-voltage", "turns.primary", "turns.secondary", "load.current", "load.capacitance", "load.esr", "inductor.inductance", "inductor.resistance",
	"switch.on-resistance", "rectifier.forward-drop", "rectifier.resistance", "modulator.ramp-amplitude", "modulator.control-ratio",
	"modulator.delay", "compensator.upper-resistor", "compensator.lower-resistor", "compensator.feedback-resistor",
	"compensator.integrator-capacitor", "compensator.rolloff-capacitor", "compensator.lead-resistor", "compensator.lead-capacitor",
	"compensator.amplifier.gain-bandwidth", "compensator.amplifier.open-loop-gain", "compensator.transconductance",
	"compensator.output-resistance",
}

func (e *enclosed) models(path string) bool {
	if path == "output-voltage" { // a bias table makes the capacitance depend on it
		return !slices.ContainsFunc(e.point.Circuit.Banks, func(b plant.Bank) bool { return len(b.Derating) > 0 })
	}
	if rest, ok := strings.CutPrefix(path, "output-capacitors."); ok {
		_, key, _ := strings.Cut(rest, ".")
		return key == "capacitance" || key == "esr"
	}
	return slices.Contains(modelled, path)
}

// weigh finds the factors by reflecting circuits with a single value of 1.
func (e *enclosed) weigh() {
	bare := e.point.Circuit
	bare.Inductor = plant.Winding{Inductance: 1}
	bare.SwitchResistance, bare.RectifierResistance, bare.LoadCapacitance = 0, 0, 0
	with := func(set func(c *plant.Circuit)) plant.Stage {
		c := bare
		set(&c)
		return plant.Reflect(&c)
	}
	w := &e.weights
	s := with(func(*plant.Circuit) {})
	w.inductance = s.Inductance
	s = with(func(c *plant.Circuit) { c.Inductor.Resistance = 1 })
	w.onWinding, w.offWinding = s.On.R, s.Off.R
	s = with(func(c *plant.Circuit) { c.SwitchResistance = 1 })
	w.onSwitch, w.offSwitch = s.On.R, s.Off.R
	s = with(func(c *plant.Circuit) { c.RectifierResistance = 1 })
	w.onDiode, w.offDiode = s.On.R, s.Off.R
	for i, bank := range e.point.Circuit.Banks {
		bank.Capacitance, bank.ESR = 1, 1
		s = with(func(c *plant.Circuit) { c.Banks = []plant.Bank{bank} })
		path := fmt.Sprintf("output-capacitors.%d.", i)
		b := s.Branches()[0]
		e.branches = append(e.branches, branchWeight{path + "capacitance", path + "esr", b.C, b.R})
	}
	if _, moves := e.symbol["load.capacitance"]; moves || e.point.Circuit.LoadCapacitance > 0 {
		e.branches = append(e.branches, branchWeight{"load.capacitance", "load.esr", 1, 1})
	}
}

// cell is a part of the box: a range for each symbol but the frequency's.
type cell struct {
	low, high []float64
}

// value is the form of a field over a cell; one that does not move is constant.
func (e *enclosed) value(c *cell, path string) interval.Form {
	if i, moves := e.symbol[path]; moves {
		return interval.Range(c.low[i], c.high[i], i)
	}
	return interval.Const(*Field(&e.point, path))
}

// given says whether an optional part is there: it moves, or its value is not zero.
func (e *enclosed) given(path string) bool {
	_, moves := e.symbol[path]
	return moves || *Field(&e.point, path) != 0
}
