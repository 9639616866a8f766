package rules

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"halfplane/schema"
)

var plausibleSize = Rule{
	Name:     "plausible-size",
	Group:    Declared,
	Severity: Warning,
	Sentence: "Every quantity has a size that such a part or figure can have.",
	Formula:  "lowest ≤ value ≤ highest of the field's band: inductance 10 nH to 100 mH, capacitance 10 pF to 1 F, switching frequency 1 kHz to 20 MHz, and so on",
	Source:   "common practice: the range of parts that are sold for converters, with a decade to spare",
	Example:  "inductor: {inductance: 22}   # 22 H; 22 uH is meant",
	Hint:     "Measured is the end of the spread that lies furthest outside, the limit is the band's end. It nearly always is a unit: M for m, a bare number that is in the SI base unit, a value in thousands.",
	Reads:    Declaration,
	Decide: func(c *Case) []Finding {
		var findings []Finding
		c.Spec.Quantities(func(pointer string, q schema.Quantity) {
			band, known := bandOf(pointer)
			if !known {
				return
			}
			value, limit := sizes(q)
			switch {
			case limit > band.high:
				value, limit = limit, band.high
			case value > 0 && value < band.low:
				limit = band.low
			default:
				return
			}
			f := c.at(pointer)
			f.Message = fmt.Sprintf("%s %s is outside what it can be, %s to %s%s",
				placeWords(pointer), number(value, q.Unit), number(band.low, q.Unit), number(band.high, q.Unit), unitHint(q))
			f.Formula = fmt.Sprintf("%s ≤ %s ≤ %s does not hold", number(band.low, q.Unit), number(value, q.Unit), number(band.high, q.Unit))
			f.Measured, f.Limit, f.Nominal = asNumber(value, q.Unit), asNumber(limit, q.Unit), asNumber(q.Nominal, q.Unit)
			findings = append(findings, f)
		})
		return findings
	},
}

// sizes are the smallest and the largest magnitude of a quantity, zero left out: a load may be taken off, a winding's
// resistance not be given. 0, 0 where there is none.
func sizes(q schema.Quantity) (low, high float64) {
	for _, v := range [...]float64{q.Min, q.Nominal, q.Max} {
		size := math.Abs(v)
		if math.IsInf(v, 0) {
			continue // the open end of a pair of limits
		}
		high = max(high, size)
		if size > 0 && (low == 0 || size < low) {
			low = size
		}
	}
	return low, high
}

// unitHint says what the writing of a quantity suggests.
func unitHint(q schema.Quantity) string {
	text := strings.Trim(q.Node.Value, " \t")
	for _, key := range [...]string{"nominal", "value", "max", "min"} {
		if v := q.Node.Get(key); v != nil {
			text = v.Value
			break
		}
	}
	number := strings.TrimLeft(text, "+-0123456789.eE ")
	switch _, err := strconv.ParseFloat(text, 64); {
	case err == nil && q.Unit != "":
		return fmt.Sprintf("; a number without a unit is in %s", q.Unit)
	case strings.HasPrefix(number, "M") && q.Unit != "Hz":
		return "; M is mega, m is milli"
	case strings.HasPrefix(number, "m") && q.Unit == "Hz":
		return "; m is milli, M is mega"
	}
	return ": check the unit and its prefix"
}

// band is what a field can be, in its SI unit, zero aside.
type band struct{ low, high float64 }

// bandOf is the band of the field at a pointer: its own, else that of its key; known is false for what has none (stated
// figures are recomputed, a list of poles can be anything).
func bandOf(pointer string) (b band, known bool) {
	key := lastKey(pointer)
	steps := strings.Split(pointer, "/")
	switch owner := steps[1]; owner {
	case "stated", "libraries":
		return band{}, false
	case "output-capacitor", "output-capacitors":
		if strings.Contains(pointer, "/bias-derating") {
			return band{}, false
		}
	case "compensator", "load", "targets", "source", "input-filter":
		if own, ok := ownBands[owner+"/"+key]; ok {
			return own, true
		}
	}
	b, known = bands[key]
	return b, known
}

// bands are the sizes by key. They are wide on purpose: what lies outside has the wrong unit or is no converter.
var bands = map[string]band{
	"switching-frequency": {1e3, 20e6},
	"sampling-frequency":  {1e3, 200e6},
	"input-voltage":       {0.2, 50e3},
	"output-voltage":      {0.1, 100e3},
	"current":             {1e-6, 50e3},
	"phases":              {1, 100},
	"count":               {1, 10e3},

	"inductance":             {10e-9, 100e-3},
	"magnetizing-inductance": {100e-9, 100},
	"capacitance":            {10e-12, 1},
	"damping-capacitance":    {10e-12, 1},
	"esr":                    {1e-6, 1e3},
	"resistance":             {1e-6, 100},
	"on-resistance":          {1e-6, 100},
	"damping-resistance":     {1e-4, 10e3},
	"forward-drop":           {1e-3, 50},

	"saturation-current":    {1e-3, 100e3},
	"current-rating":        {1e-3, 100e3},
	"ripple-current-rating": {1e-3, 10e3},
	"voltage-rating":        {1, 100e3},

	"ramp-amplitude":     {1e-3, 1e3},
	"current-sense-gain": {1e-6, 100},
	"slope-compensation": {1, 1e10},
	"delay":              {1e-12, 1e-3},
	"current-limit":      {1e-3, 100e3},
	"minimum-on-time":    {1e-10, 1e-3},
	"minimum-off-time":   {1e-10, 1e-3},

	"upper-resistor":         {1, 100e6},
	"lower-resistor":         {1, 100e6},
	"feedback-resistor":      {1, 100e6},
	"lead-resistor":          {1, 100e6},
	"led-resistor":           {1, 10e6},
	"pull-up-resistor":       {1, 10e6},
	"integrator-capacitor":   {1e-12, 1e-3},
	"rolloff-capacitor":      {0.1e-12, 1e-3},
	"lead-capacitor":         {0.1e-12, 1e-3},
	"transconductance":       {1e-7, 100},
	"output-resistance":      {100, 1e12},
	"current-transfer-ratio": {1e-3, 100},
	"optocoupler-pole":       {100, 1e9},
	"integrator":             {1e-3, 10e6},
	"reference-voltage":      {10e-3, 100},
	"pull-up-voltage":        {0.5, 100},
	"led-supply-voltage":     {0.5, 500},
	"gain-bandwidth":         {1e3, 50e9},
	"open-loop-gain":         {10, 1e9},
	"output-range":           {1e-3, 100},
	"adc-step":               {1e-7, 10},
	"pwm-step":               {1e-7, 0.2},

	"phase-margin":   {1, 180},
	"gain-margin":    {0.1, 100},
	"modulus-margin": {0.01, 1},
	"crossover":      {0.1, 5e6},
	"output-ripple":  {1e-6, 1e3},
	"regulation":     {1e-6, 0.5},
	"deviation":      {1e-6, 10e3},
	"recovery":       {1e-9, 100},
	"edge":           {1e-12, 10},
	"from":           {1e-9, 50e3},
	"to":             {1e-9, 50e3},
}

// ownBands are those of fields that share their key with others of another size.
var ownBands = map[string]band{
	"load/capacitance":  {1e-12, 10},
	"source/inductance": {1e-10, 1},
	"source/resistance": {1e-6, 10e3},
	"compensator/delay": {1e-12, 1},
}
