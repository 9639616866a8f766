package plant

import (
	"math"
	"math/rand/v2"
)

// sampler draws circuits whose numbers lie where designs lie. Seeds are fixed: every run sees the same ones.
type sampler struct{ *rand.Rand }

func newSampler(seed uint64) sampler { return sampler{rand.New(rand.NewPCG(seed, 7))} }

// between draws on a logarithmic scale.
func (r sampler) between(low, high float64) float64 {
	return low * math.Pow(high/low, r.Float64())
}

// circuit draws a lossy circuit of a topology, one bank, no filter, voltage mode, continuous conduction (synchronous).
func (r sampler) circuit(t Topology) Circuit {
	vg, v, amps := r.between(8, 60), r.between(3, 50), r.between(0.5, 10)
	if t.Family() == BoostLike {
		v = vg * r.between(1.3, 3)
	}
	if t.Family() == BuckLike {
		v = vg * r.between(0.1, 0.7)
	}
	if t == HalfBridge { // its filter sees half
		vg *= 2
	}
	load := v / amps
	fs := r.between(5e4, 1e6)
	c := Circuit{Topology: t, Phases: 1, SwitchingFrequency: fs, InputVoltage: vg, OutputVoltage: v, LoadCurrent: amps, Behaviour: Resistive,
		TurnsPrimary: 1, TurnsSecondary: 1,
		Inductor:         Winding{r.between(0.5, 10) * load / fs, r.between(1e-4, 1e-2) * load},
		Banks:            []Bank{{Capacitance: r.between(5, 200) / (load * fs), ESR: r.between(1e-4, 3e-2) * load, Count: 1}},
		SwitchResistance: r.between(1e-4, 1e-2) * load, RectifierResistance: r.between(1e-4, 1e-2) * load, RectifierDrop: r.between(0.01, 0.03) * v,
		Synchronous: true,
		Modulator:   Modulator{Scheme: VoltageMode, RampAmplitude: r.between(1, 4), NominalInput: vg, ControlRatio: 1},
	}
	if t.TwoInductor() {
		c.SecondInductor = Winding{r.between(0.5, 10) * load / fs, r.between(1e-4, 1e-2) * load}
		c.Coupling = Bank{Capacitance: r.between(2, 50) / (load * fs), ESR: r.between(1e-3, 3e-2) * load, Count: 1}
	}
	return c
}

// turned gives an isolated circuit a transformer: what stands on the primary is divided by n² or n, so the output side stays.
func (r sampler) turned(c Circuit) Circuit {
	n := r.between(0.1, 8)
	c.TurnsPrimary = 1 + math.Floor(40*r.Float64())
	c.TurnsSecondary = n * c.TurnsPrimary
	c.InputVoltage /= n
	c.Modulator.NominalInput /= n
	if c.Topology == HalfBridge {
		c.InputVoltage *= 2
		c.Modulator.NominalInput *= 2
	}
	c.SwitchResistance /= n * n
	c.InductorOnPrimary = true
	c.Inductor.Inductance /= n * n
	c.Inductor.Resistance /= n * n
	c.Modulator.CurrentSenseGain /= n
	return c
}

// current puts a circuit under peak current mode.
func (r sampler) current(c Circuit) Circuit {
	c.Modulator.Scheme = PeakCurrentMode
	c.Modulator.CurrentSenseGain = r.between(0.02, 0.2) / c.LoadCurrent
	c.Modulator.SlopeCompensation = r.between(0.1, 0.6) * c.SwitchingFrequency
	return c
}

// filtered puts an input filter before a circuit.
func (r sampler) filtered(c Circuit) Circuit {
	ohms := c.InputVoltage * c.InputVoltage / (c.OutputVoltage * c.LoadCurrent) // what the source sees
	z, w := ohms*r.between(0.02, 0.3), 2*math.Pi*c.SwitchingFrequency*r.between(0.01, 0.2)
	c.Filter = Filter{Inductance: z / w, Resistance: z * r.between(1e-3, 0.1), Capacitance: 1 / (z * w), ESR: z * r.between(1e-3, 0.1)}
	if r.IntN(3) > 0 {
		c.Filter.DampingResistance, c.Filter.DampingCapacitance = z*r.between(0.5, 2), r.between(2, 6)/(z*w)
	}
	if r.IntN(3) == 0 {
		c.Filter.ESR = 0
	}
	return c
}

// banked adds banks of other kinds and a load's capacitance.
func (r sampler) banked(c Circuit) Circuit {
	b := c.Banks[0]
	for range 1 + r.IntN(3) {
		c.Banks = append(c.Banks, Bank{Capacitance: b.Capacitance * r.between(0.02, 3), ESR: b.ESR * r.between(0.02, 5), Count: float64(1 + r.IntN(3))})
	}
	if r.IntN(2) == 0 {
		c.LoadCapacitance, c.LoadESR = b.Capacitance*r.between(0.01, 0.5), b.ESR*r.between(0.1, 2)
	}
	if r.IntN(3) == 0 {
		c.Banks[len(c.Banks)-1].ESR = 0
	}
	return c
}
