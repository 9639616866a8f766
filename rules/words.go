package rules

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"halfplane/analysis"
	"halfplane/schema"
)

// number prints a figure with its unit to three significant digits; a plain ratio without any.
func number(value float64, unit string) string {
	switch {
	case math.IsNaN(value):
		return "none"
	case unit == "%":
		return percent(value)
	case (unit == "deg" || unit == "dB") && math.Abs(value) < 1e-3:
		value = 0 // what a search leaves of a boundary
	}
	return minus(schema.Format(value, unit))
}

// percent prints a ratio per cent to three significant digits.
func percent(ratio float64) string {
	return minus(schema.Format(ratio, "%"))
}

// minus writes the sign of a negative number as prose does, U+2212.
func minus(printed string) string {
	if after, negative := strings.CutPrefix(printed, "-"); negative {
		return "−" + after
	}
	return printed
}

// bracketed is a number that follows a sign or a dot: a negative one stands in brackets.
func bracketed(value float64, unit string) string {
	if value < 0 {
		return "(" + number(value, unit) + ")"
	}
	return number(value, unit)
}

// finer prints a figure with as many more digits as it takes to tell it from a limit that reads the same to three.
func finer(value, limit float64, unit string) string {
	three := number(value, unit)
	if value == limit || three != number(limit, unit) {
		return three
	}
	end := strings.LastIndexAny(three, "0123456789") + 1
	shown, err := strconv.ParseFloat(strings.Replace(three[:end], "−", "-", 1), 64)
	if err != nil || shown == 0 {
		return three
	}
	scale := math.Pow(10, math.Round(math.Log10(math.Abs(shown/value))))
	_, decimals, _ := strings.Cut(three[:end], ".")
	for more := 1; more <= 6; more++ {
		print := func(v float64) string { return strconv.FormatFloat(v*scale, 'f', len(decimals)+more, 64) }
		if print(value) != print(limit) {
			return minus(print(value)) + three[end:]
		}
	}
	return three
}

// fraction prints a limit that is one part of something as 1/5, anything else as a number.
func fraction(value float64) string {
	if value > 0 && value < 1 {
		whole := math.Round(1 / value)
		if whole <= 100 && math.Abs(1/value-whole) < 1e-9*whole {
			return fmt.Sprintf("1/%.0f", whole)
		}
	}
	return short(value)
}

// part prints what is left of something: 0.763 of it, or 1/18300 of it where that reads better.
func part(value float64) string {
	if value < 0.1 {
		return "1/" + short(1/value)
	}
	return short(value)
}

// short prints a plain number as a person would: three significant digits, no trailing zeros.
func short(value float64) string {
	printed := number(value, "")
	if !strings.Contains(printed, ".") || strings.Contains(printed, "e") {
		return printed
	}
	return strings.TrimRight(strings.TrimRight(printed, "0"), ".")
}

// asNumber wraps a figure for a finding; a figure that does not exist is left out.
func asNumber(value float64, unit string) *Number {
	if math.IsNaN(value) || math.IsInf(value, 0) {
		return nil
	}
	if unit == "%" {
		unit = ""
	}
	return &Number{Value: value, Unit: unit}
}

// lastKey is the last step of a JSON pointer that is a key, not a list index.
func lastKey(pointer string) string {
	steps := strings.Split(pointer, "/")
	for i := len(steps) - 1; i > 0; i-- {
		if _, err := strconv.Atoi(steps[i]); err != nil {
			return steps[i]
		}
	}
	return ""
}

// spaced turns a key into words.
func spaced(key string) string {
	switch key {
	case "esr":
		return "ESR"
	case "esr-zero":
		return "ESR zero"
	case "rhp-zero":
		return "right-half-plane zero"
	case "led-resistor":
		return "LED resistor"
	case "pull-up-resistor":
		return "pull-up resistor"
	case "gain-bandwidth":
		return "gain-bandwidth"
	case "open-loop-gain":
		return "open-loop gain"
	case "on-resistance":
		return "on-resistance"
	}
	return strings.ReplaceAll(key, "-", " ")
}

