package plant

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestStressOfEveryTopology(t *testing.T) {
	// Source: volt-second balance of each stage, common practice; the table of theory sheet section 14. Vg 20, V 30, n 3.
	want := map[Topology]Stress{
		Buck: {20, 20}, Boost: {30, 30}, BuckBoost: {50, 50}, TwoSwitchBuckBoost: {30, 30}, Sepic: {50, 50}, Cuk: {50, 50}, Zeta: {50, 50},
		Flyback: {30, 90}, Forward: {40, 60}, TwoSwitchForward: {20, 60}, PushPull: {40, 120}, HalfBridge: {20, 60}, FullBridge: {20, 120},
		IsolatedBoost: {20, 30},
	}
	for _, topology := range Topologies() {
		c := &Circuit{Topology: topology, InputVoltage: 20, OutputVoltage: 30, TurnsPrimary: 2, TurnsSecondary: 6}
		assert.Equal(t, want[topology], StressOf(c), topology.String())
	}
}

func TestSwitchPeakIsOnTheSwitchsOwnSide(t *testing.T) {
	s := &Solution{TurnsRatio: 3, InductorPeak: 4, SecondPeak: 2, Duty: 0.4, FilterFrequency: 100e3}
	assert.Equal(t, 4.0, SwitchPeak(&Circuit{Topology: Buck}, s))
	assert.Equal(t, 6.0, SwitchPeak(&Circuit{Topology: Sepic}, s))
	assert.Equal(t, 12.0, SwitchPeak(&Circuit{Topology: Flyback}, s))
	// Magnetizing current: 20 V · 4 µs / 0.1 mH = 0.8 A in a forward, half of that each way in a full bridge, a quarter in a half-bridge.
	assert.InEpsilon(t, 12.8, SwitchPeak(&Circuit{Topology: Forward, InputVoltage: 20, MagnetizingInductance: 1e-4}, s), 1e-12)
	assert.InEpsilon(t, 12.4, SwitchPeak(&Circuit{Topology: FullBridge, InputVoltage: 20, MagnetizingInductance: 1e-4}, s), 1e-12)
	assert.InEpsilon(t, 12.2, SwitchPeak(&Circuit{Topology: HalfBridge, InputVoltage: 20, MagnetizingInductance: 1e-4}, s), 1e-12)
}
