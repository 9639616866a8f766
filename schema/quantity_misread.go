package schema

import (
	"fmt"
	"regexp"
	"strings"
)

// What designers write when they mean a quantity: recognised only to say how it is written here.
var (
	decimalComma = regexp.MustCompile(`^[+\-−]?\d+,\d+`)
	groupedComma = regexp.MustCompile(`^[+\-−]?\d{1,3}(,\d{3})+(\D|$)`)
	grouped      = regexp.MustCompile(`^[+\-−]?\d{1,3}([' _]\d{3})+(\D|$)`)
	spelled      = regexp.MustCompile(`(?i)^(about|approx|approximately|ca|typ|max|min|~|≈|<|>|<=|>=|≤|≥)\.?\s*\d`)
)

// misreading says how a text that starts with no number, or has an unreadable tail, could have been meant; "" if nothing
// comes to mind.
func misreading(s string, dim Dimension) string {
	switch {
	case groupedComma.MatchString(s):
		return fmt.Sprintf("write '%s' without separators, or '%s' with a decimal point", strings.ReplaceAll(s, ",", ""), strings.Replace(s, ",", ".", 1))
	case decimalComma.MatchString(s):
		return fmt.Sprintf("the decimal sign is a point, '%s'", strings.Replace(s, ",", ".", 1))
	case grouped.MatchString(s):
		return "write the number without separators"
	case spelled.MatchString(s):
		return "write the value alone, a spread as a tolerance or a range {min, nominal, max}"
	}
	return fmt.Sprintf("write for example '%s'", dim.facts().typed)
}

// wrongUnit words a number whose unit does not fit.
func wrongUnit(s, digits, unit string, dim Dimension) *fault {
	if hint := separators(s, dim); hint != "" {
		return expected(dim, s, hint)
	}
	if likely := likelyUnits(unit, dim); len(likely) > 0 {
		for i := range likely {
			likely[i] = "'" + digits + " " + likely[i] + "'"
		}
		return expected(dim, s, "did you mean "+strings.Join(likely, " or ")+"?")
	}
	if letter := strings.IndexFunc(unit, func(r rune) bool { return r >= '0' && r <= '9' }); letter == 1 {
		return expected(dim, s, codeHint(digits, unit, dim))
	}
	if knownUnit(unit) || suppliesNothing(unit, dim) {
		return expected(dim, s, "")
	}
	return expected(dim, s, fmt.Sprintf("'%s' is no unit that fits here", shown(unit)))
}

// separators is the hint of misreading, where the text has separators; "" where not.
func separators(s string, dim Dimension) string {
	if groupedComma.MatchString(s) || decimalComma.MatchString(s) || grouped.MatchString(s) {
		return misreading(s, dim)
	}
	return ""
}

// codeHint explains a letter code whose letter does not fit: "4R7" for an inductance, "4N7" for a capacitance.
func codeHint(digits, unit string, dim Dimension) string {
	letter := unit[:1]
	if lower := strings.ToLower(letter); lower != letter {
		if _, ok := prefixPower(lower); ok {
			return fmt.Sprintf("did you mean '%s%s%s'?", digits, lower, unit[1:])
		}
	}
	if letter == "R" {
		return "the letter code R stands for ohms"
	}
	return fmt.Sprintf("'%s' is no letter code that fits here", shown(letter))
}

// suppliesNothing tells a lone prefix in a field that has no prefixed unit.
func suppliesNothing(unit string, dim Dimension) bool {
	_, prefix := prefixPower(unit)
	return prefix && !suppliesUnit(dim)
}

// afterCode says what is wrong behind a letter code; one letter may be the tolerance letter of IEC 60062.
func afterCode(unit, mantissa string) string {
	if len(unit) == 1 && strings.Contains("BCDFGJKMN", unit) {
		return "a tolerance is written as '± 5 %', not as a letter"
	}
	return fmt.Sprintf("'%s' does not belong behind %s", shown(unit), mantissa)
}
