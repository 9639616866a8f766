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

// facts are the properties of d; of an unknown dimension those of Plain.
func (d Dimension) facts() dimensionFacts {
	switch d {
	case Count:
		return dimensionFacts{"count", "", "a whole number of 1 or more", nil, nil, "2"}
	case Ratio:
		return dimensionFacts{"ratio", "", "a ratio", nil, []string{"%"}, "0.25"}
	case Gain:
		return dimensionFacts{"gain", "", "a ratio or decibels", nil, []string{"%", "dB"}, "90 dB"}
	case Angle:
		return dimensionFacts{"angle", "deg", "degrees", nil, []string{"deg", "°", "degree", "degrees"}, "45 deg"}
	case Decibel:
		return dimensionFacts{"decibel", "dB", "decibels", nil, []string{"dB"}, "8 dB"}
	case Inductance:
		return dimensionFacts{"inductance", "H", "henries", []string{"H"}, nil, "22 uH"}
	case Capacitance:
		return dimensionFacts{"capacitance", "F", "farads", []string{"F"}, nil, "220 uF"}
	case Resistance:
		return dimensionFacts{"resistance", "Ω", "ohms", []string{"Ω", "\u2126", "ohm", "Ohm", "ohms", "R"}, nil, "25 mΩ"}
	case Transresistance:
		return dimensionFacts{"transresistance", "Ω", "ohms (volts per ampere)", []string{"Ω", "\u2126", "ohm", "Ohm", "ohms", "R", "V/A"}, nil, "50 mΩ"}
	case Conductance:
		return dimensionFacts{"conductance", "S", "siemens (amperes per volt)", []string{"S", "A/V"}, nil, "1 mS"}
	case Voltage:
		return dimensionFacts{"voltage", "V", "volts", []string{"V"}, nil, "12 V"}
	case Current:
		return dimensionFacts{"current", "A", "amperes", []string{"A"}, nil, "1.5 A"}
	case Frequency:
		return dimensionFacts{"frequency", "Hz", "hertz", []string{"Hz"}, nil, "250 kHz"}
	case Time:
		return dimensionFacts{"time", "s", "seconds", []string{"s"}, nil, "100 ns"}
	case Slope:
		return dimensionFacts{"slope", "V/s", "volts per second", []string{"V/s"}, nil, "60 mV/us"}
	}
	return dimensionFacts{"plain", "", "a plain number", nil, nil, "16"}
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
