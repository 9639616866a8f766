package schema

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestAValueIsRewrittenInTheMannerOfTheOldOne(t *testing.T) {
	for _, tt := range []struct {
		key, old string
		value    float64
		want     string
	}{
		{"feedback-resistor", "7k87 ± 1 %", 15e3, "15k ± 1 %"},
		{"feedback-resistor", "7K87 ± 1 %", 4750, "4K75 ± 1 %"},
		{"feedback-resistor", "7k87", 887, "887R"},
		{"feedback-resistor", "470R", 1.2e6, "1M2"},
		{"feedback-resistor", "R47", 0.33, "330m"},
		{"feedback-resistor", "7.87 kΩ +/- 1%", 4750, "4.75 kΩ +/- 1%"},
		{"feedback-resistor", "7.87kΩ", 1.2e9, "1200MΩ"},
		{"feedback-resistor", "7870", 4750, "4750"},
		{"feedback-resistor", "\"7k87 ± 1 %\"", 4750, "\"4k75 ± 1 %\""},
		{"feedback-resistor", "{value: 7k87, tolerance: 1 %}", 4750, "{value: 4k75, tolerance: 1 %}"},
		{"integrator-capacitor", "39n ± 5 %", 3.9e-9, "3n9 ± 5 %"},
		{"integrator-capacitor", "39 nF +10/-20 %", 100e-9, "100 nF +10/-20 %"},
		{"integrator-capacitor", "39 nF", 47e-6, "47 uF"},
		{"integrator-capacitor", "4µ7", 2.2e-6, "2µ2"},
		{"integrator-capacitor", "39e-9", 4.7e-8, "4.7e-8"},
		{"integrator-capacitor", "0.000000039", 4.7e-8, "0.000000047"},
	} {
		text := "compensator:\n  network: type-2\n  upper-resistor: 10k\n  " + tt.key + ": " + tt.old + "   # as built\n"
		doc := Read("a.converter.yaml", []byte(text), 0)
		require.Empty(t, doc.Problems)
		node := doc.Find("/compensator/" + tt.key)
		f := fieldOf(Design).at("/compensator/" + tt.key)
		q, ok := quantityOf(node, f)
		require.True(t, ok, tt.old)
		q.Node = node
		_, start, end, written, ok := RewriteNominal(q, tt.value)
		require.True(t, ok, tt.old)
		out := text[:start] + written + text[end:]
		assert.Equal(t, strings.Replace(text, tt.old, tt.want, 1), out)
		again, ok := quantityOf(Read("a.converter.yaml", []byte(out), 0).Find("/compensator/"+tt.key), f)
		require.True(t, ok, out)
		assert.InEpsilon(t, tt.value, again.Nominal, 1e-6, out)
	}
}

func TestARangeIsNotRewritten(t *testing.T) {
	doc := Read("a.converter.yaml", []byte("load: {current: {min: 1 A, nominal: 2 A, max: 3 A}}\n"), 0)
	q, ok := quantityOf(doc.Find("/load/current"), fieldOf(Design).at("/load/current"))
	require.True(t, ok)
	_, _, _, _, ok = RewriteNominal(q, 2.5)
	assert.False(t, ok)
}
