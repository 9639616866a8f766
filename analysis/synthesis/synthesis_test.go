package synthesis

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// buck is a voltage-mode buck, 12 V to 3.3 V at 400 kHz, with spreads of its filter.
func buck(parts network.Parts) *analysis.Design {
	return &analysis.Design{
		Nominal: analysis.Point{
			Circuit: plant.Circuit{
				Topology: plant.Buck, Phases: 1, SwitchingFrequency: 400e3, InputVoltage: 12, OutputVoltage: 3.3, LoadCurrent: 6, Behaviour: plant.Resistive,
				TurnsPrimary: 1, TurnsSecondary: 1, Inductor: plant.Winding{Inductance: 3.3e-6, Resistance: 6e-3},
				Banks: []plant.Bank{{Capacitance: 330e-6, ESR: 9e-3, Count: 1}}, SwitchResistance: 9e-3, RectifierResistance: 12e-3, Synchronous: true,
				Modulator: plant.Modulator{Scheme: plant.VoltageMode, RampAmplitude: 1.5, ControlRatio: 1, NominalInput: 12},
			},
			Network: parts,
		},
		Axes: []analysis.Axis{
			{Path: "input-voltage", Min: 10.8, Nominal: 12, Max: 13.2}, {Path: "load.current", Min: 0.5, Nominal: 6, Max: 6},
			{Path: "inductor.inductance", Min: 2.64e-6, Nominal: 3.3e-6, Max: 3.96e-6}, {Path: "output-capacitor.capacitance", Min: 264e-6, Nominal: 330e-6, Max: 396e-6},
		},
	}
}

func type3() network.Parts {
	return network.Parts{Kind: network.Type3, ReferenceVoltage: 0.8, UpperResistor: 10e3, LowerResistor: 3.24e3, FeedbackResistor: 7.32e3, IntegratorCapacitor: 6.8e-9,
		RolloffCapacitor: 270e-12, LeadResistor: 422, LeadCapacitor: 3.3e-9}
}

// lacking is how far the worst phase margin is from some degrees and the crossover from a band.
func lacking(degrees, low, high float64) func(*analysis.Design, *analysis.Result) float64 {
	return func(_ *analysis.Design, r *analysis.Result) float64 {
		w := &r.Worst
		return math.Max(0, (degrees-w.PhaseMargin.Value)/degrees) + math.Max(0, low/w.CrossoverLow.Value-1) + math.Max(0, w.Crossover.Value/high-1)
	}
}

func loose() []Part {
	e24, e12 := []analysis.Series{analysis.E96, analysis.E24}, []analysis.Series{analysis.E12}
	return []Part{
		{"compensator.feedback-resistor", e24, 100, 1e6}, {"compensator.integrator-capacitor", e12, 1e-11, 1e-6}, {"compensator.rolloff-capacitor", e12, 1e-12, 1e-6},
		{"compensator.lead-resistor", e24, 10, 1e5}, {"compensator.lead-capacitor", e12, 1e-11, 1e-6},
	}
}

// TestTheKFactorPutsCrossoverAndMarginWhereItWasAsked checks the published construction against the analysis itself: at nominal the loop crosses at the frequency
// asked for with the margin asked for (D. Venable, Powercon 10, 1983).
func TestTheKFactorPutsCrossoverAndMarginWhereItWasAsked(t *testing.T) {
	p := &Problem{Design: buck(type3()), Parts: loose()}
	for _, crossover := range []float64{15e3, 30e3, 50e3} {
		for _, more := range []float64{0, 10, 20} {
			values := p.kFactor(p.Parts, crossover, more)
			require.NotNil(t, values)
			var changes []analysis.Setting
			for i, part := range p.Parts {
				changes = append(changes, analysis.Setting{Path: part.Path, Value: values[i]})
			}
			corner, err := analysis.At(With(p.Design, changes), nil)
			require.NoError(t, err)
			assert.InEpsilon(t, crossover, corner.Loop.Crossover, 1e-3)
			assert.InDelta(t, 45+more, corner.Loop.PhaseMargin, 0.1)
		}
	}
}

func TestOnePartIsMovedAsLittleAsItTakes(t *testing.T) {
	p := &Problem{Design: buck(type3()), Parts: loose(), Judge: lacking(40, 0, 34e3)}
	require.Positive(t, p.try(context.Background(), nil).Violation, "it crosses too high")
	answers := p.One(context.Background())
	require.NotEmpty(t, answers)
	first := answers[0]
	require.Len(t, first.Changes, 1)
	assert.Zero(t, first.Violation)
	for _, a := range answers {
		assert.LessOrEqual(t, p.distance(first), p.distance(a), "the smallest change first")
		below, above := analysis.Preferred(a.Changes[0].Value, p.Parts[partAt(p, a.Changes[0].Path)].Series...)
		assert.Equal(t, below, above, "%g is made", a.Changes[0].Value)
	}
	// A value half as far from the old one does not do.
	old := p.valueOf(Part{Path: first.Changes[0].Path})
	half := math.Sqrt(old * first.Changes[0].Value)
	assert.Positive(t, p.try(context.Background(), []analysis.Setting{{Path: first.Changes[0].Path, Value: half}}).Violation)
}

func partAt(p *Problem, path string) int {
	for i, part := range p.Parts {
		if part.Path == path {
			return i
		}
	}
	return -1
}

func TestAWholeNetworkIsFoundFromNonsense(t *testing.T) {
	wild := type3()
	wild.FeedbackResistor, wild.IntegratorCapacitor, wild.LeadCapacitor = 200e3, 100e-12, 100e-12
	p := &Problem{Design: buck(wild), Parts: loose(), Judge: lacking(50, 12e3, 60e3)}
	require.Positive(t, p.try(context.Background(), nil).Violation)
	a, ok := p.All(context.Background())
	require.True(t, ok)
	r, err := analysis.Analyse(context.Background(), With(p.Design, a.Changes), analysis.Options{Depth: analysis.Full})
	require.NoError(t, err)
	assert.GreaterOrEqual(t, r.Worst.PhaseMargin.Value, 50.0)
	assert.GreaterOrEqual(t, r.Worst.CrossoverLow.Value, 12e3)
	assert.LessOrEqual(t, r.Worst.Crossover.Value, 60e3)
	for _, s := range a.Changes {
		below, above := analysis.Preferred(s.Value, p.Parts[partAt(p, s.Path)].Series...)
		assert.Equal(t, below, above, "%s %g is made", s.Path, s.Value)
	}
}

func TestWhatNoValueCuresIsNotCured(t *testing.T) {
	p := &Problem{Design: buck(type3()), Parts: loose()[:2], Judge: lacking(120, 50e3, 60e3)}
	assert.Empty(t, p.One(context.Background()))
	a, ok := p.All(context.Background())
	assert.False(t, ok)
	assert.Positive(t, a.Violation)
}

func TestASpreadKeepsItsProportion(t *testing.T) {
	d := buck(type3())
	d.Axes = append(d.Axes, analysis.Axis{Path: "compensator.feedback-resistor", Min: 7.2468e3, Nominal: 7.32e3, Max: 7.3932e3})
	out := With(d, []analysis.Setting{{Path: "compensator.feedback-resistor", Value: 10e3}})
	assert.InEpsilon(t, 9.9e3, out.Axes[4].Min, 1e-9)
	assert.InEpsilon(t, 10.1e3, out.Axes[4].Max, 1e-9)
	assert.Equal(t, 7.32e3, d.Nominal.Network.FeedbackResistor, "the design as it is stays")
	assert.Equal(t, 7.32e3, d.Axes[4].Nominal)
}
