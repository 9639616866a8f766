package refdata

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// paths are the quantities that the golden designs give, in the order of the spec format.
var paths = []string{
	"switching-frequency", "input-voltage", "output-voltage", "load.current", "turns.primary", "turns.secondary",
	"inductor.inductance", "inductor.resistance", "second-inductor.inductance", "second-inductor.resistance",
	"coupling-capacitor.capacitance", "coupling-capacitor.esr", "magnetizing-inductance",
	"output-capacitor.capacitance", "output-capacitor.esr", "output-capacitor.count",
	"switch.on-resistance", "rectifier.forward-drop", "rectifier.resistance",
	"input-filter.inductance", "input-filter.resistance", "input-filter.capacitance", "input-filter.esr",
	"input-filter.damping-resistance", "input-filter.damping-capacitance",
	"modulator.ramp-amplitude", "modulator.current-sense-gain", "modulator.slope-compensation", "modulator.control-ratio",
	"modulator.delay",
	"compensator.reference-voltage", "compensator.transconductance", "compensator.output-resistance",
	"compensator.upper-resistor", "compensator.lower-resistor", "compensator.feedback-resistor",
	"compensator.integrator-capacitor", "compensator.rolloff-capacitor", "compensator.lead-resistor", "compensator.lead-capacitor",
	"compensator.amplifier.gain-bandwidth", "compensator.amplifier.open-loop-gain",
	"compensator.led-resistor", "compensator.pull-up-resistor", "compensator.current-transfer-ratio", "compensator.optocoupler-pole",
	"compensator.gain", "compensator.integrator", "compensator.sense-gain", "compensator.sampling-frequency", "compensator.delay",
}

func designOf(spec map[string]any) (*analysis.Design, error) {
	d := &analysis.Design{}
	c, p := &d.Nominal.Circuit, &d.Nominal.Network
	c.Phases, c.TurnsPrimary, c.TurnsSecondary, c.Coupling.Count = 1, 1, 1, 1
	c.Banks = []plant.Bank{{Count: 1}}
	c.Behaviour, c.Modulator.ControlRatio = plant.Resistive, 1
	if err := names(spec, d); err != nil {
		return nil, err
	}
	for _, path := range paths {
		v := find(spec, path)
		if v == nil {
			continue
		}
		s, err := spreadOf(v)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
		field := analysis.Field(&d.Nominal, path)
		if field == nil {
			return nil, fmt.Errorf("%s: no such field", path)
		}
		*field = s.nominal
		if s.low != s.high {
			d.Axes = append(d.Axes, analysis.Axis{Path: path, Min: s.low, Nominal: s.nominal, Max: s.high})
		}
	}
	c.OutputVoltage = math.Abs(c.OutputVoltage)
	c.Modulator.NominalInput = c.InputVoltage
	if p.Kind == network.TransferFunction && p.Gain == 0 {
		p.Gain = 1
	}
	return d, nil
}

// names reads what is not a quantity: names, yes/no fields and lists.
func names(spec map[string]any, d *analysis.Design) error {
	c, p := &d.Nominal.Circuit, &d.Nominal.Network
	var ok bool
	if c.Topology, ok = plant.ParseTopology(text(spec, "topology")); !ok {
		return fmt.Errorf("topology %q", text(spec, "topology"))
	}
	if c.Modulator.Scheme, ok = plant.ParseScheme(text(spec, "modulator.scheme")); !ok {
		return fmt.Errorf("scheme %q", text(spec, "modulator.scheme"))
	}
	if p.Kind, ok = network.ParseKind(text(spec, "compensator.network")); !ok {
		return fmt.Errorf("network %q", text(spec, "compensator.network"))
	}
	if name := text(spec, "load.behaviour"); name != "" {
		if c.Behaviour, ok = plant.ParseBehaviour(name); !ok {
			return fmt.Errorf("behaviour %q", name)
		}
	}
	if n, ok := find(spec, "phases").(float64); ok {
		c.Phases = int(n)
	}
	c.InductorOnPrimary = text(spec, "inductor.side") == "primary"
	c.Synchronous, _ = find(spec, "rectifier.synchronous").(bool)
	c.Modulator.FeedForward, _ = find(spec, "modulator.feed-forward").(bool)
	p.Numerator, p.Denominator = numbers(spec, "compensator.numerator"), numbers(spec, "compensator.denominator")
	var err error
	if p.Zeros, err = roots(spec, "compensator.zeros"); err != nil {
		return err
	}
	p.Poles, err = roots(spec, "compensator.poles")
	return err
}

func find(spec map[string]any, path string) any {
	var node any = spec
	for start := 0; start <= len(path); {
		end := start
		for end < len(path) && path[end] != '.' {
			end++
		}
		m, ok := node.(map[string]any)
		if !ok {
			return nil
		}
		node, start = m[path[start:end]], end+1
	}
	return node
}

func text(spec map[string]any, path string) string {
	s, _ := find(spec, path).(string)
	return s
}

func numbers(spec map[string]any, path string) []float64 {
	list, _ := find(spec, path).([]any)
	var out []float64
	for _, v := range list {
		n, _ := v.(float64)
		out = append(out, n)
	}
	return out
}

func roots(spec map[string]any, path string) ([]network.Root, error) {
	list, _ := find(spec, path).([]any)
	var out []network.Root
	for _, v := range list {
		s, err := spreadOf(v)
		if err != nil {
			return nil, err
		}
		out = append(out, network.Root{Frequency: s.nominal})
	}
	return out, nil
}
