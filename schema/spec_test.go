package schema

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

func specOf(t testing.TB, path string) *Spec {
	spec, problems := Validate(readFile(t, path), folder{filepath.Dir(path)})
	require.Empty(t, problems, path)
	require.NotNil(t, spec, path)
	return spec
}

const (
	byHand = "worked out by hand from the file's text"
	golden = "independent computation, testdata/reference"
)

func TestTheBeaconsNumbersReachTheAnalysis(t *testing.T) {
	d := specOf(t, "../testdata/reference/beacon-boost-type3.converter.yaml").Design()
	c, p := d.Nominal.Circuit, d.Nominal.Network
	assert.Equal(t, plant.Boost, c.Topology)
	assert.Equal(t, plant.Resistive, c.Behaviour)
	assert.Equal(t, plant.VoltageMode, c.Modulator.Scheme)
	assert.Equal(t, network.Type3, p.Kind)
	assert.True(t, c.Synchronous)
	assert.Equal(t, 1, c.Phases)
	for name, pair := range map[string][2]float64{
		"frequency": {250e3, c.SwitchingFrequency}, "input": {12, c.InputVoltage}, "nominal input": {12, c.Modulator.NominalInput},
		"output": {24, c.OutputVoltage}, "load": {1, c.LoadCurrent}, "inductance": {22e-6, c.Inductor.Inductance},
		"winding": {0.025, c.Inductor.Resistance}, "capacitance": {220e-6, c.Banks[0].Capacitance}, "count": {2, c.Banks[0].Count},
		"esr, the midpoint": {0.0165, c.Banks[0].ESR}, "switch": {0.015, c.SwitchResistance}, "rectifier": {0.012, c.RectifierResistance},
		"ramp": {1.8, c.Modulator.RampAmplitude}, "control ratio": {1, c.Modulator.ControlRatio}, "turns": {1, c.TurnsPrimary},
		"R1": {100e3, p.UpperResistor}, "RL": {5490, p.LowerResistor}, "R2": {7870, p.FeedbackResistor}, "R3": {2050, p.LeadResistor},
		"C1": {39e-9, p.IntegratorCapacitor}, "C2": {1e-9, p.RolloffCapacitor}, "C3": {2.7e-9, p.LeadCapacitor},
		"amplifier": {10e6, p.GainBandwidth}, "open-loop gain, 90 dB": {31622.776601683792, p.OpenLoopGain}, "reference": {1.25, p.ReferenceVoltage},
	} {
		assert.InEpsilon(t, pair[0], pair[1], 1e-12, "%s, %s", name, byHand)
	}
	want := []analysis.Axis{
		{Path: "input-voltage", Min: 9, Nominal: 12, Max: 16}, {Path: "load.current", Min: 0.2, Nominal: 1, Max: 1.5},
		{Path: "inductor.inductance", Min: 17.6e-6, Nominal: 22e-6, Max: 26.4e-6},
		{Path: "output-capacitor.capacitance", Min: 176e-6, Nominal: 220e-6, Max: 264e-6},
		{Path: "output-capacitor.esr", Min: 8e-3, Nominal: 16.5e-3, Max: 25e-3},
		{Path: "compensator.upper-resistor", Min: 99e3, Nominal: 100e3, Max: 101e3},
	}
	require.Len(t, d.Axes, 12, byHand)
	for i, w := range want {
		assert.Equal(t, w.Path, d.Axes[i].Path)
		assert.InEpsilon(t, w.Min, d.Axes[i].Min, 1e-12)
		assert.InEpsilon(t, w.Nominal, d.Axes[i].Nominal, 1e-12)
		assert.InEpsilon(t, w.Max, d.Axes[i].Max, 1e-12)
	}
}

func TestYAMLAndJSONTwinsGiveTheSameDesign(t *testing.T) {
	files, err := filepath.Glob("../testdata/reference/*.expected.json")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, path := range files {
		text, err := os.ReadFile(path)
		require.NoError(t, err)
		var expected struct {
			Spec json.RawMessage `json:"spec"`
		}
		require.NoError(t, json.Unmarshal(text, &expected))
		twin, problems := Validate(Read("twin.converter.json", expected.Spec, 0), nil)
		require.Empty(t, problems, path)
		yaml := specOf(t, strings.Replace(path, ".expected.json", ".converter.yaml", 1))
		assert.Equal(t, yaml.Design().Nominal, twin.Design().Nominal, path)
		assert.ElementsMatch(t, yaml.Design().Axes, twin.Design().Axes, path)
		for pointer, q := range yaml.quantities {
			q.Node = nil
			other, ok := twin.Quantity(pointer)
			other.Node = nil
			assert.True(t, ok, pointer)
			assert.Equal(t, q, other, pointer)
		}
	}
}

