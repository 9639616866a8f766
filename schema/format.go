package schema

import (
	"math"
	"strconv"
	"strings"
)

// prefixes for showing values, from 10⁻¹² in steps of a thousand. Micro is U+00B5.
const shownPrefixes = "p n µ m  k M G T"

// Format shows a value in its SI unit with three significant digits and an SI prefix: "4.90 kHz", "22.0 µH". Degrees are
// "56.1°", decibels "18.2 dB"; the unit "%" shows a ratio as per cent ("3.00 %"); a plain ratio ("") has no prefix; slopes
// are per microsecond from 1 V/ms up, as they are drawn on a scope. NaN is "none", an infinity "unlimited".
func Format(value float64, unit string) string {
	switch {
	case math.IsNaN(value):
		return "none"
	case math.IsInf(value, 0):
		return map[bool]string{true: "unlimited", false: "minus unlimited"}[value > 0]
	}
	switch unit {
	case "":
		return threeDigits(value)
	case "deg":
		return threeDigits(value) + "°"
	case "dB":
		return threeDigits(value) + " dB"
	case "%":
		return threeDigits(100*value) + " %"
	case "V/s":
		if math.Abs(value) >= 1e3 {
			return withPrefix(value*1e-6, "V/µs")
		}
	}
	return withPrefix(value, unit)
}

// withPrefix chooses the prefix after rounding, so that 999.9 carries into the next one.
func withPrefix(value float64, unit string) string {
	if value == 0 {
		return "0 " + unit
	}
	rounded := round3(value)
	step := int(math.Floor(math.Log10(math.Abs(rounded))/3 + 1e-12))
	names := strings.Split(shownPrefixes, " ")
	step = min(max(step, -4), len(names)-5)
	return threeDigits(rounded/math.Pow(10, float64(3*step))) + " " + names[step+4] + unit
}

// round3 rounds to three significant digits in decimal.
func round3(value float64) float64 {
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(value, 'e', 2, 64), 64)
	return rounded
}

// threeDigits writes three significant digits; plain from 10⁻⁴ to 10⁶, with an exponent outside.
func threeDigits(value float64) string {
	rounded := round3(value)
	size := math.Abs(rounded)
	switch {
	case rounded == 0:
		return "0"
	case size < 1e-4 || size >= 1e6:
		return strconv.FormatFloat(rounded, 'e', 2, 64)
	}
	decimals := 2 - int(math.Floor(math.Log10(size)+1e-12))
	return strconv.FormatFloat(rounded, 'f', max(decimals, 0), 64)
}
