package schema

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// fault is why a text is no quantity of its field. Its text continues the field's name: " expects henries, found '22 uF'"
// without the blank, or ": a tolerance is …".
type fault struct{ text string }

func (f *fault) Error() string { return f.text }

func faultf(format string, args ...any) *fault { return &fault{fmt.Sprintf(format, args...)} }

// expected is the fault of a text that is nothing the dimension knows.
func expected(dim Dimension, found, because string) *fault {
	f := faultf("expects %s, found '%s'", dim, shown(found))
	if because != "" {
		f.text += ": " + printable(because)
	}
	return f
}

// shown shortens a text for a message and takes out what would disturb a line.
func shown(text string) string {
	text = printable(text)
	if runes := []rune(text); len(runes) > 60 {
		return string(runes[:57]) + "…"
	}
	return text
}

// printable puts a blank in place of everything that moves the cursor or is no character.
func printable(text string) string {
	return strings.Map(func(r rune) rune {
		if r < ' ' || r == 0x7f || r == utf8.RuneError || (r >= 0x80 && r < 0xa0) || r == '\u2028' || r == '\u2029' {
			return ' '
		}
		return r
	}, text)
}

// ParseQuantity reads a quantity as it stands in one scalar of a spec file: a number in the SI unit, a number with unit,
// a letter code of IEC 60062:2016 (clause 3: the letter stands in place of the decimal point), a fraction where a ratio is
// expected, each with or without a tolerance. Whether zero or a negative value makes sense is the field's affair.
// The error continues a field's name: "expects henries, found '22 uF'".
func ParseQuantity(text string, dim Dimension) (Quantity, error) {
	q, f := parseQuantity(text, dim)
	if f != nil {
		return Quantity{}, &fault{strings.TrimPrefix(f.text, ": ")}
	}
	return q, nil
}

func parseQuantity(text string, dim Dimension) (Quantity, *fault) {
	s := strings.TrimFunc(text, blank)
	if dim == Ratio { // a deviation to both sides: "± 2 %"
		s = strings.TrimLeftFunc(strings.TrimPrefix(strings.TrimPrefix(s, "±"), "+/-"), blank)
	}
	if s == "" {
		return Quantity{}, faultf("expects %s, found an empty text", dim)
	}
	if f := notFinite(s, dim); f != nil {
		return Quantity{}, f
	}
	value, rest, f := scanValue(s, dim)
	if f != nil {
		return Quantity{}, f
	}
	q := Quantity{Min: value, Nominal: value, Max: value, Unit: dim.Unit()}
	if rest = strings.TrimLeftFunc(rest, blank); rest == "" {
		return checkFinite(q, s, dim)
	}
	if !strings.ContainsRune("±+-\u2212", []rune(rest)[0]) {
		return Quantity{}, expected(dim, s, fmt.Sprintf("'%s' is not understood; a tolerance is written as '± 5 %%'", shown(rest)))
	}
	minus, plus, f := parseTolerance(rest)
	if f != nil {
		return Quantity{}, f
	}
	return checkFinite(q.spreadBy(minus, plus), s, dim)
}

// spreadBy is q with its extremes at nominal·(1 − minus) and nominal·(1 + plus), whatever the sign of the nominal.
func (q Quantity) spreadBy(minus, plus float64) Quantity {
	low, high := round15(q.Nominal*(1-minus)), round15(q.Nominal*(1+plus))
	q.Min, q.Max, q.Spread = min(low, high, q.Nominal), max(low, high, q.Nominal), true
	return q
}

// round15 takes the last bit's noise off a product of decimal numbers: 22 µH + 20 % is 26.4 µH.
func round15(v float64) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 15, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}

func checkFinite(q Quantity, text string, dim Dimension) (Quantity, *fault) {
	for _, v := range []float64{q.Min, q.Nominal, q.Max} {
		if math.IsInf(v, 0) || math.IsNaN(v) {
			return Quantity{}, expected(dim, text, "the number is too large")
		}
	}
	return q, nil
}

// notFinite recognises the ways to write no number at all.
func notFinite(s string, dim Dimension) *fault {
	switch strings.ToLower(strings.TrimLeft(s, "+-.")) {
	case "nan":
		return expected(dim, s, "that is not a number")
	case "inf", "infinity", "∞":
		return expected(dim, s, "the value must be finite")
	}
	return nil
}

// blank tells white space of every width, the no-break spaces between a number and its unit included.
func blank(r rune) bool {
	switch r {
	case ' ', '\t', '\n', '\r', '\u00a0', '\u2009', '\u202f', '\u2007':
		return true
	}
	return false
}

