package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"

	"halfplane/analysis"
)

func TestFractionsPrintAsOneOverSomething(t *testing.T) {
	for value, want := range map[float64]string{0.2: "1/5", 1.0 / 3: "1/3", 0.1: "1/10", 0.23: "0.23", 1: "1", 2: "2"} {
		assert.Equal(t, want, fraction(value))
	}
}

func TestCornersAreWordedAsAnEngineerSaysThem(t *testing.T) {
	c := caseOf(t, "internal/healthy-boost")
	set := func(settings ...analysis.Setting) string { return c.cornerWords(settings) }
	assert.Equal(t, "", set())
	assert.Equal(t, "9.00 V in, 1.50 A, inductance +20 %, capacitance −20 %", set(
		analysis.Setting{Path: "input-voltage", Value: 9}, analysis.Setting{Path: "load.current", Value: 1.5},
		analysis.Setting{Path: "inductor.inductance", Value: 22e-6 * 1.2}, analysis.Setting{Path: "output-capacitor.capacitance", Value: 220e-6 * 0.8},
		analysis.Setting{Path: "output-capacitor.esr", Value: 12e-3}))
	assert.Equal(t, "12.0 V in, 1.00 A, ESR 8.00 mΩ", set(analysis.Setting{Path: "output-capacitor.esr", Value: 8e-3}), "input and load are told when nominal too")
	assert.Equal(t, "12.0 V in, 1.00 A, feedback resistor −0.55 %", set(analysis.Setting{Path: "compensator.feedback-resistor", Value: 7870 * 0.9945}))
	banks := caseOf(t, "capacitor-ripple-current/two-banks")
	assert.Equal(t, "12.0 V in, 1.00 A, capacitance of bank 2 +10 %", banks.cornerWords([]analysis.Setting{{Path: "output-capacitors.1.capacitance", Value: 24.2e-6}}))
	sepic := caseOf(t, "internal/healthy-sepic")
	assert.Equal(t, "12.0 V in, 1.00 A, second inductor's inductance −20 %", sepic.cornerWords([]analysis.Setting{{Path: "second-inductor.inductance", Value: 68e-6 * 0.8}}))
}

func TestPathsOfListItemsAreCountedFromOne(t *testing.T) {
	assert.Equal(t, "poles 2", pathWords("compensator.poles.1"))
	assert.Equal(t, "ESR of bank 1", pathWords("output-capacitors.0.esr"))
	assert.Equal(t, "input filter's inductance", pathWords("input-filter.inductance"))
}

func TestPercentAndNumbersHaveThreeDigits(t *testing.T) {
	assert.Equal(t, "2.00 %", percent(0.02))
	assert.Equal(t, "4.90 kHz", number(4900, "Hz"))
	assert.Equal(t, "20.0 %", number(0.2, "%"))
	assert.Nil(t, asNumber(zero()/zero(), "Hz"))
	assert.Equal(t, &Number{0.01, ""}, asNumber(0.01, "%"))
}

func zero() float64 { return 0 }

func TestNumbersReadAsAnEngineerWritesThem(t *testing.T) {
	assert.Equal(t, "−4.20°", number(-4.2, "deg"), "a true minus sign")
	assert.Equal(t, "(−4.20°)", bracketed(-4.2, "deg"))
	assert.Equal(t, "1520", short(1523), "no exponent below a million")
	assert.Equal(t, "0.5", short(0.5))
	assert.Equal(t, "44.98°", finer(44.98, 45, "deg"), "more digits where three do not tell the two apart")
	assert.Equal(t, "44.9°", finer(44.9, 45, "deg"))
	assert.Equal(t, "2.6202 kHz", finer(2620.2, 2620, "Hz"))
}

func TestPlacesAreNamedSoThatTheyCannotBeMistaken(t *testing.T) {
	for pointer, words := range map[string]string{
		"/load/current":                         "load current",
		"/output-capacitor/esr":                 "output capacitor's ESR",
		"/output-capacitors/1/esr":              "ESR of output capacitor bank 2",
		"/output-capacitor/count":               "number of output capacitors",
		"/second-inductor/inductance":           "second inductor's inductance",
		"/compensator/led-resistor":             "LED resistor",
		"/compensator/amplifier/open-loop-gain": "amplifier's open-loop gain",
		"/modulator/duty-limit/min":             "lower duty limit",
		"/switch/on-resistance":                 "switch's on-resistance",
		"/input-voltage":                        "input voltage",
	} {
		assert.Equal(t, words, placeWords(pointer))
	}
}
