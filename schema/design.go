package schema

import (
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// Design is the spec in the types of the analysis: every number at its nominal value, and one axis for each field that
// has a spread and takes part in the analysis. The operating axes come first, the others in the order of the file.
func (s *Spec) Design() *analysis.Design {
	d := &analysis.Design{}
	s.circuit(&d.Nominal.Circuit)
	s.network(&d.Nominal.Network)
	for _, pointer := range s.order {
		if at := analysis.Field(&d.Nominal, dotted(pointer)); at != nil {
			*at = s.quantities[pointer].Nominal
		}
	}
	c := &d.Nominal.Circuit
	c.OutputVoltage = math.Abs(c.OutputVoltage)
	c.Modulator.NominalInput = c.InputVoltage
	for _, pointer := range append([]string{"/input-voltage", "/load/current"}, s.order...) {
		s.addAxis(d, pointer)
	}
	return d
}

// addAxis appends the axis of a quantity that has a spread, once.
func (s *Spec) addAxis(d *analysis.Design, pointer string) {
	q, path := s.quantities[pointer], dotted(pointer)
	if q.Min == q.Max || analysis.Field(&d.Nominal, path) == nil {
		return
	}
	for _, a := range d.Axes {
		if a.Path == path {
			return
		}
	}
	if path == "output-voltage" && q.Nominal < 0 {
		q.Min, q.Nominal, q.Max = -q.Max, -q.Nominal, -q.Min
	}
	d.Axes = append(d.Axes, analysis.Axis{Path: path, Min: q.Min, Nominal: q.Nominal, Max: q.Max})
}

// dotted is the path of interface.md for a JSON pointer: "/output-capacitors/0/esr" is "output-capacitors.0.esr".
func dotted(pointer string) string {
	return strings.ReplaceAll(strings.TrimPrefix(pointer, "/"), "/", ".")
}

// circuit sets what is no quantity, and the defaults of the format.
func (s *Spec) circuit(c *plant.Circuit) {
	c.Topology, _ = plant.ParseTopology(s.Text("/topology"))
	c.Behaviour = plant.Resistive
	if b, ok := plant.ParseBehaviour(s.Text("/load/behaviour")); ok {
		c.Behaviour = b
	}
	c.Phases = 1
	if q, ok := s.Quantity("/phases"); ok {
		c.Phases = int(q.Nominal)
	}
	c.TurnsPrimary, c.TurnsSecondary = 1, 1
	c.InductorOnPrimary = s.Text("/inductor/side") == "primary"
	c.Coupling = s.bank("/coupling-capacitor")
	c.Banks = s.banks()
	c.Synchronous = s.Bool("/rectifier/synchronous")
	c.Modulator.Scheme, _ = plant.ParseScheme(s.Text("/modulator/scheme"))
	c.Modulator.FeedForward = s.Bool("/modulator/feed-forward")
	c.Modulator.ControlRatio = 1
}

// banks makes room for the banks of output capacitors.
func (s *Spec) banks() []plant.Bank {
	list := s.Node("/output-capacitors")
	if list == nil {
		return []plant.Bank{s.bank("/output-capacitor")}
	}
	banks := make([]plant.Bank, len(list.Items))
	for i := range banks {
		banks[i] = s.bank(itemPointer("/output-capacitors", i))
	}
	return banks
}

// bank is one piece with its bias table, to be filled; a table that is `included` is none.
func (s *Spec) bank(pointer string) plant.Bank {
	b := plant.Bank{Count: 1}
	if table := s.Node(pointer + "/bias-derating"); table != nil {
		b.Derating = make([]plant.DeratingPoint, len(table.Items))
	}
	return b
}

// network sets the compensator's names and makes room for its lists.
func (s *Spec) network(p *network.Parts) {
	p.Kind, _ = network.ParseKind(s.Text("/compensator/network"))
	p.FixedLEDSupply = s.Text("/compensator/led-supply") == "fixed"
	switch p.Kind {
	case network.TransferFunction:
		p.Gain, p.SenseGain = 1, 1
	case network.Digital:
		p.SenseGain = 1
	}
	p.Zeros = make([]network.Root, s.length("/compensator/zeros"))
	p.Poles = make([]network.Root, s.length("/compensator/poles"))
	p.Numerator = make([]float64, s.length("/compensator/numerator"))
	p.Denominator = make([]float64, s.length("/compensator/denominator"))
}

// length is the number of items of a list, 0 if there is none.
func (s *Spec) length(pointer string) int {
	if n := s.Node(pointer); n != nil {
		return len(n.Items)
	}
	return 0
}
