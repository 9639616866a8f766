package refdata

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
)

// spread is a quantity in SI units; low == high where it has no tolerance.
type spread struct{ low, nominal, high float64 }

var quantity = regexp.MustCompile(`^(-?[0-9.]*(?:e[-+]?[0-9]+)?)\s*([pnuµmkMGR]?)([0-9]*)\s*(V/us|Hz|H|F|V|A|Ω|S|s|dB|deg|)$`)

var prefixes = map[string]float64{"": 1, "R": 1, "p": 1e-12, "n": 1e-9, "u": 1e-6, "µ": 1e-6, "m": 1e-3, "k": 1e3, "M": 1e6, "G": 1e9}

// number reads "22 uH", "5k49", "60 mV/us", "90 dB" in SI units.
func number(text string) (float64, error) {
	m := quantity.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil {
		return 0, fmt.Errorf("quantity %q", text)
	}
	digits := m[1]
	if m[3] != "" {
		digits += "." + m[3] // a letter code: 5k49
	}
	value, err := strconv.ParseFloat(digits, 64)
	if err != nil {
		return 0, err
	}
	value *= prefixes[m[2]]
	switch m[4] {
	case "V/us":
		value *= 1e6
	case "dB":
		value = math.Pow(10, value/20)
	}
	return value, nil
}

// spreadOf reads any of the forms in which the golden designs write a quantity.
func spreadOf(v any) (spread, error) {
	switch v := v.(type) {
	case float64:
		return spread{v, v, v}, nil
	case string:
		value, tolerance, found := strings.Cut(v, "±")
		nominal, err := number(value)
		if err != nil || !found {
			return spread{nominal, nominal, nominal}, err
		}
		return tolerant(nominal, tolerance)
	case map[string]any:
		return longForm(v)
	}
	return spread{}, fmt.Errorf("quantity %v", v)
}

func tolerant(nominal float64, tolerance string) (spread, error) {
	per, err := strconv.ParseFloat(strings.TrimSpace(strings.TrimSuffix(strings.TrimSpace(tolerance), "%")), 64)
	if err != nil {
		return spread{}, err
	}
	return spread{nominal * (1 - per/100), nominal, nominal * (1 + per/100)}, nil
}

func longForm(v map[string]any) (spread, error) {
	if value, ok := v["value"]; ok {
		s, err := spreadOf(value)
		if err != nil {
			return s, err
		}
		text, _ := v["tolerance"].(string)
		return tolerant(s.nominal, text)
	}
	low, err := spreadOf(v["min"])
	if err != nil {
		return low, err
	}
	high, err := spreadOf(v["max"])
	if err != nil {
		return high, err
	}
	middle := spread{nominal: (low.nominal + high.nominal) / 2}
	if given, ok := v["nominal"]; ok {
		if middle, err = spreadOf(given); err != nil {
			return middle, err
		}
	}
	return spread{low.nominal, middle.nominal, high.nominal}, nil
}
