package rules

var quantity = Rule{
	Name:     "quantity",
	Group:    Declared,
	Severity: Error,
	Sentence: "Each quantity has a unit that fits its field, the right sign, its range in order and a tolerance that makes sense.",
	Formula:  "min ≤ nominal ≤ max, in the field's unit",
	Source:   "the International System of Units; IEC 60062 (2016) for letter codes",
	Example:  "inductor: {inductance: 22 uF ± 20 %}   # farads for henries",
	Hint:     "It stands at the value and says what its field expects. A bare number is in the SI unit of the field.",
	Reads:    Declaration,
}
