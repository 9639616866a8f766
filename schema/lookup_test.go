package schema

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// visitFields walks every field of a schema with its pointer; "0" stands for any item and "NAME" for any free name.
func visitFields(f *field, pointer string, visit func(pointer string, f *field)) {
	if pointer != "" {
		visit(pointer, f)
	}
	if f.first(func(g *field) string { return g.dimension }) == "" || f.child("frequency") != nil {
		for _, key := range f.keys() {
			visitFields(f.child(key), pointer+"/"+escapePointer(key), visit)
		}
	}
	if f.open() {
		visitFields(f.child("NAME"), pointer+"/NAME", visit)
	}
	for i := range 2 {
		if c := f.child(fmt.Sprint(i)); c != nil && !f.open() {
			visitFields(c, pointer+"/"+fmt.Sprint(i), visit)
		}
	}
}

func TestEveryFieldHasATitleADescriptionAndAnExample(t *testing.T) {
	for _, k := range kinds() {
		seen := 0
		visitFields(fieldOf(k), "", func(pointer string, _ *field) {
			info, ok := LookupField(k, pointer)
			require.True(t, ok, "%s %s", k, pointer)
			seen++
			assert.NotEmpty(t, info.Title, "%s %s", k, pointer)
			assert.Greater(t, len(info.Description), 15, "%s %s: a sentence", k, pointer)
			assert.True(t, strings.HasSuffix(info.Description, "."), "%s %s: a sentence", k, pointer)
			if len(info.Names) == 0 && !strings.HasSuffix(pointer, "/NAME") && pointer != "/parts/NAME" {
				assert.NotEmpty(t, info.Examples, "%s %s", k, pointer)
			}
		})
		assert.Greater(t, seen, 15, k.String())
	}
}

// TestEveryExampleAndDefaultInTheSchemasValidates compiles each field's own schema out of the whole and tries them.
func TestEveryExampleAndDefaultInTheSchemasValidates(t *testing.T) {
	tried := 0
	for _, k := range kinds() {
		for _, name := range []string{k.String(), "common"} {
			var whole any
			require.NoError(t, json.Unmarshal(schemaText(name), &whole))
			c := newCompiler(k, schemaText)
			_, err := c.Compile(schemaID(k))
			require.NoError(t, err)
			eachSchema(whole, "", func(at string, s map[string]any) {
				values, _ := s["examples"].([]any)
				if d, ok := s["default"]; ok {
					values = append(values, d)
				}
				if len(values) == 0 {
					return
				}
				sub, err := c.Compile("urn:halfplane:schema:" + name + "#" + at)
				require.NoError(t, err, at)
				for _, v := range values {
					text, err := json.Marshal(v)
					require.NoError(t, err)
					d := json.NewDecoder(strings.NewReader(string(text)))
					d.UseNumber()
					var exact any
					require.NoError(t, d.Decode(&exact))
					assert.NoError(t, sub.Validate(exact), "%s %s: %s", name, at, text)
					tried++
				}
			})
		}
	}
	assert.Greater(t, tried, 200)
}

// eachSchema visits every schema object below a JSON value.
func eachSchema(v any, at string, visit func(string, map[string]any)) {
	switch v := v.(type) {
	case map[string]any:
		visit(at, v)
		for key, c := range v {
			if key != "examples" && key != "default" {
				eachSchema(c, at+"/"+escapePointer(key), visit)
			}
		}
	case []any:
		for i, c := range v {
			eachSchema(c, fmt.Sprintf("%s/%d", at, i), visit)
		}
	}
}

func TestLookupGivesWhatHoverAndCompletionShow(t *testing.T) {
	info, ok := LookupField(Design, "/inductor/inductance")
	require.True(t, ok)
	assert.Equal(t, Inductance, info.Dimension)
	assert.Equal(t, "Inductance", info.Title)
	assert.True(t, info.Required)
	assert.Equal(t, []string{"22 uH ± 20 %", "{value: 22 uH, tolerance: 20 %}"}, info.Examples)

	info, _ = LookupField(Design, "/load/behaviour")
	assert.Equal(t, []string{"resistive", "constant-current", "constant-power"}, info.Names)
	assert.Equal(t, "resistive", info.Default)
	assert.False(t, info.Required)

	info, _ = LookupField(Design, "/output-capacitors/3/esr")
	assert.Equal(t, Resistance, info.Dimension)
	info, _ = LookupField(Design, "/output-capacitor/bias-derating/0/1")
	assert.Equal(t, Ratio, info.Dimension)
	info, _ = LookupField(Design, "/compensator/poles/0")
	assert.Equal(t, Frequency, info.Dimension)
	info, _ = LookupField(Design, "/compensator/poles/0/quality")
	assert.Equal(t, Ratio, info.Dimension)
	info, _ = LookupField(Design, "/input-voltage/min")
	assert.Equal(t, []any{Voltage, "Lowest value"}, []any{info.Dimension, info.Title})
	info, _ = LookupField(Design, "/inductor/inductance/tolerance")
	assert.Equal(t, []any{Dimension(0), "Tolerance"}, []any{info.Dimension, info.Title})
	info, _ = LookupField(Design, "/rectifier/synchronous")
	assert.Equal(t, []string{"true", "false"}, info.Names)
	info, _ = LookupField(Design, "/modulator/duty-limit")
	assert.Equal(t, "{min: 0, max: 1}", info.Default)
	info, _ = LookupField(Design, "")
	assert.Equal(t, []string{"format", "title", "libraries", "topology"}, info.Keys[:4])
	info, _ = LookupField(Parts, "/parts/drum-22u/saturation-current")
	assert.Equal(t, Current, info.Dimension)
	info, _ = LookupField(Compensator, "/title")
	assert.True(t, info.Required)
	info, _ = LookupField(Policy, "/paths/0/thresholds/gain-margin")
	assert.Equal(t, Decibel, info.Dimension)

	for _, nowhere := range []string{"/nowhere", "/compensator/title", "/compensator/format", "inductor", "/title/0", "/inductor/inductance/0"} {
		_, ok := LookupField(Design, nowhere)
		assert.False(t, ok, nowhere)
	}
	_, ok = LookupField(Policy, "/severity/spec-shape")
	assert.False(t, ok)
}