// scanValue reads number and unit at the start of s and returns the SI value and what stands behind.
func scanValue(s string, dim Dimension) (value float64, rest string, f *fault) {
	sign, body := cutSign(s)
	digits, tail := cutNumber(body)
	if mantissa, power, behind, ok := letterCode(digits, tail, dim); ok {
		return letterValue(s, sign, mantissa, power, behind, dim)
	}
	if digits == "" {
		return 0, "", expected(dim, s, misreading(s, dim))
	}
	if after, ok := strings.CutPrefix(strings.TrimLeftFunc(tail, blank), "/"); ok && (dim == Ratio || dim == Gain) {
		return fraction(s, scaled{}.apply(sign, digits), after, dim)
	}
	unit, rest := cutUnit(strings.TrimLeftFunc(tail, blank))
	scale, ok := findUnit(unit, dim)
	if !ok {
		return 0, "", wrongUnit(s, digits, unit, dim)
	}
	return scale.apply(sign, digits), rest, nil
}

// letterValue is the value of a letter code, behind which only the plain unit may be repeated ("4u7F").
func letterValue(s string, sign float64, mantissa string, power int, behind string, dim Dimension) (float64, string, *fault) {
	unit, rest := cutUnit(strings.TrimLeftFunc(behind, blank))
	if unit != "" && !plainUnit(unit, dim) {
		return 0, "", expected(dim, s, afterCode(unit, mantissa))
	}
	return scaled{power: power}.apply(sign, mantissa), rest, nil
}

// plainUnit tells whether unit is one of the dimension's units without a prefix.
func plainUnit(unit string, dim Dimension) bool {
	for _, base := range dim.facts().bases {
		if unit == base {
			return true
		}
	}
	return false
}

// fraction reads the denominator of "1/4".
func fraction(s string, numerator float64, after string, dim Dimension) (float64, string, *fault) {
	digits, rest := cutNumber(strings.TrimLeftFunc(after, blank))
	denominator, err := strconv.ParseFloat(digits, 64)
	if err != nil || denominator == 0 {
		return 0, "", expected(dim, s, "a fraction is written as 1/4")
	}
	return numerator / denominator, rest, nil
}

// cutSign takes a sign off; U+2212 is the minus of the printing trade.
func cutSign(s string) (float64, string) {
	for _, minus := range []string{"-", "\u2212"} {
		if after, ok := strings.CutPrefix(s, minus); ok {
			return -1, after
		}
	}
	return 1, strings.TrimPrefix(s, "+")
}

// cutNumber takes a decimal number off the start of s: digits, a point, an exponent. An "e" without digits behind is not
// an exponent.
func cutNumber(s string) (number, rest string) {
	i := digitsIn(s, 0)
	if i < len(s) && s[i] == '.' {
		if j := digitsIn(s, i+1); j > 1 {
			i = j
		}
	}
	if i > 0 && i < len(s) && (s[i] == 'e' || s[i] == 'E') {
		j := i + 1
		if j < len(s) && (s[j] == '+' || s[j] == '-') {
			j++
		}
		if k := digitsIn(s, j); k > j {
			i = k
		}
	}
	return s[:i], s[i:]
}

func digitsIn(s string, from int) int {
	for from < len(s) && s[from] >= '0' && s[from] <= '9' {
		from++
	}
	return from
}

// cutUnit takes the unit off: everything up to a blank, a sign or a tolerance mark.
func cutUnit(s string) (unit, rest string) {
	end := strings.IndexFunc(s, func(r rune) bool {
		return blank(r) || r == '±' || r == '+' || r == '-' || r == '\u2212'
	})
	if end < 0 {
		return s, ""
	}
	return s[:end], s[end:]
}

// letterCode reads the code of IEC 60062 with the letter in place of the decimal point: "4k7", "0R022", "p47". The letter
// is an SI prefix or, meaning 1, the unit's own (R for ohms, F for farads); L is milli for ohms.
func letterCode(digits, tail string, dim Dimension) (mantissa string, power int, rest string, ok bool) {
	if !suppliesUnit(dim) || strings.ContainsAny(digits, ".eE") || tail == "" {
		return "", 0, "", false
	}
	_, size := utf8.DecodeRuneInString(tail)
	letter, after := tail[:size], tail[size:]
	end := digitsIn(after, 0)
	if end == 0 {
		return "", 0, "", false
	}
	power, ok = codeLetter(letter, dim)
	if digits == "" {
		digits = "0"
	}
	return digits + "." + after[:end], power, after[end:], ok
}

func codeLetter(letter string, dim Dimension) (int, bool) {
	ohms := dim == Resistance || dim == Transresistance
	switch {
	case letter == "R":
		return 0, ohms
	case letter == "L":
		return -3, ohms
	case letter == "F":
		return 0, dim == Capacitance
	}
	return prefixPower(letter)
}
