package rules

// The three rules of reading are found while a file is read (package schema) and worded there; see FromProblems. A case
// exists only for a file that holds them.

var specSyntax = Rule{
	Name:     "spec-syntax",
	Group:    Declared,
	Severity: Error,
	Sentence: "The file can be read: valid UTF-8, well-formed YAML or JSON, each key once.",
	Formula:  "one value for each key",
	Source:   "YAML 1.2.2 (2021) and RFC 8259 (2017)",
	Example:  "title: Tide gauge supply\ntitle: Tide gauge supply, second board   # the key stands twice",
	Hint:     "It stands where reading stopped making sense: the second of two equal keys, the unclosed quote. Beside a key that stands twice the rest of the file is still judged; any other mistake of syntax has to go first.",
	Reads:    Declaration,
}
