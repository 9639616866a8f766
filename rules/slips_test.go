package rules

import (
	"context"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/plant"
	"halfplane/schema"
)

// Each slip is made here the way a person makes it: from the loss-free closed forms of theory (D = M/(1+M) of a flyback,
// M of a buck type), with the ratio or the inductance put in wrongly.
func TestSlipsAreNamed(t *testing.T) {
	const (
		flyback, half = "internal/healthy-flyback", "internal/healthy-half-bridge"
		buck, derated = "internal/healthy-buck", "internal/healthy-buck derated"
		bridge        = "../reference/mast-push-pull"
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
		// Slips of the trade outside the transformer. The closed forms are written out with the numbers of the files.
		{"duty: 1 − D", buck, fmt.Sprintf("duty: %.4f", 1-3.3/12), "stated-figure", "1 − D for D"},
		{"duty: 1 − D with losses", flyback, fmt.Sprintf("duty: %.4f", 1-0.4423), "stated-figure", "1 − D for D"},
		{"duty in per cent", buck, fmt.Sprintf("duty: %.1f", 100*3.3/12), "stated-figure", "per cent for a ratio"},
		{"duty of one switch", bridge, fmt.Sprintf("duty: %.4f", 48/(3*28.0)/2), "stated-figure", "one switch's period for the filter's"},
		{"zero: 1 − D", flyback, fmt.Sprintf("rhp-zero: %.0f", math.Pow(3.0/7, 2)*6/(4.0/7*30e-6)/(2*math.Pi)), "stated-figure", "1 − D for D"},
		{"zero in radians per second", flyback, fmt.Sprintf("rhp-zero: %.0f", 23494*2*math.Pi), "stated-figure", "radians per second for hertz"},
		{"zero divided once more", flyback, fmt.Sprintf("rhp-zero: %.0f", 23494/(2*math.Pi)), "stated-figure", "hertz taken for radians per second"},
		{"zero at the nominal load", flyback, fmt.Sprintf("rhp-zero: %.0f", 24252*2/1.5), "stated-figure", "nominal load for full load"},
		{"zero wrong", flyback, "rhp-zero: 27 kHz", "stated-figure", ""},
		{"resonance in radians per second", buck, fmt.Sprintf("resonance: %.0f", 1/math.Sqrt(3.3e-6*330e-6)), "stated-figure", "radians per second for hertz"},
		{"resonance of one piece", half, fmt.Sprintf("resonance: %.0f", 1/math.Sqrt(8e-6*560e-6)/(2*math.Pi)), "stated-figure", "one piece of the output capacitor counted"},
		{"resonance with the pieces twice", half, fmt.Sprintf("resonance: %.0f", 1/math.Sqrt(8e-6*4*560e-6)/(2*math.Pi)), "stated-figure", "the pieces of the output capacitor counted twice"},
		{"resonance without the bias", derated, fmt.Sprintf("resonance: %.0f", 1/math.Sqrt(3.3e-6*330e-6)/(2*math.Pi)), "stated-figure", "bias derating left out"},
		{"resonance wrong", buck, "resonance: 6.1 kHz", "stated-figure", ""},
		{"ESR zero in radians per second", buck, fmt.Sprintf("esr-zero: %.0f", 1/(9e-3*330e-6)), "stated-figure", "radians per second for hertz"},
		{"ESR zero, all capacitance and one ESR", half, fmt.Sprintf("esr-zero: %.0f", 1/(8e-3*1120e-6)/(2*math.Pi)), "stated-figure", "the pieces counted for the capacitance and not for the ESR"},
		{"ESR zero, all ESR and one capacitance", half, fmt.Sprintf("esr-zero: %.0f", 1/(4e-3*560e-6)/(2*math.Pi)), "stated-figure", "the pieces counted for the ESR and not for the capacitance"},
		{"ESR zero without the bias", derated, fmt.Sprintf("esr-zero: %.0f", 1/(9e-3*330e-6)/(2*math.Pi)), "stated-figure", "bias derating left out"},
		{"ESR zero wrong", buck, "esr-zero: 80 kHz", "stated-figure", ""},
		{"line gain in decibels", buck, fmt.Sprintf("line-gain: %.2f", 20*math.Log10(3.3/12)), "stated-figure", "decibels for a ratio"},
		{"line gain wrong", buck, "line-gain: 0.4", "stated-figure", ""},
		{"control gain in decibels", buck, fmt.Sprintf("control-gain: %.2f", 20*math.Log10(11.65)), "stated-figure", "decibels for a ratio"},
		{"line gain with 1 − D", buck, fmt.Sprintf("line-gain: %.3f", 1-3.3/12), "stated-figure", "1 − D for D"},
		{"control gain wrong", buck, "control-gain: 15", "stated-figure", ""},
		{"critical current as the whole ripple", buck, fmt.Sprintf("critical-current: %.3f", 1.8497), "stated-figure", "the ripple from peak to peak for its peak"},
		{"critical current right", buck, fmt.Sprintf("critical-current: %.3f", 3.3*(1-3.3/12)/(3.3e-6*400e3)/2), "", ""},
		{"critical current with one switch's period", bridge, fmt.Sprintf("critical-current: %.3f", 48*(1-4.0/7)/(68e-6*90e3)/2), "stated-figure", "the ripple from peak to peak for its peak, or one switch's period for the filter's"},
		{"one switch and the half left out come to the same", half, fmt.Sprintf("duty: %.4f", 0.4923/2), "turns-ratio", "the half of the half-bridge left out, or one switch's period for the filter's"},
		{"critical current not reflected", flyback, fmt.Sprintf("critical-current: %.4f", 12*math.Pow(4.0/7, 2)/(270e-6*120e3)/2), "reflected-inductance", "an inductance that is not reflected"},
		{"critical current wrong", buck, "critical-current: 1.35", "stated-figure", ""},
		{"crossover in radians per second", buck, fmt.Sprintf("crossover: %.0f", 2*math.Pi*30387), "stated-figure", "radians per second for hertz"},
		{"crossover wrong", buck, "crossover: 36 kHz", "stated-figure", ""},
		{"phase margin right", buck, "phase-margin: 74 deg", "", ""},
		{"phase margin wrong", buck, "phase-margin: 52 deg", "stated-figure", ""},
		{"phase margin with the wrong sign", buck, "phase-margin: -73.8 deg", "stated-figure", ""},
		{"zero of a buck", buck, "rhp-zero: 40 kHz", "stated-figure", ""},
	} {
		t.Run(tt.name, func(t *testing.T) {
			findings := stating(t, tt.file, tt.stated)
			if tt.rule == "" {
				assert.Empty(t, findings)
				return
			}
			if assert.Len(t, findings, 1) {
				assert.Equal(t, tt.rule, findings[0].Rule)
				assert.Equal(t, Find(tt.rule).Severity, findings[0].Severity)
				if tt.words == "" {
					assert.NotContains(t, findings[0].Message, "it fits")
				} else {
					assert.Contains(t, findings[0].Message, "it fits "+tt.words)
				}
			}
		})
	}
}

