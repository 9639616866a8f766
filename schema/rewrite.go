package schema

import (
	"math"
	"regexp"
	"strconv"
	"strings"
)

// RewriteNominal gives the edit that puts another nominal value (SI) in the place of a quantity's, written in the manner of the old one: a letter code stays a letter code, a prefix
// stays where it fits, the tolerance and the quotes are not touched. at is the scalar that is edited. ok is false for a range, whose ends would have to move too, and for a
// value that was brought in from another file.
func RewriteNominal(q Quantity, value float64) (at *Node, start, end int, text string, ok bool) {
	at = q.Node
	if at != nil && at.Kind == Mapping {
		if at.Get("min") != nil || at.Get("max") != nil {
			return nil, 0, 0, "", false
		}
		at = at.Get("value")
	}
	if at == nil || at.Kind != Scalar || at.Via != nil || at.Alias != nil || at.Doc == nil {
		return nil, 0, 0, "", false
	}
	source := string(at.Doc.Text[at.Start:at.End])
	from := 0
	if len(source) > 1 && (source[0] == '"' || source[0] == '\'') {
		from, source = 1, source[1:len(source)-1]
	}
	nominal := nominalPart(source)
	lead := len(nominal) - len(strings.TrimLeft(nominal, " "))
	nominal = strings.TrimSpace(nominal)
	text, ok = writtenLike(nominal, q.Nominal, value, q.Unit)
	start = at.Start + from + lead
	return at, start, start + len(nominal), text, ok
}

// nominalPart is what stands before the tolerance.
func nominalPart(source string) string {
	for i, r := range source {
		rest := source[i:]
		if r == '±' || i > 0 && (strings.HasPrefix(rest, "+/") || strings.HasPrefix(rest, "+-")) || i > 0 && source[i-1] == ' ' && (r == '+' || r == '-' || r == '−') {
			return source[:i]
		}
	}
	return source
}

var (
	lettered = regexp.MustCompile(`^(\d*)([RrKkMmUuNnPpGLµμ])(\d*)$`)
	withUnit = regexp.MustCompile(`^([+-]?[\d.]+(?:[eE][+-]?\d+)?)(\s*)(.*)$`)
)

// writtenLike writes a value in the manner of a text that stands for old.
func writtenLike(text string, old, value float64, unit string) (string, bool) {
	if m := lettered.FindStringSubmatch(text); m != nil {
		return inLetters(value, m[2], unit)
	}
	if _, err := strconv.ParseFloat(text, 64); err == nil {
		if strings.ContainsAny(text, "eE") {
			return strings.Replace(strconv.FormatFloat(rounded(value), 'e', -1, 64), "e-0", "e-", 1), true
		}
		return strconv.FormatFloat(rounded(value), 'f', -1, 64), true
	}
	m := withUnit.FindStringSubmatch(text)
	if m == nil {
		return "", false
	}
	number, err := strconv.ParseFloat(m[1], 64)
	if err != nil || number == 0 || old == 0 {
		return "", false
	}
	scaled := value / (old / number)
	behind := m[3]
	for scaled >= 10000 || scaled < 0.01 { // another prefix reads better
		next, step := shifted(behind, scaled >= 10000)
		if next == behind {
			break
		}
		behind, scaled = next, scaled*step
	}
	return strconv.FormatFloat(rounded(scaled), 'f', -1, 64) + m[2] + behind, true
}

// shifted gives a unit with the next larger or smaller prefix and what the number is multiplied by; the same unit where there is none.
func shifted(unit string, larger bool) (string, float64) {
	prefixes := []string{"p", "n", "u", "m", "", "k", "M", "G"}
	bare, at := unit, 4
	for i, p := range prefixes {
		for _, spelt := range map[string][]string{"u": {"u", "µ", "μ"}}[p] {
			if rest, cut := strings.CutPrefix(unit, spelt); cut && isUnit(rest) {
				bare, at = rest, i
			}
		}
		if rest, cut := strings.CutPrefix(unit, p); cut && p != "" && isUnit(rest) {
			bare, at = rest, i
		}
	}
	if !isUnit(bare) {
		return unit, 1
	}
	if larger && at+1 < len(prefixes) {
		return prefixes[at+1] + bare, 1e-3
	}
	if !larger && at > 0 {
		return prefixes[at-1] + bare, 1e3
	}
	return unit, 1
}

func isUnit(s string) bool {
	switch s {
	case "H", "F", "\u03a9", "\u2126", "ohm", "V", "A", "Hz", "S", "s":
		return true
	}
	return false
}

// inLetters writes a value as IEC 60062 does, the letter in the place of the point. A capital K and the author's micro stay.
func inLetters(value float64, letter, unit string) (string, bool) {
	letters := []struct {
		letter string
		scale  float64
	}{{"p", 1e-12}, {"n", 1e-9}, {"u", 1e-6}, {"m", 1e-3}, {"R", 1}, {"k", 1e3}, {"M", 1e6}, {"G", 1e9}}
	value = rounded(value)
	for i := len(letters) - 1; i >= 0; i-- {
		l := letters[i]
		if value < l.scale*(1-1e-9) {
			continue
		}
		if l.letter == "R" && unit != "Ω" {
			return "", false
		}
		digits := strconv.FormatFloat(rounded(value/l.scale), 'f', -1, 64)
		whole, part, _ := strings.Cut(digits, ".")
		written := l.letter
		switch {
		case l.letter == "k" && letter == "K":
			written = "K"
		case l.letter == "u" && (letter == "µ" || letter == "μ"):
			written = letter
		}
		return whole + written + part, true
	}
	return "", false
}

// rounded takes a value to six significant digits, which takes out what computing leaves.
func rounded(v float64) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', 5, 64), 64)
	if err != nil || math.IsNaN(r) {
		return v
	}
	return r
}
