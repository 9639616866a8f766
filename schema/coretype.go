package schema

import (
	"math"
	"strconv"
	"strings"
)

// resolveCore gives a scalar without quotes its type by the core schema (YAML 1.2.2 section 10.3.2).
func resolveCore(n *Node) {
	n.Type = Text
	switch n.Value {
	case "", "~", "null", "Null", "NULL":
		n.Type = Null
	case "true", "True", "TRUE", "false", "False", "FALSE":
		n.Type = Bool
	case ".nan", ".NaN", ".NAN":
		n.Type, n.Number = Number, math.NaN()
	case ".inf", ".Inf", ".INF", "+.inf", "+.Inf", "+.INF":
		n.Type, n.Number = Number, math.Inf(1)
	case "-.inf", "-.Inf", "-.INF":
		n.Type, n.Number = Number, math.Inf(-1)
	default:
		if f, ok := coreNumber(n.Value); ok {
			n.Type, n.Number = Number, f
		}
	}
}

// coreNumber reads a decimal, octal (0o17) or hexadecimal (0x1F) number. One beyond the range of float64 is an infinity,
// which the check of quantities refuses.
func coreNumber(text string) (float64, bool) {
	if digits, ok := strings.CutPrefix(text, "0x"); ok {
		return inBase(digits, 16)
	}
	if digits, ok := strings.CutPrefix(text, "0o"); ok {
		return inBase(digits, 8)
	}
	if !isDecimal(text) {
		return 0, false
	}
	f, _ := strconv.ParseFloat(text, 64) // of what isDecimal takes, only the range can fail: ±Inf then
	return f, true
}

// isDecimal matches [-+]? ( \. [0-9]+ | [0-9]+ ( \. [0-9]* )? ) ( [eE] [-+]? [0-9]+ )?
func isDecimal(text string) bool {
	i := 0
	sign := func() {
		if i < len(text) && (text[i] == '-' || text[i] == '+') {
			i++
		}
	}
	digits := func() (n int) {
		for i < len(text) && text[i] >= '0' && text[i] <= '9' {
			i++
			n++
		}
		return n
	}
	sign()
	whole, fraction := digits(), 0
	if i < len(text) && text[i] == '.' {
		i++
		fraction = digits()
	}
	if whole+fraction == 0 {
		return false
	}
	if i < len(text) && (text[i] == 'e' || text[i] == 'E') {
		i++
		sign()
		if digits() == 0 {
			return false
		}
	}
	return i == len(text)
}

// inBase reads digits of base 8 or 16 of any length.
func inBase(digits string, base float64) (f float64, ok bool) {
	if digits == "" {
		return 0, false
	}
	for i := range len(digits) {
		d, err := strconv.ParseUint(digits[i:i+1], int(base), 8)
		if err != nil {
			return 0, false
		}
		f = f*base + float64(d)
	}
	return f, true
}
