package schema

// Kind is what a spec file is, told by its name.
type Kind int

const (
	Design      Kind = iota + 1 // NAME.converter.yaml|yml|json
	Compensator                 // NAME.compensator.*
	Parts                       // NAME.parts.*
	Policy                      // halfplane.yaml
)

// Document is one immutable text with its tree. Byte offsets are the only stored coordinates; ranges are half-open.
type Document struct {
	Name     string // path or URI, as given
	Version  int32  // the editor's version, 0 from disk
	Text     []byte
	Kind     Kind
	Root     *Node     // nil when nothing could be parsed
	Problems []Problem // of bytes and syntax, sorted by offset
	lines    []int     // offset of each line's first byte
}

// NodeKind is the shape of a value.
type NodeKind int

const (
	Mapping NodeKind = iota + 1
	Sequence
	Scalar
)

// ScalarType is what a scalar means in the YAML 1.2 core schema (JSON: its own type).
type ScalarType int

const (
	Text ScalarType = iota + 1
	Number
	Bool
	Null
)

// Node is one value of a document.
type Node struct {
	Kind       NodeKind
	Doc        *Document // the text in which Start and End stand
	Start, End int       // the value's range as interface.md defines it: a scalar with its quotes, a mapping from its first to its last character
	Entries    []Entry   // of a mapping, in source order, a duplicate key's first entry only
	Items      []*Node   // of a sequence
	Type       ScalarType
	Value      string  // a scalar's decoded text
	Number     float64 // of a Number
	// Alias is set on an alias: the anchored value that it stands for. Start and End are those of the alias; what is
	// inside is the anchored value's and stands where it was written.
	Alias *Node
	// Via is set on a value that was brought in by `use` or `part`: the reference in the design (its node).
	Via *Node
}

// Entry is one key with its value.
type Entry struct {
	Key              string
	KeyStart, KeyEnd int // the key's text with its quotes, without the colon
	KeyDoc           *Document
	Merged           bool // brought in by a merge key: key and value stand in the mapping that was merged
	Value            *Node
}

// Problem is something wrong with a file's text, shape or quantities: the finding before it has a severity.
type Problem struct {
	Rule       string // "spec-syntax", "spec-shape" or "quantity"
	Message    string // a whole sentence without a full stop, lower case, in a designer's words
	Pointer    string // JSON pointer of the value (or of the parent for a missing key)
	Doc        *Document
	Start, End int
	Related    []Related
}

// Related is a further place that belongs to a problem or finding.
type Related struct {
	Doc        *Document
	Pointer    string
	Start, End int
	Message    string
}
