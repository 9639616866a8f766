package rules

var specShape = Rule{
	Name:     "spec-shape",
	Group:    Declared,
	Severity: Error,
	Sentence: "The file fits its schema: every needed key is there, none is unknown or unused, names and types are right, shared files resolve.",
	Formula:  "the file validates against the JSON Schema of its kind",
	Source:   "JSON Schema, draft 2020-12",
	Example:  "inductor: {inductanse: 22 uH, resistance: 25 mΩ}   # inductance",
	Hint:     "It stands at the key or value that does not fit, or at the parent of what is missing. A key one letter off is reported once, as misspelt, with the name that was probably meant.",
	Reads:    Declaration,
}
