package analysis

import (
	"math"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
)

// The numbers are those of IEC 60063:2015, tables 1 and 2, taken down from memory: the coarse series whole, of the fine ones
// the entries that rounding gets wrong most easily, and the ends.
func TestSeriesAreThoseOfIEC60063(t *testing.T) {
	assert.Equal(t, []float64{1, 1.5, 2.2, 3.3, 4.7, 6.8}, E6.Mantissas())
	assert.Equal(t, []float64{1, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2}, E12.Mantissas())
	assert.Equal(t, []float64{1, 1.05, 1.1, 1.15, 1.21, 1.27, 1.33, 1.4, 1.47, 1.54, 1.62, 1.69, 1.78, 1.87, 1.96, 2.05, 2.15, 2.26, 2.37, 2.49, 2.61, 2.74, 2.87,
		3.01, 3.16, 3.32, 3.48, 3.65, 3.83, 4.02, 4.22, 4.42, 4.64, 4.87, 5.11, 5.36, 5.62, 5.9, 6.19, 6.49, 6.81, 7.15, 7.5, 7.87, 8.25, 8.66, 9.09, 9.53}, E48.Mantissas())
	for _, m := range []float64{1.02, 2.67, 3.57, 4.99, 5.76, 9.76} {
		assert.Contains(t, E96.Mantissas(), m)
	}
	for _, m := range []float64{1.01, 1.04, 4.59, 9.2, 9.88} {
		assert.Contains(t, E192.Mantissas(), m)
	}
	assert.NotContains(t, E192.Mantissas(), 9.19)
	for _, s := range []Series{E6, E12, E24, E48, E96, E192} {
		m := s.Mantissas()
		assert.Len(t, m, int(s))
		assert.True(t, slices.IsSorted(m))
		assert.Len(t, slices.Compact(slices.Clone(m)), int(s), "no number twice")
	}
	for i, m := range E48.Mantissas() {
		assert.Equal(t, m, E96.Mantissas()[2*i], "every second of E96")
		assert.Equal(t, m, E192.Mantissas()[4*i], "every fourth of E192")
	}
}

func TestPreferredValuesAreFoundInEveryDecade(t *testing.T) {
	for exponent := -15; exponent <= 9; exponent++ {
		for _, m := range E96.Mantissas() {
			value := m * math.Pow(10, float64(exponent))
			below, above := Preferred(value, E96)
			assert.Equal(t, below, above, "%g is one", value)
			assert.InEpsilon(t, value, below, 1e-12)
		}
	}
	below, above := Preferred(9.9e3, E24)
	assert.Equal(t, []float64{9100, 10000}, []float64{below, above}, "across the end of a decade")
	below, above = Preferred(7.9e3, E96, E24)
	assert.Equal(t, []float64{7870, 8060}, []float64{below, above})
	below, above = Preferred(1.03e-9, E24)
	assert.InEpsilon(t, 1e-9, below, 1e-12)
	assert.InEpsilon(t, 1.1e-9, above, 1e-12)
	for _, odd := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		below, _ = Preferred(odd, E24)
		assert.True(t, math.IsNaN(below))
	}
}

func TestTheToleranceDecidesTheSeries(t *testing.T) {
	for _, tt := range []struct {
		tolerance float64
		want      []Series
	}{
		{0.001, []Series{E192, E96, E24}}, {0.005, []Series{E192, E96, E24}}, {0.0051, []Series{E96, E24}}, {1.01 - 1, []Series{E96, E24}},
		{0.02, []Series{E48, E24}}, {0.05, []Series{E24}}, {0.1, []Series{E12}}, {0.2, []Series{E6}}, {0.5, []Series{E6}},
	} {
		assert.Equal(t, tt.want, SeriesFor(tt.tolerance), "%g", tt.tolerance)
	}
}
