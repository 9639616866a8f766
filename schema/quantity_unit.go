package schema

import (
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// scaled is what a unit makes of the number before it: number·10^power, or 10^(number/20) for decibels of a ratio.
type scaled struct {
	power    int
	decibels bool
}

// apply turns the written number into the SI value. The power of ten goes into the number's own exponent, so that
// "220 uF" is the float nearest to 0.00022. A number out of range gives ±Inf.
func (s scaled) apply(sign float64, digits string) float64 {
	mantissa, exponent, _ := strings.Cut(strings.ToLower(digits), "e")
	power, err := strconv.Atoi(exponent)
	switch {
	case exponent == "":
	case err != nil && exponent[0] == '-', power < -1000:
		power = -1000
	case err != nil, power > 1000:
		power = 1000
	}
	number, _ := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(power+s.power), 64)
	if s.decibels {
		return math.Pow(10, sign*number/20)
	}
	return sign * number
}

// findUnit reads a unit in the dimension: a prefix with a unit ("mΩ"), a unit ("dB"), a prefix alone ("k", the field
// supplies the unit) or nothing.
func findUnit(unit string, dim Dimension) (scaled, bool) {
	if unit == "" {
		return scaled{}, true
	}
	f := dim.facts()
	for _, exact := range f.exact {
		if unit == exact {
			return exactUnit(unit, dim), true
		}
	}
	if power, ok := prefixPower(unit); ok && suppliesUnit(dim) {
		return scaled{power: power}, true
	}
	for _, base := range f.bases {
		if power, ok := prefixed(unit, base); ok {
			return scaled{power: power}, true
		}
	}
	return scaled{}, false
}

// exactUnit is the meaning of a unit that takes no prefix.
func exactUnit(unit string, dim Dimension) scaled {
	switch {
	case unit == "%":
		return scaled{power: -2}
	case unit == "dB" && dim == Gain:
		return scaled{decibels: true}
	}
	return scaled{}
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
func prefixed(unit, base string) (int, bool) {
	over, under, quotient := strings.Cut(base, "/")
	if !quotient {
		head, ok := strings.CutSuffix(unit, base)
		if !ok {
			return 0, false
		}
		return prefixPower(head)
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
	return a - b, true
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
