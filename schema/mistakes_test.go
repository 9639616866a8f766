package schema

import (
	"errors"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// mistake is one slip that a designer makes: a text of a good file and what is written instead.
type mistake struct{ right, wrong, rule string }

// boostMistakes are slips in the beacon boost of testdata/reference, each in a place of its own.
var boostMistakes = []mistake{
	{"format: 1", "format: 2", shapeRule},
	{"title: Harbour beacon boost, synchronous", "title: 12", shapeRule},
	{"topology: boost", "topology: bosst", shapeRule},
	{"switching-frequency: 250 kHz", "switchng-frequency: 250 kHz", shapeRule},
	{"input-voltage: {min: 9 V, nominal: 12 V, max: 16 V}", "input-voltage: {min: 16 V, nominal: 12 V, max: 9 V}", quantityRule},
	{"output-voltage: 24 V", "output-voltage: 24 A", quantityRule},
	{"load:\n  current:", "load:\n  curent:", shapeRule},
	{"inductance: 22 uH ± 20 %", "inductance: 22 uF ± 20 %", quantityRule},
	{"resistance: 25 mΩ", "resistance: -25 mΩ", quantityRule},
	{"saturation-current: 9 A", "saturation: 9 A", shapeRule},
	{"capacitance: 220 uF ± 20 %", "capacitance: 220 uF ± 20", quantityRule},
	{"esr: {min: 8 mΩ, max: 25 mΩ}", "esr: {min: 8 mΩ}", shapeRule},
	{"count: 2", "count: two", quantityRule},
	{"on-resistance: 15 mΩ", "on-resistance: [15 mΩ]", shapeRule},
	{"synchronous: true", "synchronous: yes", shapeRule},
	{"scheme: voltage-mode", "scheme: voltage", shapeRule},
	{"ramp-amplitude: 1.8 V", "ramp-amplitude: .nan", quantityRule},
	{"duty-limit: {min: 0, max: 0.8}", "duty-limit: {min: 0, max: 80}", quantityRule},
	{"network: type-3", "network: type-5", shapeRule},
	{"upper-resistor: 100k ± 1 %", "upper-resistor: 100k ± 1 V", quantityRule},
	{"lower-resistor: 5k49 ± 1 %", "lower-resistor: 5,49k ± 1 %", quantityRule},
	{"lead-resistor: 2k05 ± 1 %", "lead-resisto: 2k05 ± 1 %", shapeRule},
	{"lead-capacitor: 2n7 ± 5 %", "lead-capacitor:", shapeRule},
	{"gain-bandwidth: 10 MHz", "gain-bandwidth: 10 mhz", quantityRule},
	{"open-loop-gain: 90 dB", "open-loop-gain: 90 V", quantityRule},
	{"phase-margin: 45 deg, gain", "phase-margin: 45 V, gain", quantityRule},
	{"gain-margin: 8 dB", "gain-margn: 8 dB", shapeRule},
	{"stated: {duty: 0.505", "stated: {dooty: 0.505", shapeRule},
	{"resonance: 804.5 Hz", "resonance: 804.5 H", quantityRule},
}

// flybackMistakes likewise, in an isolated design with an optocoupler.
var flybackMistakes = []mistake{
	{"title: Railway door controller\n", "", shapeRule},
	{"topology: flyback", "topology: flyback converter", shapeRule},
	{"turns: {primary: 18, secondary: 6}", "turns: {primary: 18}", shapeRule},
	{"inductance: 90 uH ± 10 %", "inductanse: 90 uH ± 10 %", shapeRule},
	{"side: primary", "side: first", shapeRule},
	{"count: 2", "count: 0", quantityRule},
	{"scheme: peak-current-mode", "scheme: peak-curent-mode", shapeRule},
	{"current-sense-gain: 0.15 Ω", "current-sense-gain: 0.15 A", quantityRule},
	{"slope-compensation: 45 mV/us", "slope-compensation: 45 mV", quantityRule},
	{"network: optocoupler", "netwrok: optocoupler", shapeRule},
	{"led-resistor: 931R ± 1 %\n", "led-resistor: 931R ± 1 %\n  sense-gain: 3\n", shapeRule},
	{"pull-up-resistor: 4k75 ± 1 %", "pull-up-resistor: 4k75 ± 100 %", quantityRule},
	{"current-transfer-ratio: {min: 0.7, nominal: 1.0, max: 1.4}", "current-transfer-ratio: {min: 0.7, nominal: 3, max: 1.4}", quantityRule},
	{"optocoupler-pole: 25 kHz\n", "optocoupler-pole: 25 kHz\n  wibble: 1\n", shapeRule},
	{"  upper-resistor: 38k3 ± 1 %\n", "", shapeRule},
	{"voltage-rating: 200 V", "voltage-rating: true", shapeRule},
}

// applyMistakes writes some of the mistakes into the text.
func applyMistakes(t testing.TB, text string, chosen []mistake) string {
	for _, m := range chosen {
		require.Equal(t, 1, strings.Count(text, m.right), m.right)
		text = strings.Replace(text, m.right, m.wrong, 1)
	}
	return text
}

func TestEachMistakeAloneIsOneProblem(t *testing.T) {
	for path, mistakes := range map[string][]mistake{"beacon-boost-type3": boostMistakes, "railway-flyback-optocoupler": flybackMistakes} {
		good, err := os.ReadFile("../testdata/reference/" + path + ".converter.yaml")
		require.NoError(t, err)
		for _, m := range mistakes {
			text := applyMistakes(t, string(good), []mistake{m})
			_, problems := Validate(Read("x.converter.yaml", []byte(text), 0), nil)
			if assert.Len(t, problems, 1, "%q: %v", m.wrong, problems) {
				assert.Equal(t, m.rule, problems[0].Rule, m.wrong)
				assertPlain(t, problems[0].Message)
			}
		}
	}
}

// TestFiveDifferentMistakesAreExactlyFiveProblems draws many sets of five: no mistake hides another or brings one along.
func TestFiveDifferentMistakesAreExactlyFiveProblems(t *testing.T) {
	draw := rand.New(rand.NewPCG(1, 5)) // seeded: the same sets every time
	for path, mistakes := range map[string][]mistake{"beacon-boost-type3": boostMistakes, "railway-flyback-optocoupler": flybackMistakes} {
		good, err := os.ReadFile("../testdata/reference/" + path + ".converter.yaml")
		require.NoError(t, err)
		for range 200 {
			var chosen []mistake
			for _, i := range draw.Perm(len(mistakes))[:5] {
				chosen = append(chosen, mistakes[i])
			}
			text := applyMistakes(t, string(good), chosen)
			_, problems := Validate(Read("x.converter.yaml", []byte(text), 0), nil)
			places := map[[2]int]bool{}
			for _, p := range problems {
				places[[2]int{p.Start, p.End}] = true
			}
			require.Len(t, problems, 5, "%v\n%v", chosen, problems)
			require.Len(t, places, 5, "%v\n%v", chosen, problems)
		}
	}
}

// FuzzValidate asserts that any text gets problems inside their documents, the same ones every time, and a spec only
// without any.
func FuzzValidate(f *testing.F) {
	for _, pattern := range []string{"testdata/validate/*.yaml", "../testdata/reference/*.yaml"} {
		files, err := filepath.Glob(pattern)
		require.NoError(f, err)
		for _, path := range files {
			text, err := os.ReadFile(path)
			require.NoError(f, err)
			f.Add(filepath.Base(path), string(text))
		}
	}
	f.Add("halfplane.yaml", "format: 1\nseverity: {a: *b}\n")
	f.Add("x.converter.json", `{"format": 1e999, "inductor": {"inductance": {"min": null}}, "a/b~c%20": 1}`)
	f.Fuzz(func(t *testing.T, name, text string) {
		doc := Read(name, []byte(text), 0)
		spec, problems := Validate(doc, folder{"testdata/validate"})
		_, again := Validate(doc, nil)
		_, once := Validate(doc, nil)
		require.Equal(t, len(again), len(once))
		for i := range once {
			require.Equal(t, again[i].Message, once[i].Message)
		}
		for i, p := range problems {
			require.NotNil(t, p.Doc)
			require.True(t, 0 <= p.Start && p.Start <= p.End && p.End <= len(p.Doc.Text), p.Message)
			require.NotContains(t, p.Message, issueSeparator)
			if i > 0 {
				require.LessOrEqual(t, problems[i-1].Start, p.Start)
			}
		}
		require.True(t, spec == nil || len(problems) == 0)
		if spec != nil {
			require.NotNil(t, spec.Design())
		}
	})
}

// TestLargeHostileFilesAreJudgedInTime has files near the size limit whose every line is wrong.
func TestLargeHostileFilesAreJudgedInTime(t *testing.T) {
	lines := func(head, line string) string {
		var b strings.Builder
		b.WriteString(head)
		for i := 0; b.Len() < 1<<18; i++ {
			b.WriteString(strings.ReplaceAll(line, "N", strconv.Itoa(i)))
		}
		return b.String()
	}
	for name, text := range map[string]string{
		"unknown.converter.yaml": lines("format: 1\n", "inducter-N: 1\n"),
		"empty.parts.yaml":       lines("format: 1\ntitle: x\nparts:\n", "  pN: {}\n"),
		"misspelt.parts.yaml":    lines("format: 1\ntitle: x\nparts:\n", "  pN: {typ: inductor, inductnce: 1 F}\n"),
		"waivers.converter.yaml": lines("format: 1\nwaivers:\n", "- {rul: N}\n"),
		"numbers.converter.yaml": lines("format: 1\ncompensator:\n  network: digital\n  numerator:\n", "  - N V\n"),
	} {
		t.Run(name, func(t *testing.T) {
			doc := Read(name, []byte(text), 0)
			start := time.Now()
			_, problems := Validate(doc, nil)
			taken := time.Since(start)
			t.Logf("%d problems in %v", len(problems), taken)
			assert.Greater(t, len(problems), 1000)
			assert.Less(t, taken, 20*time.Second, "linear in the size of the file takes half a second here")
		})
	}
}

// TestReferenceAstrayIsOneProblem: a part that is overridden beside a `use` that leads nowhere is no second mistake.
func TestReferenceAstrayIsOneProblem(t *testing.T) {
	text := `format: 1
title: Skiff lamp
topology: boost
switching-frequency: 250 kHz
input-voltage: 12 V
output-voltage: 24 V
load: {current: 1 A}
inductor: {inductance: 22 uH}
output-capacitor: {capacitance: 220 uF}
modulator: {scheme: voltage-mode, ramp-amplitude: 1.8 V}
compensator: {use: nowhere.compensator.yaml, lead-capacitor: 2n2 ± 5 %}
`
	_, problems := Validate(Read("lamp.converter.yaml", []byte(text), 0), nowhere{})
	require.Len(t, problems, 1)
	assert.Equal(t, "/compensator/use", problems[0].Pointer)
}

type nowhere struct{}

func (nowhere) Resolve(*Document, string) (*Document, error) {
	return nil, errors.New("there is no such file")
}
