package analysis

import (
	"math"
	"slices"
)

// Series is a row of preferred numbers for resistors and capacitors, by its numbers to the decade (IEC 60063:2015).
type Series int

// The E series that parts are sold in.
const (
	E6   Series = 6
	E12  Series = 12
	E24  Series = 24
	E48  Series = 48
	E96  Series = 96
	E192 Series = 192
)

// twentyFour is E24, which is older than the rule for the finer series and departs from it; E12 is every second and E6 every
// fourth of it (IEC 60063:2015, table 1).
var twentyFour = [...]float64{1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0, 2.2, 2.4, 2.7, 3.0, 3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1}

// SeriesFor lists the series in which parts of a tolerance (ratio) are made, the finest first: up to 0.5 % E192, E96 and E24; up to 1 % E96
// and E24; up to 2 % E48 and E24; up to 5 % E24; up to 10 % E12; wider E6 (IEC 60063:2015; that E24 values are made in the finer
// tolerances too is common practice).
func SeriesFor(tolerance float64) []Series {
	const rounding = 1 + 1e-9
	switch {
	case tolerance <= 0.005*rounding:
		return []Series{E192, E96, E24}
	case tolerance <= 0.01*rounding:
		return []Series{E96, E24}
	case tolerance <= 0.02*rounding:
		return []Series{E48, E24}
	case tolerance <= 0.05*rounding:
		return []Series{E24}
	case tolerance <= 0.1*rounding:
		return []Series{E12}
	}
	return []Series{E6}
}

// Mantissas are the numbers of one decade from 1, ascending. E48, E96 and E192 are 10^(i/N) to three digits, with 9.20 for 9.19
// (IEC 60063:2015, table 2).
func (s Series) Mantissas() []float64 {
	out := make([]float64, 0, s)
	for i := range int(s) {
		if s <= E24 {
			out = append(out, twentyFour[i*24/int(s)])
			continue
		}
		m := math.Round(100*math.Pow(10, float64(i)/float64(s))) / 100
		if m == 9.19 {
			m = 9.2
		}
		out = append(out, m)
	}
	return out
}

// Preferred finds the nearest preferred values at or below and at or above a value > 0 in any of the series; both are the value itself
// where it is one (to one part in a million, which is rounding).
func Preferred(value float64, series ...Series) (below, above float64) {
	if !(value > 0) || math.IsInf(value, 0) {
		return math.NaN(), math.NaN()
	}
	var mantissas []float64
	for _, s := range series {
		mantissas = append(mantissas, s.Mantissas()...)
	}
	slices.Sort(mantissas)
	decade := math.Floor(math.Log10(value))
	below, above = math.NaN(), math.NaN()
	for exponent := int(decade) - 1; exponent <= int(decade)+1; exponent++ {
		for _, m := range mantissas {
			candidate := scaled(m, exponent)
			switch {
			case math.Abs(candidate-value) <= 1e-6*value:
				return candidate, candidate
			case candidate < value:
				below = candidate
			case math.IsNaN(above):
				above = candidate
			}
		}
	}
	return below, above
}

// scaled is m·10^exponent for m of two decimals, exact where the result is a whole number.
func scaled(m float64, exponent int) float64 {
	whole := math.Round(100 * m)
	if exponent < 2 {
		return whole / math.Pow(10, float64(2-exponent))
	}
	return whole * math.Pow(10, float64(exponent-2))
}
