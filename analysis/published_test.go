package analysis_test

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/loop"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/transfer"
)

const twoPi = 2 * math.Pi

// times multiplies a stage, given by its printed formula, by a network built from its parts.
func times(t *testing.T, stage transfer.Function, p network.Parts) *loop.Figures {
	t.Helper()
	var product transfer.Product
	require.NoError(t, network.Build(&p, &product))
	product.Times(&stage)
	var f loop.Figures
	require.NoError(t, loop.Measure(&product, 1.5e6, &f))
	return &f
}

// Source: STMicroelectronics, ST1S31 datasheet DocID022998 Rev 5 (August 2018), section 4.3, Equations 2-14 and Example 1, p. 10-13:
// "bandwidth is 117 kHz and the phase margin is 63 degrees". ESR is not stated there; 2 to 2.5 mΩ gives the printed margin.
func TestPublishedPeakCurrentModeBuckLoop(t *testing.T) {
	const vin, vout, iout, l, c, fs, ri, ramp = 5.0, 1.2, 3.0, 1e-6, 47e-6, 1.5e6, 0.369, 0.535
	for _, esr := range []float64{2e-3, 2.3e-3} {
		r, off := vout/iout, 1-vout/vin
		mc := 1 + ramp*fs/((vin-vout)/l*ri)
		assert.InEpsilon(t, 1.57231, mc, 1e-4) // independent computation
		k := mc*off - 0.5
		assert.InEpsilon(t, 0.45803, 1/(math.Pi*k), 1e-4) // independent computation
		pole := 1/(r*c) + k/(l*c*fs)
		assert.InEpsilon(t, 10034.6, pole/twoPi, 1e-4) // independent computation
		x, y := transfer.Quadratic(1, math.Pi*k, 1)
		wn := complex(math.Pi*fs, 0)
		stage := transfer.Function{Gain: r / ri / (1 + r/(l*fs)*k), Zeros: []complex128{complex(-1/(esr*c), 0)},
			Poles: []complex128{complex(-pole, 0), x * wn, y * wn}}
		assert.InEpsilon(t, 0.91453, stage.Gain, 1e-4) // independent computation
		f := times(t, stage, network.Parts{Kind: network.Transconductance, Transconductance: 238e-6, OutputResistance: 96e6,
			UpperResistor: 10e3, LowerResistor: 20e3, FeedbackResistor: 80e3, IntegratorCapacitor: 55e-12})
		assert.InEpsilon(t, 117e3, f.Crossover, 0.01)
		assert.InDelta(t, 63, f.PhaseMargin, 2)
		assert.True(t, f.Stable)
	}
}

// Source: STMicroelectronics, L5987 datasheet Doc ID 14972 Rev 3, section 6.4.1, p. 21-23: "bandwidth is about 71 kHz and the phase margin is
// 46". The amplifier's 4.5 MHz and 100 dB are from memory. Ideal amplifier: 69.28 kHz, 52.45° (independent computation).
func TestPublishedVoltageModeBuckLoopNeedsItsAmplifier(t *testing.T) {
	const r, l, c, esr = 1.1, 10e-6, 22e-6, 0.5e-3 // "ESR < 1 mΩ"
	x, y := transfer.Quadratic(l*c*(r+esr)/r, l/r+esr*c, 1)
	stage := transfer.Function{Gain: 9, Poles: []complex128{x, y}, Zeros: []complex128{complex(-1/(esr*c), 0)}}
	parts := network.Parts{Kind: network.Type3, UpperResistor: 4.99e3, LowerResistor: 1.1e3, LeadResistor: 220, LeadCapacitor: 3.3e-9,
		FeedbackResistor: 3.3e3, IntegratorCapacitor: 10e-9, RolloffCapacitor: 180e-12}
	ideal := times(t, stage, parts)
	assert.InEpsilon(t, 71e3, ideal.Crossover, 0.03)
	assert.InEpsilon(t, 69.28e3, ideal.Crossover, 2e-3)
	assert.InDelta(t, 52.45, ideal.PhaseMargin, 0.2)
	parts.GainBandwidth, parts.OpenLoopGain = 4.5e6, 1e5
	finite := times(t, stage, parts)
	assert.InEpsilon(t, 71e3, finite.Crossover, 0.01)
	assert.InDelta(t, 46, finite.PhaseMargin, 1.5)
	assert.InDelta(t, 10.2, finite.GainMargin, 0.15) // independent computation
}

// pumpRail is the buck of Texas Instruments, LM21215A datasheet SNOSB87B (March 2013), p. 21-22, with the parts printed there.
func pumpRail() *analysis.Design {
	return &analysis.Design{Nominal: analysis.Point{
		Circuit: plant.Circuit{Topology: plant.Buck, Phases: 1, SwitchingFrequency: 500e3, InputVoltage: 5, OutputVoltage: 1.2, LoadCurrent: 15,
			Behaviour: plant.Resistive, TurnsPrimary: 1, TurnsSecondary: 1, Inductor: plant.Winding{Inductance: 0.56e-6, Resistance: 1.8e-3},
			Banks: []plant.Bank{{Capacitance: 150e-6, ESR: 1e-3, Count: 1}}, Synchronous: true,
			Modulator: plant.Modulator{Scheme: plant.VoltageMode, RampAmplitude: 0.8, NominalInput: 5, ControlRatio: 1}},
		Network: network.Parts{Kind: network.Type3, UpperResistor: 10e3, FeedbackResistor: 9.2e3, IntegratorCapacitor: 1.99e-9,
			RolloffCapacitor: 71e-12, LeadResistor: 166, LeadCapacitor: 898e-12},
	}}
}

// Source: the parts as above; crossover 93.1 kHz and margin 62.6° are an independent computation (the datasheet prints no margin; its
// straight-line target is 100 kHz).
func TestPublishedBuckDesignThroughTheWholeAnalysis(t *testing.T) {
	r, err := analysis.Analyse(context.Background(), pumpRail(), analysis.Options{Depth: analysis.Full, Jobs: 1})
	require.NoError(t, err)
	require.Len(t, r.Corners, 1) // no spread: nothing but nominal
	assert.Zero(t, r.Operating)
	f := r.Corners[0].Loop
	require.NotNil(t, f)
	assert.InEpsilon(t, 93.1e3, f.Crossover, 0.01)
	assert.InDelta(t, 62.6, f.PhaseMargin, 0.5)
	assert.InEpsilon(t, 17365, r.Corners[0].Ideal.Resonance, 1e-3) // 17.4 kHz printed
}

// Source: own vector of the check values, section 3.3: divider 51.1 k / 1.5 k, 0.7 V, 1 % parts (independent computation).
func TestExtremeValuesOfADividerAreAtItsVertices(t *testing.T) {
	low, high := math.Inf(1), math.Inf(-1)
	for _, upper := range []float64{0.99, 1.01} {
		for _, lower := range []float64{0.99, 1.01} {
			v := network.SetPoint(&network.Parts{Kind: network.Type2, ReferenceVoltage: 0.7, UpperResistor: 51.1e3 * upper, LowerResistor: 1.5e3 * lower})
			low, high = math.Min(low, v), math.Max(high, v)
		}
	}
	assert.InDelta(t, 24.07446, low, 1e-5)
	assert.InDelta(t, 25.02842, high, 1e-5)
}