// TestEveryGoldenCornerAssignsAnAxisOfTheDesign ties the axes to the fields that the independent computation varied.
func TestEveryGoldenCornerAssignsAnAxisOfTheDesign(t *testing.T) {
	files, err := filepath.Glob("../testdata/reference/*.expected.json")
	require.NoError(t, err)
	for _, path := range files {
		text, err := os.ReadFile(path)
		require.NoError(t, err)
		var expected struct {
			Corners []struct {
				Name string             `json:"name"`
				At   map[string]float64 `json:"at"`
			} `json:"corners"`
		}
		require.NoError(t, json.Unmarshal(text, &expected))
		d := specOf(t, strings.Replace(path, ".expected.json", ".converter.yaml", 1)).Design()
		axes := map[string]analysis.Axis{}
		for _, a := range d.Axes {
			axes[a.Path] = a
		}
		for _, c := range expected.Corners {
			for field, v := range c.At {
				at := analysis.Field(&d.Nominal, field)
				require.NotNil(t, at, "%s %s", path, field)
				if a, ok := axes[field]; ok {
					assert.GreaterOrEqual(t, v, a.Min*(1-1e-8), "%s %s %s, %s", path, c.Name, field, golden)
					assert.LessOrEqual(t, v, a.Max*(1+1e-8), "%s %s %s, %s", path, c.Name, field, golden)
				}
				if c.Name == "nominal" {
					assert.InEpsilon(t, v, *at, 1e-9, "%s %s, %s", path, field, golden)
				}
			}
		}
	}
}

func TestAnInvertingOutputIsTakenAsItsMagnitude(t *testing.T) {
	text := strings.Replace(string(readFile(t, "../testdata/reference/lab-inverting-type3.converter.yaml").Text), "output-voltage: -15 V", "output-voltage: {min: -15.5 V, nominal: -15 V, max: -14 V}", 1)
	spec, problems := Validate(Read("x.converter.yaml", []byte(text), 0), nil)
	require.Empty(t, problems)
	d := spec.Design()
	assert.InDelta(t, 15, d.Nominal.Circuit.OutputVoltage, 1e-12)
	for _, a := range d.Axes {
		if a.Path == "output-voltage" {
			assert.Equal(t, analysis.Axis{Path: "output-voltage", Min: 14, Nominal: 15, Max: 15.5}, a)
			return
		}
	}
	assert.Fail(t, "the output voltage has no axis")
}

func TestListsReachTheAnalysis(t *testing.T) {
	text := `format: 1
title: Two banks and a pair of poles
topology: buck
phases: 3
switching-frequency: 250 kHz
input-voltage: 12 V
output-voltage: 5 V
load: {current: {min: 0 A, max: 2 A}, behaviour: constant-power}
inductor: {inductance: 22 uH}
output-capacitors:
  - {capacitance: 220 uF ± 20 %, esr: 12 mΩ ± 0 %, count: 2}
  - {capacitance: 10 uF, count: 3, bias-derating: [[0 V, 1], [10 V, 70 %]]}
modulator: {scheme: peak-current-mode, current-sense-gain: 50 mV/A, delay: 80 ns}
compensator: {network: transfer-function, integrator: 30 Hz, zeros: [1 kHz ± 5 %], poles: [{frequency: 20 kHz, quality: 0.7}, 90 kHz]}
`
	spec, problems := Validate(Read("x.converter.yaml", []byte(text), 0), nil)
	require.Empty(t, problems)
	d := spec.Design()
	c, p := d.Nominal.Circuit, d.Nominal.Network
	assert.Equal(t, 3, c.Phases)
	assert.Equal(t, plant.ConstantPower, c.Behaviour)
	assert.Equal(t, []plant.Bank{
		{Capacitance: 220e-6, ESR: 12e-3, Count: 2},
		{Capacitance: 10e-6, Count: 3, Derating: []plant.DeratingPoint{{Voltage: 0, Factor: 1}, {Voltage: 10, Factor: 0.7}}},
	}, c.Banks)
	assert.Equal(t, []network.Root{{Frequency: 1e3}}, p.Zeros)
	assert.Equal(t, []network.Root{{Frequency: 20e3, Quality: 0.7}, {Frequency: 90e3}}, p.Poles)
	assert.Equal(t, [2]float64{1, 1}, [2]float64{p.Gain, p.SenseGain})
	var paths []string
	for _, a := range d.Axes {
		paths = append(paths, a.Path)
	}
	assert.Equal(t, []string{"load.current", "output-capacitors.0.capacitance", "compensator.zeros.0"}, paths)
	q, ok := spec.Quantity("/load/current")
	assert.True(t, ok && q.AssumedNominal && q.Nominal == 1)
}

