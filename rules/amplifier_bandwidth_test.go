package rules

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/network"
	"halfplane/analysis/transfer"
)

func TestAmplifierLagIsThatOfTheTwoNetworks(t *testing.T) {
	// Source: package network, which computes both from poles and zeros; here the impedances are used directly.
	full := network.Parts{Kind: network.Type3, UpperResistor: 10e3, LowerResistor: 3.24e3, FeedbackResistor: 7.32e3, IntegratorCapacitor: 6.8e-9,
		RolloffCapacitor: 270e-12, LeadResistor: 422, LeadCapacitor: 3.3e-9, GainBandwidth: 4.5e6, OpenLoopGain: 1e4}
	type2 := network.Parts{Kind: network.Type2, UpperResistor: 10e3, FeedbackResistor: 7.32e3, IntegratorCapacitor: 6.8e-9, GainBandwidth: 1e6}
	type1 := network.Parts{Kind: network.Type1, UpperResistor: 68.1e3, IntegratorCapacitor: 150e-9, GainBandwidth: 3e5}
	for _, parts := range []network.Parts{full, type2, type1} {
		for _, frequency := range []float64{10, 1e3, 30e3, 200e3} {
			var ideal, finite transfer.Product
			require.NoError(t, network.BuildIdeal(&parts, &ideal))
			require.NoError(t, network.Build(&parts, &finite))
			omega := 2 * math.Pi * frequency
			want := cmplx.Phase(ideal.At(omega)/finite.At(omega)) * 180 / math.Pi
			assert.InDelta(t, want, amplifierLag(&parts, frequency), 1e-6, "%v at %v Hz", parts.Kind, frequency)
		}
	}
	assert.True(t, math.IsNaN(amplifierLag(&full, math.NaN())))
}

func TestSufficientBandwidthJustDoes(t *testing.T) {
	parts := network.Parts{Kind: network.Type2, UpperResistor: 10e3, FeedbackResistor: 47e3, IntegratorCapacitor: 6.8e-9}
	parts.GainBandwidth = sufficientBandwidth(&parts, 20e3, 5)
	assert.InDelta(t, 5, amplifierLag(&parts, 20e3), 1e-6)
}
