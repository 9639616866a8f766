package analysis

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

func listedPoint() *Point {
	return &Point{
		Circuit: plant.Circuit{
			Banks:    []plant.Bank{{Derating: []plant.DeratingPoint{{}, {}}}, {}},
			Coupling: plant.Bank{Derating: []plant.DeratingPoint{{}}},
		},
		Network: network.Parts{Zeros: []network.Root{{}, {}}, Poles: []network.Root{{}}, Numerator: []float64{1, 2, 3}, Denominator: []float64{1, 2}},
	}
}

func TestEveryPathSetsANumberOfItsOwn(t *testing.T) {
	p := listedPoint()
	paths := []string{
		"output-capacitors.0.capacitance", "output-capacitors.0.esr", "output-capacitors.0.count", "output-capacitors.1.capacitance",
		"output-capacitors.1.esr", "output-capacitors.0.bias-derating.1.0", "output-capacitors.0.bias-derating.1.1",
		"coupling-capacitor.bias-derating.0.1", "compensator.zeros.0.frequency", "compensator.zeros.1.quality", "compensator.poles.0.frequency",
		"compensator.numerator.2", "compensator.denominator.1",
	}
	for path := range fields {
		paths = append(paths, path)
	}
	seen := map[*float64]string{}
	for _, path := range paths {
		field := Field(p, path)
		require.NotNil(t, field, path)
		assert.Empty(t, seen[field], "%s and %s are one number", path, seen[field])
		seen[field] = path
	}
}

func TestOutputCapacitorIsTheFirstBank(t *testing.T) {
	p := listedPoint()
	assert.Same(t, Field(p, "output-capacitors.0.esr"), Field(p, "output-capacitor.esr"))
	assert.Same(t, Field(p, "output-capacitors.0.bias-derating.0.1"), Field(p, "output-capacitor.bias-derating.0.1"))
	assert.Same(t, Field(p, "compensator.zeros.1.frequency"), Field(p, "compensator.zeros.1"))
}

func TestPathsThatNameNoNumberAreNil(t *testing.T) {
	p := listedPoint()
	for _, path := range []string{
		"", ".", "inductor", "inductor.", "inductor.side", "output-capacitor.kind", "output-capacitors", "output-capacitors.2.esr",
		"output-capacitors.-1.esr", "output-capacitors.+0.esr", "output-capacitors.00.esr", "output-capacitors.0", "output-capacitors.0.",
		"output-capacitor.bias-derating.-1.0", "output-capacitor.bias-derating.9.0", "output-capacitor.bias-derating.0.2",
		"compensator.zeros.x", "compensator.zeros.0.gain", "compensator.zeros.7", "compensator.numerator.3", "compensator.numerator.0.x",
		"compensator.denominator.99999999999999999999", strings.Repeat("a.", 1000),
	} {
		assert.Nil(t, Field(p, path), "%q", path)
	}
	assert.Nil(t, Field(&Point{}, "output-capacitor.capacitance"))
}