func TestSharedValuesReachTheAnalysisWithTheDesignsOwnOnTop(t *testing.T) {
	d := specOf(t, "testdata/validate/shared.converter.yaml").Design()
	c, p := d.Nominal.Circuit, d.Nominal.Network
	for name, pair := range map[string][2]float64{
		"library": {22e-6, c.Inductor.Inductance}, "own over library": {0.03, c.Inductor.Resistance}, "capacitor": {220e-6, c.Banks[0].Capacitance},
		"count": {2, c.Banks[0].Count}, "switch": {0.015, c.SwitchResistance}, "diode": {0.45, c.RectifierDrop},
		"far end of the chain": {100e3, p.UpperResistor}, "middle of the chain": {10e3, p.FeedbackResistor}, "own over shared": {47e-9, p.IntegratorCapacitor},
	} {
		assert.InEpsilon(t, pair[0], pair[1], 1e-12, "%s, %s", name, byHand)
	}
}

func TestSharedValuesArePlacedAtTheirReference(t *testing.T) {
	s := specOf(t, "testdata/validate/shared.converter.yaml")
	on := func(r Related) string { return string(r.Doc.Text[r.Start:r.End]) }

	place := s.Place("/inductor/inductance")
	assert.Equal(t, []any{s.Document, "/inductor/part", "drum-22u"}, []any{place.Doc, place.Pointer, on(place)})
	shared, ok := s.Shared("/inductor/inductance")
	require.True(t, ok)
	assert.Equal(t, []any{"store.parts.yaml", "/parts/drum-22u/inductance", "22 uH ± 20 %"}, []any{shared.Doc.Name, shared.Pointer, on(shared)})

	place = s.Place("/compensator/upper-resistor")
	assert.Equal(t, []any{"/compensator/use", "chain.compensator.yaml"}, []any{place.Pointer, on(place)})
	shared, ok = s.Shared("/compensator/upper-resistor")
	require.True(t, ok)
	assert.Equal(t, []any{"slow-outer.compensator.yaml", "/upper-resistor", "100k ± 1 %"}, []any{shared.Doc.Name, shared.Pointer, on(shared)})
	shared, ok = s.Shared("/compensator/amplifier/gain-bandwidth")
	require.True(t, ok)
	assert.Equal(t, []any{"/amplifier/gain-bandwidth", "10 MHz"}, []any{shared.Pointer, on(shared)})

	place = s.Place("/inductor/resistance")
	assert.Equal(t, []any{"/inductor/resistance", "30 mΩ"}, []any{place.Pointer, on(place)})
	_, ok = s.Shared("/inductor/resistance")
	assert.False(t, ok)
	q, ok := s.Quantity("/output-capacitor/esr")
	assert.True(t, ok && q.Node.Via != nil && q.Max == 25e-3)
}

func TestAnAbsentValueIsPlacedAtTheNearestKeyAbove(t *testing.T) {
	s := specOf(t, "../testdata/reference/beacon-boost-type3.converter.yaml")
	on := func(r Related) string { return string(r.Doc.Text[r.Start:r.End]) }
	for pointer, want := range map[string][2]string{
		"/modulator/slope-compensation":       {"/modulator", "modulator"},
		"/input-filter/damping-resistance":    {"", "format"},
		"/compensator/amplifier/output-range": {"/compensator/amplifier", "amplifier"},
		"/targets/load-step/deviation":        {"/targets", "targets"},
	} {
		r := s.Place(pointer)
		assert.Equal(t, want, [2]string{r.Pointer, on(r)}, pointer)
	}
	assert.Equal(t, "Harbour beacon boost, synchronous", s.Text("/title"))
	assert.True(t, s.Bool("/rectifier/synchronous"))
	assert.False(t, s.Bool("/modulator/feed-forward"))
	assert.True(t, s.Has("/output-capacitor/count"))
	assert.Nil(t, s.Node("/nowhere"))
}
