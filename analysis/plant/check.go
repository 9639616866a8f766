package plant

import (
	"fmt"
	"math"
)

// check reports the first number of a circuit that is outside the model's domain.
func check(c *Circuit) error {
	if c.Topology.Family() == 0 {
		return fmt.Errorf("topology %d is unknown", c.Topology)
	}
	if c.Phases < 1 {
		return fmt.Errorf("%d phases: at least one is needed", c.Phases)
	}
	if c.Behaviour < Resistive || c.Behaviour > ConstantPower {
		return fmt.Errorf("load behaviour %d is unknown", c.Behaviour)
	}
	if n := len(c.Banks); n < 1 || n > MaxBanks {
		return fmt.Errorf("%d output capacitor banks: 1 to %d are possible", n, MaxBanks)
	}
	d := domain{}
	d.positive("switching frequency", c.SwitchingFrequency)
	d.positive("input voltage", c.InputVoltage)
	d.positive("output voltage", c.OutputVoltage)
	d.atLeastZero("load current", c.LoadCurrent)
	d.atLeastZero("load capacitance", c.LoadCapacitance)
	d.atLeastZero("load series resistance", c.LoadESR)
	d.positive("inductance", c.Inductor.Inductance)
	d.atLeastZero("winding resistance", c.Inductor.Resistance)
	d.atLeastZero("switch resistance", c.SwitchResistance)
	d.atLeastZero("rectifier drop", c.RectifierDrop)
	d.atLeastZero("rectifier resistance", c.RectifierResistance)
	d.atLeastZero("magnetizing inductance", c.MagnetizingInductance)
	if c.Topology.Isolated() {
		d.positive("primary turns", c.TurnsPrimary)
		d.positive("secondary turns", c.TurnsSecondary)
	}
	if c.Topology.TwoInductor() {
		d.positive("second inductance", c.SecondInductor.Inductance)
		d.atLeastZero("second winding resistance", c.SecondInductor.Resistance)
		d.positive("coupling capacitance", c.Coupling.Capacitance)
		d.atLeastZero("coupling capacitor's series resistance", c.Coupling.ESR)
		d.atLeastZero("coupling capacitor count", c.Coupling.Count)
		d.table(c.Coupling.Derating)
	}
	for i := range c.Banks {
		d.positive("output capacitance", c.Banks[i].Capacitance)
		d.atLeastZero("output capacitor's series resistance", c.Banks[i].ESR)
		d.positive("output capacitor count", c.Banks[i].Count)
		d.table(c.Banks[i].Derating)
	}
	d.filter(&c.Filter)
	d.modulator(&c.Modulator)
	return d.err
}

// domain remembers the first number found outside its range.
type domain struct{ err error }

func (d *domain) positive(what string, v float64) {
	if !(v > 0 && v <= math.MaxFloat64) && d.err == nil {
		d.err = fmt.Errorf("%s is %v: a positive number is needed", what, v)
	}
}

func (d *domain) atLeastZero(what string, v float64) {
	if !(v >= 0 && v <= math.MaxFloat64) && d.err == nil {
		d.err = fmt.Errorf("%s is %v: zero or a positive number is needed", what, v)
	}
}

func (d *domain) table(points []DeratingPoint) {
	for i := range points {
		d.positive("derating factor", points[i].Factor)
		if i > 0 && !(points[i].Voltage >= points[i-1].Voltage) && d.err == nil {
			d.err = fmt.Errorf("derating voltages fall from %v to %v", points[i-1].Voltage, points[i].Voltage)
		}
	}
}

func (d *domain) filter(f *Filter) {
	if f.Capacitance == 0 {
		return
	}
	d.positive("input filter capacitance", f.Capacitance)
	d.atLeastZero("input filter resistance", f.Resistance)
	d.atLeastZero("input filter inductance", f.Inductance)
	if f.present() {
		d.positive("input filter inductance", f.Inductance)
	}
	d.atLeastZero("input filter series resistance", f.ESR)
	d.atLeastZero("input filter damping resistance", f.DampingResistance)
	d.atLeastZero("input filter damping capacitance", f.DampingCapacitance)
}

func (d *domain) modulator(m *Modulator) {
	d.positive("control ratio", m.ControlRatio)
	d.atLeastZero("modulator delay", m.Delay)
	switch m.Scheme {
	case VoltageMode:
		d.positive("ramp amplitude", m.RampAmplitude)
		if m.FeedForward {
			d.positive("nominal input voltage", m.NominalInput)
		}
	case PeakCurrentMode:
		d.positive("current sense gain", m.CurrentSenseGain)
		d.atLeastZero("slope compensation", m.SlopeCompensation)
	default:
		if d.err == nil {
			d.err = fmt.Errorf("modulator scheme %d is unknown", m.Scheme)
		}
	}
}
