package workspace

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// compared compares a file with itself after some replacements.
func compared(t *testing.T, name string, changes ...string) Comparison {
	t.Helper()
	text, err := os.ReadFile("../testdata/rules/" + name + ".converter.yaml")
	require.NoError(t, err)
	for i := 0; i < len(changes); i += 2 {
		require.Contains(t, string(text), changes[i])
	}
	folder := t.TempDir()
	before, after := filepath.Join(folder, "old.converter.yaml"), filepath.Join(folder, "new.converter.yaml")
	require.NoError(t, os.WriteFile(before, text, 0o666))
	require.NoError(t, os.WriteFile(after, []byte(strings.NewReplacer(changes...).Replace(string(text))), 0o666))
	pairs, err := Pairs(context.Background(), before, after, nil, "")
	require.NoError(t, err)
	require.Len(t, pairs, 1)
	return Compare(context.Background(), pairs[0], Options{Depth: analysis.Quick})
}

func figureOf(t *testing.T, c Comparison, key string) FigureChange {
	t.Helper()
	for _, f := range c.Figures {
		if f.Figure == key {
			return f
		}
	}
	t.Fatal(key)
	return FigureChange{}
}

func TestTheChangedPartThatDidItIsNamed(t *testing.T) {
	for _, tt := range []struct{ name, from, to, figure, part string }{
		{"internal/healthy-boost", "feedback-resistor: 7k87", "feedback-resistor: 15k", "phase-margin", "feedback-resistor"},
		{"internal/healthy-boost", "inductance: 22 uH", "inductance: 47 uH", "crossover-over-rhp-zero", "inductor"},
		{"internal/healthy-boost", "ramp-amplitude: 1.8 V", "ramp-amplitude: 0.9 V", "gain-margin", "ramp-amplitude"},
		{"internal/healthy-flyback", "optocoupler-pole: 25 kHz", "optocoupler-pole: 4 kHz", "phase-margin", "optocoupler-pole"},
		{"internal/healthy-flyback", "max: 1.4}", "max: 4.5}", "crossover", "current-transfer-ratio"},
		{"internal/healthy-buck", "capacitance: 330 uF", "capacitance: 100 uF", "crossover", "output-capacitor"},
	} {
		// Beside the change that does it stand two that hardly do anything.
		c := compared(t, tt.name, tt.from, tt.to, "title: ", "title: New ", "voltage-rating: ", "voltage-rating: 1")
		f := figureOf(t, c, tt.figure)
		require.True(t, f.Moved(), tt.to)
		require.NotEmpty(t, f.Shares, tt.to)
		assert.Equal(t, tt.part, c.Parts[f.Shares[0].Part].Name, tt.to)
		total := f.After.Value - f.Before.Value
		assert.InDelta(t, 1, f.Shares[0].Effect/total, 0.1, "%s explains all of it", tt.part)
	}
}

func TestTwoChangesShareWhatTheyDoTogether(t *testing.T) {
	c := compared(t, "internal/healthy-boost", "feedback-resistor: 7k87", "feedback-resistor: 12k", "capacitance: 220 uF", "capacitance: 150 uF")
	f := figureOf(t, c, "crossover")
	require.Len(t, f.Shares, 2)
	sum := f.Shares[0].Effect + f.Shares[1].Effect
	assert.InEpsilon(t, f.After.Value-f.Before.Value, sum, 0.02, "with two parts the means add up")
	assert.ElementsMatch(t, []string{"feedback-resistor", "output-capacitor"}, []string{c.Parts[f.Shares[0].Part].Name, c.Parts[f.Shares[1].Part].Name})
}

func TestWhatIsWrittenOtherwiseIsNoChange(t *testing.T) {
	c := compared(t, "internal/healthy-boost", "22 uH ± 20 %", "{value: 0.022 mH, tolerance: 0.2}", "title: ", "title: The ")
	assert.Equal(t, Changed, c.Change)
	assert.Empty(t, c.Parts)
	for _, f := range c.Figures {
		assert.False(t, f.Moved(), f.Figure)
	}
	assert.False(t, c.Fallen())
	assert.Equal(t, Unchanged, compared(t, "internal/healthy-boost").Change)
}

func TestAMarginFallsThroughItsTargetOrThroughARaisedOne(t *testing.T) {
	c := compared(t, "internal/healthy-boost", "feedback-resistor: 7k87", "feedback-resistor: 15k")
	assert.Equal(t, Fell, figureOf(t, c, "phase-margin").Verdict)
	assert.True(t, c.Fallen())
	assert.NotEmpty(t, c.Appeared)
	back := compared(t, "internal/healthy-boost", "phase-margin: 45 deg", "phase-margin: 50 deg")
	f := figureOf(t, back, "phase-margin")
	assert.Equal(t, Fell, f.Verdict, "the target was raised above what there is")
	assert.False(t, f.Moved())
	assert.Empty(t, back.Parts)
}

func TestAChangeOfTopologyIsOneChange(t *testing.T) {
	c := compared(t, "internal/healthy-buck", "topology: buck", "topology: buck-boost", "output-voltage: 3.3 V", "output-voltage: 3.4 V")
	require.Equal(t, Changed, c.Change)
	require.Len(t, c.Parts, 1)
	assert.Equal(t, "topology", c.Parts[0].Name)
}

func TestDifferencesAndMixturesOfSpecs(t *testing.T) {
	read := func(changes ...string) *schema.Spec {
		text, err := os.ReadFile("../testdata/rules/internal/healthy-boost.converter.yaml")
		require.NoError(t, err)
		doc := schema.Read("a.converter.yaml", []byte(strings.NewReplacer(changes...).Replace(string(text))), 0)
		s, problems := schema.Validate(doc, nil)
		require.Empty(t, problems)
		return s
	}
	old := read()
	now := read("  rolloff-capacitor: 1n ± 5 %\n", "", "inductance: 22 uH", "inductance: 33 uH", "count: 2", "kind: polymer, count: 2")
	var pointers []string
	for _, d := range schema.Differences(old, now) {
		pointers = append(pointers, d.Pointer)
	}
	assert.ElementsMatch(t, []string{"/inductor/inductance", "/output-capacitor/kind", "/compensator/rolloff-capacitor"}, pointers)
	mixed := old.With(now, "/inductor", "/compensator/rolloff-capacitor")
	q, _ := mixed.Quantity("/inductor/inductance")
	assert.InEpsilon(t, 33e-6, q.Nominal, 1e-12)
	assert.InEpsilon(t, 1.2*33e-6, q.Max, 1e-9)
	assert.False(t, mixed.Has("/compensator/rolloff-capacitor"))
	assert.False(t, mixed.Has("/output-capacitor/kind"))
	assert.True(t, old.Has("/compensator/rolloff-capacitor"), "the old one stays as it is")
	assert.True(t, now.With(old, "/compensator/rolloff-capacitor").Has("/compensator/rolloff-capacitor"))
	back := now.With(old, pointers...).Design()
	assert.Equal(t, old.Design().Nominal, back.Nominal)
	assert.ElementsMatch(t, old.Design().Axes, back.Axes)
}

func TestAFigureThatCeasedToExistMoved(t *testing.T) {
	b := func(v float64) *rules.Bound { return &rules.Bound{Value: v, Limit: math.NaN()} }
	assert.True(t, FigureChange{Before: b(3), After: b(math.NaN())}.Moved())
	assert.False(t, FigureChange{Before: b(math.NaN()), After: b(math.NaN())}.Moved())
	assert.False(t, FigureChange{After: b(3)}.Moved())
}
