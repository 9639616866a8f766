package analysis

import (
	"testing"

	"github.com/stretchr/testify/require"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// buoyBoost is a boost with a type-3 network, invented: the shape of most voltage-mode designs.
func buoyBoost() *Design {
	return &Design{
		Nominal: Point{
			Circuit: plant.Circuit{Topology: plant.Boost, Phases: 1, SwitchingFrequency: 250e3, InputVoltage: 12, OutputVoltage: 24, LoadCurrent: 1,
				Behaviour: plant.Resistive, TurnsPrimary: 1, TurnsSecondary: 1, Inductor: plant.Winding{Inductance: 22e-6, Resistance: 0.025},
				Banks: []plant.Bank{{Capacitance: 220e-6, ESR: 0.012, Count: 2}}, SwitchResistance: 0.015, RectifierResistance: 0.012,
				Synchronous: true, Modulator: plant.Modulator{Scheme: plant.VoltageMode, RampAmplitude: 1.8, NominalInput: 12, ControlRatio: 1}},
			Network: network.Parts{Kind: network.Type3, ReferenceVoltage: 1.25, UpperResistor: 100e3, LowerResistor: 5490, FeedbackResistor: 7870,
				IntegratorCapacitor: 39e-9, RolloffCapacitor: 1e-9, LeadResistor: 2050, LeadCapacitor: 2.7e-9, GainBandwidth: 10e6,
				OpenLoopGain: 31623},
		},
		Axes: []Axis{{"inductor.inductance", 17.6e-6, 22e-6, 26.4e-6}, {"compensator.feedback-resistor", 7791, 7870, 7949}},
	}
}

// BenchmarkCorner is one corner: operating point, model, compensator, every crossover and margin. Nothing of the corner before is of
// use: both axes move.
func BenchmarkCorner(b *testing.B) {
	w, err := newWorker(buoyBoost())
	require.NoError(b, err)
	x := [2][2]float64{{17.6e-6, 7791}, {26.4e-6, 7949}}
	i := 0
	b.ReportAllocs()
	for b.Loop() {
		i++
		w.set(x[i%2][:])
		if !w.hasLoop() {
			b.Fatal("no loop")
		}
		if err := w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures); err != nil {
			b.Fatal(err)
		}
	}
}

func TestACornerAllocatesNothingOnceWarm(t *testing.T) {
	w, err := newWorker(buoyBoost())
	require.NoError(t, err)
	x := [2][2]float64{{17.6e-6, 7791}, {26.4e-6, 7949}}
	i := 0
	corner := func() {
		i++
		w.set(x[i%2][:])
		require.True(t, w.hasLoop())
		require.NoError(t, w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures))
	}
	corner()
	corner()
	require.Zero(t, testing.AllocsPerRun(20, corner))
}
