package schema

import (
	"math"
	"strings"
	"unicode/utf8"
)

// scaled is what a unit makes of the number before it: number·10^0 × factor, or 10^(number/20) for decibels of a ratio.
type scaled struct {
	factor float64
	power  bool // decibels of a plain ratio
}

// apply turns the written number into the SI value.
func (s scaled) apply(number float64) float64 {
	if s.power {
		return math.Pow(10, number/20)
	}
	return number * s.factor
}

// findUnit reads a unit in the dimension: a prefix with a unit ("mΩ"), a unit ("dB"), a prefix alone ("k", the field
// supplies the unit) or nothing.
func findUnit(unit string, dim Dimension) (scaled, bool) {
	if unit == "" {
		return scaled{factor: 1}, true
	}
	f := dim.facts()
	for _, exact := range f.exact {
		if unit == exact {
			return exactUnit(unit, dim), true
		}
	}
	if factor, ok := prefixFactor(unit); ok && suppliesUnit(dim) {
		return scaled{factor: factor}, true
	}
	for _, base := range f.bases {
		if factor, ok := prefixed(unit, base); ok {
			return scaled{factor: factor}, true
		}
	}
	return scaled{}, false
}

// exactUnit is the meaning of a unit that takes no prefix.
func exactUnit(unit string, dim Dimension) scaled {
	switch {
	case unit == "%":
		return scaled{factor: 0.01}
	case unit == "dB" && dim == Gain:
		return scaled{power: true}
	}
	return scaled{factor: 1}
}

// suppliesUnit tells whether a prefix may stand alone in a field of the dimension, as in "100n".
func suppliesUnit(dim Dimension) bool {
	switch dim {
	case Angle, Decibel, Count:
		return false
	}
	return true
}

// prefixed reads unit as prefix + base; of a quotient ("V/s") both sides may have a prefix.
func prefixed(unit, base string) (float64, bool) {
	over, under, quotient := strings.Cut(base, "/")
	if !quotient {
		head, ok := strings.CutSuffix(unit, base)
		if !ok {
			return 0, false
		}
		return prefixFactor(head)
	}
	above, below, ok := strings.Cut(unit, "/")
	if !ok {
		return 0, false
	}
	a, aok := prefixed(above, over)
	b, bok := prefixed(below, under)
	if !aok || !bok {
		return 0, false
	}
	return a / b, true
}

// knownUnit tells whether any dimension has the unit.
func knownUnit(unit string) bool {
	for _, d := range Dimensions() {
		f := d.facts()
		for _, exact := range f.exact {
			if unit == exact {
				return true
			}
		}
		for _, base := range f.bases {
			if _, ok := prefixed(unit, base); ok {
				return true
			}
		}
	}
	return unit == "rad"
}

// likelyUnits are the units of the dimension that differ from the written one by case only: "uh" for "uH". Two are named
// where both make sense ("mhz").
func likelyUnits(unit string, dim Dimension) []string {
	var found []string
	for _, prefix := range []string{"", "p", "n", "u", "m", "k", "M", "G", "T"} {
		for _, base := range dim.facts().bases {
			if full := prefix + base; strings.EqualFold(full, unit) && full != unit {
				found = append(found, full)
			}
		}
		if suppliesUnit(dim) && prefix != "" && utf8.RuneCountInString(unit) == 1 && strings.EqualFold(prefix, unit) && prefix != unit {
			found = append(found, prefix)
		}
	}
	for _, exact := range dim.facts().exact {
		if strings.EqualFold(exact, unit) && exact != unit {
			found = append(found, exact)
		}
	}
	return found
}
