package network

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

const rad = 2 * math.Pi

// Source: Texas Instruments, LM21215A datasheet SNOSB87B (March 2013), p. 21-22, Equations 16-21: the parts that the equations give
// put zeros and poles where the text wants them.
func TestType3PartsOfPublishedBuckLandWhereStated(t *testing.T) {
	double := 1 / (rad * math.Sqrt(0.56e-6*150e-6))
	esr := 1 / (rad * 1e-3 * 150e-6)
	p := Parts{Kind: Type3, UpperResistor: 10e3, FeedbackResistor: 9.2e3, IntegratorCapacitor: 1.99e-9, RolloffCapacitor: 71e-12,
		LeadResistor: 166, LeadCapacitor: 898e-12}
	var out transfer.Product
	require.NoError(t, BuildIdeal(&p, &out))
	assert.InEpsilon(t, 17.4e3, double, 0.01)
	assert.InEpsilon(t, double/2, -real(out.Zeros[0])/rad, 0.01) // first zero at half the double pole
	assert.InEpsilon(t, double, -real(out.Zeros[1])/rad, 0.01)   // second zero on it
	assert.InEpsilon(t, 250e3, -real(out.Poles[0])/rad, 0.01)    // half of 500 kHz
	assert.InEpsilon(t, esr, -real(out.Poles[1])/rad, 0.01)      // on the ESR zero
}

// Sources beside each case; tolerances as printed digits allow.
func TestType2PolesAndZerosOfPublishedParts(t *testing.T) {
	for _, c := range []struct {
		name, source     string
		p                Parts
		zero, pole, rel  float64
		midband, relGain float64
	}{
		{"exact high-frequency pole", "Texas Instruments, LM5022 datasheet SNVS480G (Dec 2013), p. 23, steps 7-10",
			Parts{UpperResistor: 1e3, FeedbackResistor: 3e3, IntegratorCapacitor: 125e-9, RolloffCapacitor: 530e-12}, 424, 100e3, 0.01, 0, 0},
		{"zero", "Texas Instruments, LM5575 datasheet SNVS471G, p. 17",
			Parts{UpperResistor: 1e3, FeedbackResistor: 49.9e3, IntegratorCapacitor: 10e-9}, 320, 0, 0.01, 0, 0},
		{"zero and mid-band gain", "Texas Instruments, LM5088 datasheet SNVS600H, p. 25 (gain 3.56 from 18 k)",
			Parts{UpperResistor: 18e3 / 3.56, FeedbackResistor: 18e3, IntegratorCapacitor: 15e-9}, 600, 0, 0.02, 3.56, 1e-3},
		{"zero", "Texas Instruments, TPS40195 datasheet SLUS720E, p. 28-29 (51 k with 1500 pF)",
			Parts{UpperResistor: 1e3, FeedbackResistor: 51e3, IntegratorCapacitor: 1500e-12}, 2.1e3, 0, 0.01, 0, 0},
		{"zero", "Texas Instruments, UCC2800 datasheet SLUS270G (June 2020), compensation section: 190 Hz from 10 nF (83.8 k recomputed)",
			Parts{UpperResistor: 10e3, FeedbackResistor: 83.77e3, IntegratorCapacitor: 10e-9}, 190, 0, 1e-3, 0, 0},
	} {
		c.p.Kind = Type2
		var out transfer.Product
		require.NoError(t, BuildIdeal(&c.p, &out), c.source)
		assert.InEpsilon(t, c.zero, -real(out.Zeros[0])/rad, c.rel, "%s: %s", c.name, c.source)
		if c.pole > 0 {
			assert.InEpsilon(t, c.pole, -real(out.Poles[0])/rad, c.rel, "%s: %s", c.name, c.source)
		}
		if c.midband > 0 {
			// Far above the zero, without a roll-off capacitor, the gain is R2/R1.
			h := out.At(rad * c.zero * 1e4)
			assert.InEpsilon(t, c.midband, math.Hypot(real(h), imag(h)), c.relGain, "%s: %s", c.name, c.source)
		}
	}
}

// Source: STMicroelectronics, ST1S31 datasheet DocID022998 Rev 5 (Aug 2018), section 4.3, p. 10-13: zero 36.2 kHz, low-frequency pole
// 30 Hz from gm 238 µA/V, Ro 96 MΩ, Rc 80 k, Cc 55 pF.
func TestTransconductanceOfPublishedBuck(t *testing.T) {
	p := Parts{Kind: Transconductance, Transconductance: 238e-6, OutputResistance: 96e6, UpperResistor: 10e3, LowerResistor: 20e3,
		FeedbackResistor: 80e3, IntegratorCapacitor: 55e-12}
	var out transfer.Product
	require.NoError(t, Build(&p, &out))
	require.Len(t, out.Poles, 1)
	assert.InEpsilon(t, 36.2e3, -real(out.Zeros[0])/rad, 2e-3)
	assert.InEpsilon(t, 30, -real(out.Poles[0])/rad, 0.01)
	assert.InEpsilon(t, 238e-6*96e6*2/3, out.Gain, 1e-12)
}

// Source: Texas Instruments, TPS40192 datasheet SLUS719E, p. 25: 0.591 V and 20 k ask 9.78 k for 1.8 V.
func TestSetPointOfPublishedDivider(t *testing.T) {
	assert.InEpsilon(t, 1.8, SetPoint(&Parts{Kind: Type3, ReferenceVoltage: 0.591, UpperResistor: 20e3, LowerResistor: 9.78e3}), 5e-3)
}