// TestTheSchemasHaveEveryFieldOfTheFormat compares with the field table of the format, taken down by hand.
func TestTheSchemasHaveEveryFieldOfTheFormat(t *testing.T) {
	const units = `format topology title phases switching-frequency:Hz input-voltage:V output-voltage:V load/current:A load/behaviour turns/primary turns/secondary
		turns/reset inductor/inductance:H inductor/side inductor/resistance:Ω inductor/saturation-current:A second-inductor/inductance:H second-inductor/resistance:Ω
		second-inductor/saturation-current:A coupling-capacitor/capacitance:F coupling-capacitor/esr:Ω coupling-capacitor/voltage-rating:V magnetizing-inductance:H
		output-capacitor/capacitance:F output-capacitor/esr:Ω output-capacitor/count output-capacitor/bias-derating output-capacitor/voltage-rating:V output-capacitor/kind
		output-capacitor/ripple-current-rating:A output-capacitors load/capacitance:F load/esr:Ω source/resistance:Ω source/inductance:H source/current-limit:A flux-balance
		switch/on-resistance:Ω switch/voltage-rating:V switch/current-rating:A rectifier/forward-drop:V rectifier/resistance:Ω rectifier/voltage-rating:V
		rectifier/synchronous input-filter/inductance:H input-filter/resistance:Ω input-filter/capacitance:F input-filter/esr:Ω input-filter/damping-resistance:Ω
		input-filter/damping-capacitance:F input-filter/ripple-current-rating:A input-filter/voltage-rating:V modulator/scheme modulator/ramp-amplitude:V
		modulator/feed-forward modulator/current-sense-gain:Ω modulator/slope-compensation:V/s modulator/control-ratio modulator/duty-limit modulator/delay:s
		modulator/current-limit:A modulator/minimum-on-time:s modulator/minimum-off-time:s compensator/use compensator/network conduction targets/phase-margin:deg
		targets/gain-margin:dB targets/modulus-margin targets/crossover:Hz targets/output-ripple:V targets/regulation targets/load-step/from:A targets/load-step/to:A
		targets/load-step/deviation:V targets/load-step/recovery:s targets/load-step/edge:s targets/load-step/band stated/duty stated/turns-ratio stated/line-gain
		stated/effective-inductance:H stated/resonance:Hz stated/rhp-zero:Hz stated/esr-zero:Hz stated/crossover:Hz stated/control-gain:V stated/phase-margin:deg
		stated/critical-current:A measured-loop waivers/0/rule waivers/0/reason waivers/0/until waivers/0/corner libraries inductor/part
		compensator/upper-resistor:Ω compensator/integrator-capacitor:F compensator/feedback-resistor:Ω compensator/rolloff-capacitor:F compensator/lead-resistor:Ω
		compensator/lead-capacitor:F compensator/transconductance:S compensator/output-resistance:Ω compensator/lower-resistor:Ω compensator/led-resistor:Ω
		compensator/pull-up-resistor:Ω compensator/current-transfer-ratio compensator/optocoupler-pole:Hz compensator/gain compensator/integrator:Hz compensator/zeros
		compensator/poles compensator/sense-gain compensator/sampling-frequency:Hz compensator/numerator compensator/denominator compensator/delay:s
		compensator/pull-up-voltage:V compensator/led-supply compensator/led-supply-voltage:V compensator/adc-step:V compensator/pwm-step
		compensator/designed-for/inductance:H compensator/designed-for/capacitance:F compensator/designed-for/switching-frequency:Hz
		compensator/designed-for/input-voltage:V compensator/designed-for/output-voltage:V compensator/amplifier/gain-bandwidth:Hz
		compensator/amplifier/open-loop-gain compensator/amplifier/output-range:V compensator/reference-voltage:V`
	for _, entry := range strings.Fields(units) {
		pointer, unit, quantity := strings.Cut(entry, ":")
		info, ok := LookupField(Design, "/"+pointer)
		if assert.True(t, ok, pointer) && quantity {
			assert.Equal(t, unit, info.Dimension.Unit(), pointer)
		}
	}
}
