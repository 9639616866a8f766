package schema

// Dimension is what a quantity measures. It settles which units fit, what a bare number means and how values are shown.
type Dimension int

const (
	Plain           Dimension = iota + 1 // a number that is no ratio: turns, coefficients of a digital filter
	Count                                // a whole number of pieces or phases, 1 or more
	Ratio                                // a plain ratio; a fraction (1/4) or per cent
	Gain                                 // a plain ratio that may also be written in decibels (20·log10)
	Angle                                // degrees
	Decibel                              // decibels, as such
	Inductance                           // H
	Capacitance                          // F
	Resistance                           // Ω
	Transresistance                      // Ω, or V/A
	Conductance                          // S, or A/V
	Voltage                              // V
	Current                              // A
	Frequency                            // Hz
	Time                                 // s
	Slope                                // V/s
)

// dimensionFacts is one row of the table of dimensions.
type dimensionFacts struct {
	name  string   // in the schemas' keyword "dimension"
	unit  string   // SI symbol
	words string   // as a designer says it
	bases []string // spellings of the unit that take an SI prefix; "V/s" takes one on each side
	exact []string // spellings without prefix
	typed string   // an example that a message can show
}

// dimensions is the table, at the index of the value.
var dimensions = [...]dimensionFacts{
	Plain:           {"plain", "", "a plain number", nil, nil, "16"},
	Count:           {"count", "", "a whole number of 1 or more", nil, nil, "2"},
	Ratio:           {"ratio", "", "a ratio", nil, []string{"%"}, "0.25"},
	Gain:            {"gain", "", "a ratio or decibels", nil, []string{"%", "dB"}, "90 dB"},
	Angle:           {"angle", "deg", "degrees", nil, []string{"deg", "°", "degree", "degrees"}, "45 deg"},
	Decibel:         {"decibel", "dB", "decibels", nil, []string{"dB"}, "8 dB"},
	Inductance:      {"inductance", "H", "henries", []string{"H"}, nil, "22 uH"},
	Capacitance:     {"capacitance", "F", "farads", []string{"F"}, nil, "220 uF"},
	Resistance:      {"resistance", "Ω", "ohms", []string{"Ω", "\u2126", "ohm", "Ohm", "ohms", "R"}, nil, "25 mΩ"},
	Transresistance: {"transresistance", "Ω", "ohms (volts per ampere)", []string{"Ω", "\u2126", "ohm", "Ohm", "ohms", "R", "V/A"}, nil, "50 mΩ"},
	Conductance:     {"conductance", "S", "siemens (amperes per volt)", []string{"S", "A/V"}, nil, "1 mS"},
	Voltage:         {"voltage", "V", "volts", []string{"V"}, nil, "12 V"},
	Current:         {"current", "A", "amperes", []string{"A"}, nil, "1.5 A"},
	Frequency:       {"frequency", "Hz", "hertz", []string{"Hz"}, nil, "250 kHz"},
	Time:            {"time", "s", "seconds", []string{"s"}, nil, "100 ns"},
	Slope:           {"slope", "V/s", "volts per second", []string{"V/s"}, nil, "60 mV/us"},
}

// facts are the properties of d; of an unknown dimension those of Plain.
func (d Dimension) facts() *dimensionFacts {
	if d < Plain || d > Slope {
		d = Plain
	}
	return &dimensions[d]
}

// Unit is the SI symbol of the dimension's unit: "H", "V/s", "" for ratios and plain numbers, "deg", "dB".
func (d Dimension) Unit() string { return d.facts().unit }

// String says the dimension's unit in words: "henries".
func (d Dimension) String() string { return d.facts().words }

// Dimensions lists every dimension, in the order of their declaration.
func Dimensions() []Dimension {
	var all []Dimension
	for d := Plain; d <= Slope; d++ {
		all = append(all, d)
	}
	return all
}

// dimensionNamed finds a dimension by its name in the schemas.
func dimensionNamed(name string) (Dimension, bool) {
	for d := Plain; d <= Slope; d++ {
		if d.facts().name == name {
			return d, true
		}
	}
	return 0, false
}

// prefixPower is the power of ten of an SI prefix (SI brochure, 9th edition, 2019, table 7). Micro may also be written u or
// U+03BC, kilo also K: neither means anything else here. The empty prefix is 10⁰.
func prefixPower(prefix string) (int, bool) {
	switch prefix {
	case "":
		return 0, true
	case "p":
		return -12, true
	case "n":
		return -9, true
	case "u", "\u00b5", "\u03bc":
		return -6, true
	case "m":
		return -3, true
	case "k", "K":
		return 3, true
	case "M":
		return 6, true
	case "G":
		return 9, true
	case "T":
		return 12, true
	}
	return 0, false
}
