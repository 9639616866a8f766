package rules

import (
	"fmt"
	"testing"

	"github.com/stretchr/testify/assert"

	"halfplane/analysis/plant"
)

// Each slip is made here the way a person makes it: from the loss-free closed forms of theory (D = M/(1+M) of a flyback,
// M of a buck type), with the ratio or the inductance put in wrongly.
func TestSlipsAreNamed(t *testing.T) {
	const (
		flyback, half = "internal/healthy-flyback", "internal/healthy-half-bridge"
		n             = 1.0 / 3 // flyback: 48 V in, 12 V out, 270 µH on the primary
	)
	for _, tt := range []struct {
		name, file, stated string
		rule, words        string // "": nothing may be said
	}{
		{"duty with the ratio inverted", flyback, fmt.Sprintf("duty: %.4f", 12/(12+48/n)), "turns-ratio", "the turns ratio inverted"},
		{"duty with the ratio left out", flyback, fmt.Sprintf("duty: %.4f", 12.0/(12+48)), "turns-ratio", "the turns ratio left out"},
		{"duty with the ratio twice", flyback, fmt.Sprintf("duty: %.4f", 12/(12+48*n*n)), "turns-ratio", "the turns ratio applied twice"},
		{"duty right", flyback, fmt.Sprintf("duty: %.4f", 12/(12+48*n)), "", ""},
		{"line gain inverted", half, fmt.Sprintf("line-gain: %.5f", 0.5192*(20.0/3)/2), "turns-ratio", "the turns ratio inverted"},
		{"line gain twice", half, fmt.Sprintf("line-gain: %.6f", 0.03844*0.15), "turns-ratio", "the turns ratio applied twice"},
		{"control gain inverted", half, fmt.Sprintf("control-gain: %.0f", 23.97/(0.15*0.15)), "turns-ratio", "the turns ratio inverted"},
		{"control gain left out", half, fmt.Sprintf("control-gain: %.1f", 325/2.0), "turns-ratio", "the turns ratio left out"},
		{"effective inductance not reflected", flyback, "effective-inductance: 270 uH", "reflected-inductance", "an inductance that is not reflected"},
		{"effective inductance reflected twice", flyback, "effective-inductance: 3.333 uH", "reflected-inductance", "an inductance that is reflected twice"},
		{"effective inductance wrong way", flyback, "effective-inductance: 2.43 mH", "reflected-inductance", "an inductance that is reflected the wrong way"},
		{"effective inductance off without a slip", flyback, "effective-inductance: 41 uH", "reflected-inductance", ""},
		{"zero with n for n squared", flyback, fmt.Sprintf("rhp-zero: %.0f", 23494*n), "reflected-inductance", "an inductance that is reflected with n for n²"},
		{"zero reflected twice", flyback, fmt.Sprintf("rhp-zero: %.0f", 23494/n/n), "reflected-inductance", "an inductance that is reflected twice"},
		{"resonance with n for n squared", flyback, "resonance: 306 Hz", "reflected-inductance", "an inductance that is reflected with n for n²"},
		{"zero in radians per second", flyback, fmt.Sprintf("rhp-zero: %.0f", 23494*6.2832), "", ""},
		{"one of two pieces counted", flyback, "resonance: 750 Hz", "", ""},
		{"no slip at all", flyback, "rhp-zero: 31 kHz", "", ""},
	} {
		t.Run(tt.name, func(t *testing.T) {
			const targets = "targets: {phase-margin: 45 deg, gain-margin: 8 dB}"
			findings, _ := edited(t, tt.file, targets, targets+"\nstated: {"+tt.stated+"}")
			if tt.rule == "" {
				assert.Empty(t, findings)
				return
			}
			if assert.Len(t, findings, 1) {
				assert.Equal(t, tt.rule, findings[0].Rule)
				assert.Equal(t, Error, findings[0].Severity)
				if tt.words == "" {
					assert.NotContains(t, findings[0].Message, "it fits")
				} else {
					assert.Contains(t, findings[0].Message, "it fits "+tt.words)
				}
			}
		})
	}
}

func TestCoincidingSlipsCountAsOneAndRivalsAsNone(t *testing.T) {
	same := slip{"turns-ratio", "a", []float64{10}}
	assert.True(t, coincide(same, slip{"turns-ratio", "b", []float64{10.001, 99}}))
	assert.False(t, coincide(same, slip{"turns-ratio", "b", []float64{10.2}}))

	// A half-bridge with n = 1/2: leaving out the ratio and leaving out the half both double a gain. They count as one.
	_, c := edited(t, "internal/healthy-half-bridge", "primary: 20, secondary: 3", "primary: 6, secondary: 3",
		"{min: 280 V, nominal: 325 V, max: 375 V}", "{min: 84 V, nominal: 97.5 V, max: 112 V}")
	corner := c.fullLoad()
	gain := corner.Plant.ControlGain
	figure := statedFigures()[4]
	assert.Equal(t, "control-gain", figure.key)
	rule, words := nameSlip(c, corner, figure, 2*gain, gain)
	assert.Equal(t, "turns-ratio", rule)
	assert.Equal(t, "the turns ratio left out, or the half of the half-bridge left out", words)

	// With n² within 2 % of 2π a zero in radians per second cannot be told from one that is not reflected the right way.
	_, flyback := edited(t, "internal/healthy-flyback", "primary: 18, secondary: 6", "primary: 5, secondary: 2", "inductance: 270 uH", "inductance: 190 uH")
	corner = flyback.fullLoad()
	zero := statedFigures()[5]
	assert.Equal(t, "rhp-zero", zero.key)
	rule, _ = nameSlip(flyback, corner, zero, corner.Plant.RHPZero*6.27, corner.Plant.RHPZero)
	assert.Empty(t, rule)
}

func TestStatedFiguresAreThoseOfFullLoad(t *testing.T) {
	c := caseOf(t, "internal/healthy-boost")
	corner := c.fullLoad()
	assert.Equal(t, 1.5, c.valueAt(corner, "load.current"))
	assert.Equal(t, 12.0, c.valueAt(corner, "input-voltage"))
	assert.Equal(t, plant.Continuous, corner.Plant.Mode)
}
