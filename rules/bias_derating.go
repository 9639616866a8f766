package rules

import "fmt"

var biasDerating = Rule{
	Name:     "bias-derating",
	Group:    Declared,
	Severity: Warning,
	Sentence: "A ceramic capacitor says how much of its capacitance is left at the output voltage.",
	Formula:  "kind: ceramic has bias-derating: a table of voltage and factor, or included",
	Source:   "common practice",
	Example:  "output-capacitor: {capacitance: 22 uF ± 10 %, esr: {min: 1 mΩ, nominal: 2 mΩ, max: 4 mΩ}, kind: ceramic, voltage-rating: 16 V}",
	Hint:     "Class 2 ceramics lose half of their capacitance and more at rated voltage, and the resonance and the crossover move with it. Give the maker's curve, or `included` where the capacitance is already the one at the output voltage.",
	Reads:    Declaration,
	Applies:  func(c *Case) bool { return len(ceramics(c)) > 0 },
	Decide: func(c *Case) []Finding {
		var findings []Finding
		for _, bank := range ceramics(c) {
			if c.Spec.Has(bank.pointer + "/bias-derating") {
				continue
			}
			f := c.at(bank.pointer + "/bias-derating")
			if bank.pointer != "/output-capacitor" { // an item of a list has no key
				f = c.at(bank.pointer)
			}
			capacitance := c.Design.Nominal.Circuit.Banks[bank.index].Capacitance
			f.Message = fmt.Sprintf("the %s is ceramic and has no bias derating: how much of its %s is left at %s is not said",
				placeWords(bank.pointer), number(capacitance, "F"), number(c.Design.Nominal.Circuit.OutputVoltage, "V"))
			f.Measured, f.Nominal = asNumber(capacitance, "F"), asNumber(capacitance, "F")
			c.relate(&f, "is why it is needed", bank.pointer+"/kind")
			findings = append(findings, f)
		}
		return findings
	},
}

// ceramics are the output capacitors of that kind.
func ceramics(c *Case) []bankPlace {
	var found []bankPlace
	for _, bank := range banks(c) {
		if c.Spec.Text(bank.pointer+"/kind") == "ceramic" {
			found = append(found, bank)
		}
	}
	return found
}
