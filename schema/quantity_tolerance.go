package schema

import (
	"strconv"
	"strings"
)

const toleranceIs = "a tolerance is a percentage or a ratio below 1"

// parseTolerance reads what stands behind a value, or in the field "tolerance": "± 20 %", "+/- 0.2", "+30/-10 %",
// "-10 % +30 %", a bare "20 %". Both parts come back as positive ratios.
func parseTolerance(text string) (minus, plus float64, f *fault) {
	s := strings.TrimFunc(text, blank)
	for _, mark := range []string{"±", "+/-", "+/\u2212", "+-", "+\u2212"} {
		if after, ok := strings.CutPrefix(s, mark); ok {
			t, f := symmetric(after, text)
			return t, t, f
		}
	}
	if strings.IndexAny(s, "+-\u2212") != 0 {
		t, f := symmetric(s, text)
		return t, t, f
	}
	return asymmetric(s, text)
}

// symmetric reads "20 %" or "0.2".
func symmetric(s, whole string) (float64, *fault) {
	t, percent, rest, ok := toleranceNumber(s)
	if !ok || strings.TrimFunc(rest, blank) != "" {
		return 0, badTolerance(whole)
	}
	if !percent && t >= 1 {
		return 0, faultf(": %s, found '%s': did you mean '%s %%'?", toleranceIs, shown(whole), strings.TrimFunc(s, blank))
	}
	if percent {
		t /= 100
	}
	if t >= 1 {
		return 0, faultf(": the tolerance '%s' takes the value down to zero or below", shown(strings.TrimFunc(whole, blank)))
	}
	return t, nil
}

// asymmetric reads "+30/-10 %": a percent sign on the last part counts for both.
func asymmetric(s, whole string) (minus, plus float64, f *fault) {
	firstSign, body := cutSign(s)
	first, firstPercent, rest, ok := toleranceNumber(body)
	if !ok {
		return 0, 0, badTolerance(whole)
	}
	rest = strings.TrimLeftFunc(strings.TrimPrefix(strings.TrimLeftFunc(rest, blank), "/"), blank)
	if rest == "" {
		return 0, 0, faultf(": the tolerance '%s' needs both sides, as in '+30/-10 %%'", shown(strings.TrimFunc(whole, blank)))
	}
	secondSign, body := cutSign(rest)
	second, percent, rest, ok := toleranceNumber(body)
	if !ok || firstSign == secondSign || body == rest || strings.TrimFunc(rest, blank) != "" || (firstPercent && !percent) {
		return 0, 0, badTolerance(whole)
	}
	if !percent && (first >= 1 || second >= 1) {
		return 0, 0, faultf(": %s, found '%s': is the '%%' missing?", toleranceIs, shown(strings.TrimFunc(whole, blank)))
	}
	if percent {
		first, second = first/100, second/100
	}
	if firstSign < 0 {
		first, second = second, first
	}
	if second >= 1 {
		return 0, 0, faultf(": the tolerance '%s' takes the value down to zero or below", shown(strings.TrimFunc(whole, blank)))
	}
	return second, first, nil
}

// toleranceNumber reads an unsigned number and the percent sign that may follow it.
func toleranceNumber(s string) (value float64, percent bool, rest string, ok bool) {
	s = strings.TrimLeftFunc(s, blank)
	digits, rest := cutNumber(s)
	value, err := strconv.ParseFloat(digits, 64)
	if err != nil {
		return 0, false, s, false
	}
	if after, found := strings.CutPrefix(strings.TrimLeftFunc(rest, blank), "%"); found {
		return value, true, after, true
	}
	return value, false, rest, true
}

func badTolerance(whole string) *fault {
	return faultf(": %s, as in '± 5 %%' or '+30/-10 %%', found '%s'", toleranceIs, shown(strings.TrimFunc(whole, blank)))
}
