package rules

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"

	"halfplane/schema"
)

func TestWhatHasTheWrongUnitIsNotPlausible(t *testing.T) {
	for _, tt := range []struct{ from, to, words string }{
		{"inductance: 22 uH ± 20 %", "inductance: 22", "inductance 22.0 H is outside what it can be, 10.0 nH to 100 mH; a number without a unit is in H"},
		{"inductance: 22 uH ± 20 %", "inductance: 22 MH ± 20 %", "inductance 26.4 MH is outside what it can be, 10.0 nH to 100 mH; M is mega, m is milli"},
		{"inductance: 22 uH ± 20 %", "inductance: 22 pH", "inductance 22.0 pH is outside"},
		{"capacitance: 220 uF ± 20 %", "capacitance: 220", "output capacitor's capacitance 220 F is outside what it can be, 10.0 pF to 1.00 F"},
		{"switching-frequency: 250 kHz", "switching-frequency: 250", "switching frequency 250 Hz is outside what it can be, 1.00 kHz to 20.0 MHz; a number without a unit is in Hz"},
		{"switching-frequency: 250 kHz", "switching-frequency: 250 MHz", "switching frequency 250 MHz is outside"},
		{"integrator-capacitor: 39n ± 5 %", "integrator-capacitor: 39 mF", "integrator capacitor 39.0 mF is outside"},
		{"feedback-resistor: 7k87 ± 1 %", "feedback-resistor: 7.87 mΩ", "feedback resistor 7.87 mΩ is outside"},
	} {
		findings, c := edited(t, "internal/healthy-boost", tt.from, tt.to)
		if assert.NotNil(t, c, tt.to) {
			assert.Contains(t, only(t, findings, "plausible-size").Message, tt.words)
		}
	}
}

// Every quantity of a design has a band, but for figures that are recomputed, what a list can hold, and plain ratios that the
// schema bounds.
func TestEveryQuantityHasABand(t *testing.T) {
	without := []string{"stated/", "designed-for/", "/duty-limit", "/control-ratio", "/gain", "/sense-gain", "/band", "/turns/"}
	for _, name := range []string{"healthy-boost", "healthy-buck", "healthy-current", "healthy-digital", "healthy-filter", "healthy-flyback", "healthy-half-bridge", "healthy-sepic"} {
		c := caseOf(t, "internal/"+name)
		c.Spec.Quantities(func(pointer string, _ schema.Quantity) {
			for _, part := range without {
				if strings.Contains(pointer, part) {
					return
				}
			}
			if lastKey(pointer) == "zeros" || lastKey(pointer) == "poles" || lastKey(pointer) == "numerator" || lastKey(pointer) == "denominator" {
				return
			}
			_, known := bandOf(pointer)
			assert.True(t, known, "%s", pointer)
		})
	}
}