// placeWords names the value at a JSON pointer so that it cannot be taken for another: "load current", "output capacitor's
// ESR", "input filter's damping resistance".
func placeWords(pointer string) string {
	steps := strings.Split(strings.TrimPrefix(pointer, "/"), "/")
	last := spaced(steps[len(steps)-1])
	switch owner := steps[0]; {
	case pointer == "/load/current":
		return "load current"
	case pointer == "/inductor/inductance":
		return last
	case owner == "compensator" && len(steps) == 3 && steps[1] == "amplifier":
		return "amplifier's " + last
	case owner == "modulator" && steps[len(steps)-1] == "min", owner == "modulator" && steps[len(steps)-1] == "max":
		return map[string]string{"min": "lower ", "max": "upper "}[steps[len(steps)-1]] + spaced(steps[len(steps)-2])
	case owner == "output-capacitors" && len(steps) == 1:
		return "list of output capacitors"
	case owner == "output-capacitors":
		if bank, err := strconv.Atoi(steps[1]); err == nil {
			if len(steps) == 2 {
				return fmt.Sprintf("output capacitor bank %d", bank+1)
			}
			return fmt.Sprintf("%s of output capacitor bank %d", last, bank+1)
		}
	case owner == "targets" && len(steps) == 2:
		return "targeted " + last
	case owner == "targets" && len(steps) == 3:
		return spaced(steps[1]) + "'s " + last
	case len(steps) > 1 && steps[len(steps)-1] == "count":
		return "number of " + spaced(owner) + "s"
	case len(steps) == 1 || owner == "compensator" || owner == "modulator" || owner == "stated":
		return last
	}
	return spaced(steps[0]) + "'s " + last
}

// pointerOf turns a dotted path of the spec format into a JSON pointer.
func pointerOf(path string) string {
	return "/" + strings.ReplaceAll(path, ".", "/")
}

// cornerWords says a corner as an engineer does: input and load, then whatever is not at its nominal value, tolerances per
// cent and ranges as the value itself.
func (c *Case) cornerWords(corner []analysis.Setting) string {
	if corner == nil {
		return ""
	}
	point := &c.Design.Nominal.Circuit
	input, load := point.InputVoltage, point.LoadCurrent
	var rest []string
	for _, s := range corner {
		switch s.Path {
		case "input-voltage":
			input = s.Value
		case "load.current":
			load = s.Value
		default:
			if words := c.deviation(s); words != "" {
				rest = append(rest, words)
			}
		}
	}
	all := append([]string{number(input, "V") + " in", number(load, "A")}, rest...)
	return strings.Join(all, ", ")
}

// deviation words one setting, "" when it is nominal.
func (c *Case) deviation(s analysis.Setting) string {
	nominal, unit, isRange := c.nominalOf(s.Path)
	if math.Abs(s.Value-nominal) <= 1e-9*math.Abs(nominal) {
		return ""
	}
	label := pathWords(s.Path)
	if isRange || nominal == 0 {
		return label + " " + number(s.Value, unit)
	}
	change := 100 * (s.Value/nominal - 1)
	sign := "+"
	if change < 0 {
		sign = "−"
	}
	return fmt.Sprintf("%s %s%s %%", label, sign, strconv.FormatFloat(roundTo3(math.Abs(change)), 'f', -1, 64))
}

// nominalOf finds a path's nominal value and unit, and whether the file writes it as a range.
func (c *Case) nominalOf(path string) (nominal float64, unit string, isRange bool) {
	if q, ok := c.Spec.Quantity(pointerOf(path)); ok {
		isRange = q.Node != nil && q.Node.Kind == schema.Mapping && (q.Node.Get("min") != nil || q.Node.Get("max") != nil)
		return q.Nominal, q.Unit, isRange
	}
	for _, axis := range c.Design.Axes {
		if axis.Path == path {
			return axis.Nominal, "", false
		}
	}
	point := c.Design.Nominal
	if field := analysis.Field(&point, path); field != nil {
		return *field, "", false
	}
	return math.NaN(), "", false
}

// pathWords names a field of a corner: "inductance", "ESR", "second inductor's inductance", "feedback resistor".
func pathWords(path string) string {
	steps := strings.Split(path, ".")
	label := spaced(steps[len(steps)-1])
	if item, err := strconv.Atoi(label); err == nil && len(steps) > 1 {
		label = fmt.Sprintf("%s %d", spaced(steps[len(steps)-2]), item+1)
	}
	switch owner := steps[0]; owner {
	case "inductor", "output-capacitor", "compensator", "modulator", "input-voltage":
		return label
	case "output-capacitors":
		if bank, err := strconv.Atoi(steps[1]); err == nil {
			if len(steps) == 2 {
				return fmt.Sprintf("output capacitor bank %d", bank+1)
			}
			return fmt.Sprintf("%s of bank %d", label, bank+1)
		}
		return label
	default:
		if len(steps) == 1 {
			return label
		}
		return spaced(owner) + "'s " + label
	}
}

// roundTo3 rounds to three significant digits.
func roundTo3(value float64) float64 {
	if value == 0 {
		return 0
	}
	scale := math.Pow(10, 2-math.Floor(math.Log10(math.Abs(value))))
	return math.Round(value*scale) / scale
}
