package analysis

import (
	"strconv"
	"strings"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// fields is the one table from a dotted path of the spec format to the number it sets. Lists (banks, zeros, poles,
// coefficients) follow in listed.
var fields = map[string]func(*Point) *float64{
	"switching-frequency": func(p *Point) *float64 { return &p.Circuit.SwitchingFrequency },
	"input-voltage":       func(p *Point) *float64 { return &p.Circuit.InputVoltage },
	"output-voltage":      func(p *Point) *float64 { return &p.Circuit.OutputVoltage },

	"load.current":     func(p *Point) *float64 { return &p.Circuit.LoadCurrent },
	"load.capacitance": func(p *Point) *float64 { return &p.Circuit.LoadCapacitance },
	"load.esr":         func(p *Point) *float64 { return &p.Circuit.LoadESR },

	"turns.primary":   func(p *Point) *float64 { return &p.Circuit.TurnsPrimary },
	"turns.secondary": func(p *Point) *float64 { return &p.Circuit.TurnsSecondary },

	"inductor.inductance":            func(p *Point) *float64 { return &p.Circuit.Inductor.Inductance },
	"inductor.resistance":            func(p *Point) *float64 { return &p.Circuit.Inductor.Resistance },
	"second-inductor.inductance":     func(p *Point) *float64 { return &p.Circuit.SecondInductor.Inductance },
	"second-inductor.resistance":     func(p *Point) *float64 { return &p.Circuit.SecondInductor.Resistance },
	"coupling-capacitor.capacitance": func(p *Point) *float64 { return &p.Circuit.Coupling.Capacitance },
	"coupling-capacitor.esr":         func(p *Point) *float64 { return &p.Circuit.Coupling.ESR },
	"coupling-capacitor.count":       func(p *Point) *float64 { return &p.Circuit.Coupling.Count },
	"magnetizing-inductance":         func(p *Point) *float64 { return &p.Circuit.MagnetizingInductance },

	"switch.on-resistance":   func(p *Point) *float64 { return &p.Circuit.SwitchResistance },
	"rectifier.forward-drop": func(p *Point) *float64 { return &p.Circuit.RectifierDrop },
	"rectifier.resistance":   func(p *Point) *float64 { return &p.Circuit.RectifierResistance },

	"input-filter.inductance":          func(p *Point) *float64 { return &p.Circuit.Filter.Inductance },
	"input-filter.resistance":          func(p *Point) *float64 { return &p.Circuit.Filter.Resistance },
	"input-filter.capacitance":         func(p *Point) *float64 { return &p.Circuit.Filter.Capacitance },
	"input-filter.esr":                 func(p *Point) *float64 { return &p.Circuit.Filter.ESR },
	"input-filter.damping-resistance":  func(p *Point) *float64 { return &p.Circuit.Filter.DampingResistance },
	"input-filter.damping-capacitance": func(p *Point) *float64 { return &p.Circuit.Filter.DampingCapacitance },

	"modulator.ramp-amplitude":     func(p *Point) *float64 { return &p.Circuit.Modulator.RampAmplitude },
	"modulator.current-sense-gain": func(p *Point) *float64 { return &p.Circuit.Modulator.CurrentSenseGain },
	"modulator.slope-compensation": func(p *Point) *float64 { return &p.Circuit.Modulator.SlopeCompensation },
	"modulator.control-ratio":      func(p *Point) *float64 { return &p.Circuit.Modulator.ControlRatio },
	"modulator.delay":              func(p *Point) *float64 { return &p.Circuit.Modulator.Delay },

	"compensator.reference-voltage":        func(p *Point) *float64 { return &p.Network.ReferenceVoltage },
	"compensator.upper-resistor":           func(p *Point) *float64 { return &p.Network.UpperResistor },
	"compensator.lower-resistor":           func(p *Point) *float64 { return &p.Network.LowerResistor },
	"compensator.feedback-resistor":        func(p *Point) *float64 { return &p.Network.FeedbackResistor },
	"compensator.integrator-capacitor":     func(p *Point) *float64 { return &p.Network.IntegratorCapacitor },
	"compensator.rolloff-capacitor":        func(p *Point) *float64 { return &p.Network.RolloffCapacitor },
	"compensator.lead-resistor":            func(p *Point) *float64 { return &p.Network.LeadResistor },
	"compensator.lead-capacitor":           func(p *Point) *float64 { return &p.Network.LeadCapacitor },
	"compensator.amplifier.gain-bandwidth": func(p *Point) *float64 { return &p.Network.GainBandwidth },
	"compensator.amplifier.open-loop-gain": func(p *Point) *float64 { return &p.Network.OpenLoopGain },
	"compensator.transconductance":         func(p *Point) *float64 { return &p.Network.Transconductance },
	"compensator.output-resistance":        func(p *Point) *float64 { return &p.Network.OutputResistance },
	"compensator.led-resistor":             func(p *Point) *float64 { return &p.Network.LEDResistor },
	"compensator.pull-up-resistor":         func(p *Point) *float64 { return &p.Network.PullUpResistor },
	"compensator.current-transfer-ratio":   func(p *Point) *float64 { return &p.Network.CurrentTransferRatio },
	"compensator.optocoupler-pole":         func(p *Point) *float64 { return &p.Network.OptocouplerPole },
	"compensator.pull-up-voltage":          func(p *Point) *float64 { return &p.Network.PullUpVoltage },
	"compensator.led-supply-voltage":       func(p *Point) *float64 { return &p.Network.LEDSupplyVoltage },
	"compensator.gain":                     func(p *Point) *float64 { return &p.Network.Gain },
	"compensator.integrator":               func(p *Point) *float64 { return &p.Network.Integrator },
	"compensator.sense-gain":               func(p *Point) *float64 { return &p.Network.SenseGain },
	"compensator.sampling-frequency":       func(p *Point) *float64 { return &p.Network.SamplingFrequency },
	"compensator.delay":                    func(p *Point) *float64 { return &p.Network.Delay },
}

// Field gives the number of p that a dotted path of the spec format sets ("inductor.inductance",
// "output-capacitors.1.esr", "compensator.zeros.0.quality"; list items count from 0), or nil where the path names none.
// "output-capacitor" is the first bank; a zero or pole without a key means its frequency. The pointer stays valid as long
// as p and its lists do.
func Field(p *Point, path string) *float64 {
	if at, ok := fields[path]; ok {
		return at(p)
	}
	if rest, ok := strings.CutPrefix(path, "output-capacitor."); ok {
		return bankField(p.Circuit.Banks, 0, rest)
	}
	for _, list := range listed {
		rest, ok := strings.CutPrefix(path, list.path)
		if !ok {
			continue
		}
		item, key, _ := strings.Cut(rest, ".")
		if index, ok := listIndex(item); ok {
			return list.field(p, index, key)
		}
		return nil
	}
	return nil
}

// listed are the lists of the format whose items are numbers or hold numbers.
var listed = []struct {
	path  string
	field func(p *Point, index int, key string) *float64
}{
	{"output-capacitors.", func(p *Point, i int, key string) *float64 { return bankField(p.Circuit.Banks, i, key) }},
	{"coupling-capacitor.bias-derating.", func(p *Point, i int, key string) *float64 {
		return deratingField(p.Circuit.Coupling.Derating, i, key)
	}},
	{"compensator.zeros.", func(p *Point, i int, key string) *float64 { return rootField(p.Network.Zeros, i, key) }},
	{"compensator.poles.", func(p *Point, i int, key string) *float64 { return rootField(p.Network.Poles, i, key) }},
	{"compensator.numerator.", func(p *Point, i int, key string) *float64 { return itemField(p.Network.Numerator, i, key) }},
	{"compensator.denominator.", func(p *Point, i int, key string) *float64 { return itemField(p.Network.Denominator, i, key) }},
}

// listIndex reads a list index as the format writes it: digits without sign or leading zeros.
func listIndex(item string) (int, bool) {
	index, err := strconv.Atoi(item)
	return index, err == nil && index >= 0 && strconv.Itoa(index) == item
}

func bankField(banks []plant.Bank, index int, key string) *float64 {
	if index >= len(banks) {
		return nil
	}
	switch key {
	case "capacitance":
		return &banks[index].Capacitance
	case "esr":
		return &banks[index].ESR
	case "count":
		return &banks[index].Count
	}
	if rest, ok := strings.CutPrefix(key, "bias-derating."); ok {
		item, key, _ := strings.Cut(rest, ".")
		if point, ok := listIndex(item); ok {
			return deratingField(banks[index].Derating, point, key)
		}
	}
	return nil
}

// deratingField reads one entry of a bias table: [voltage, factor].
func deratingField(table []plant.DeratingPoint, index int, key string) *float64 {
	if index >= len(table) {
		return nil
	}
	switch key {
	case "0":
		return &table[index].Voltage
	case "1":
		return &table[index].Factor
	}
	return nil
}

func rootField(roots []network.Root, index int, key string) *float64 {
	if index >= len(roots) {
		return nil
	}
	switch key {
	case "", "frequency":
		return &roots[index].Frequency
	case "quality":
		return &roots[index].Quality
	}
	return nil
}

func itemField(items []float64, index int, key string) *float64 {
	if index >= len(items) || key != "" {
		return nil
	}
	return &items[index]
}