// stating gives what is said about stated figures that are added to a file; " derated" behind its name gives the output
// capacitor a bias curve that leaves 0.6 of it.
func stating(t *testing.T, name, stated string) []Finding {
	t.Helper()
	name, derated := strings.CutSuffix(name, " derated")
	path := shelf + "/" + name + ".converter.yaml"
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	if derated {
		text = []byte(strings.Replace(string(text), "max: 14 mΩ}}", "max: 14 mΩ}, bias-derating: [[0 V, 1], [6.6 V, 0.2]]}", 1))
		require.Contains(t, string(text), "bias-derating")
	}
	before, _, _ := strings.Cut(string(text), "\nstated:")
	text = append([]byte(before), "\nstated: {"+stated+"}\n"...)
	c, problems, err := Prepare(context.Background(), schema.Read(path, text, 0), folder{}, Settings{}, analysis.Options{Depth: analysis.Quick})
	require.NoError(t, err)
	require.Empty(t, problems)
	return Run(c, RunOptions{Only: []string{"stated-figure", "turns-ratio", "reflected-inductance"}})
}

// Two interleaved phases: the filter sees half of the inductance, the stated one is of one phase.
func TestSlipsOfPhasesAreNamed(t *testing.T) {
	path := reference + "/crane-two-phase-boost.converter.yaml"
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	plain, _, err := Prepare(context.Background(), schema.Read(path, text, 0), folder{}, Settings{}, analysis.Options{Depth: analysis.Quick})
	require.NoError(t, err)
	figures := plain.fullLoad().Plant
	for stated, words := range map[string]string{
		fmt.Sprintf("rhp-zero: %g", figures.RHPZero/2):                         "the phases not counted",
		fmt.Sprintf("rhp-zero: %g", figures.RHPZero*2):                         "the phases counted twice",
		fmt.Sprintf("effective-inductance: %g", figures.EffectiveInductance/2): "the phases counted, though it is the inductance of one",
	} {
		before, _, _ := strings.Cut(string(text), "\nstated:")
		c, problems, err := Prepare(context.Background(), schema.Read(path, []byte(before+"\nstated: {"+stated+"}\n"), 0), folder{}, Settings{}, analysis.Options{Depth: analysis.Quick})
		require.NoError(t, err)
		require.Empty(t, problems)
		findings := Run(c, RunOptions{Only: []string{"stated-figure", "reflected-inductance"}})
		if assert.Len(t, findings, 1, stated) {
			assert.Contains(t, findings[0].Message, "it fits "+words, stated)
		}
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
