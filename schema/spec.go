package schema

// Spec is a validated design: the document's tree with `use` and `part` expanded, every quantity in SI units.
type Spec struct {
	Document   *Document
	Root       *Node // expanded; nodes brought in keep their own Doc and name the reference in Via
	quantities map[string]Quantity
}

// Quantity is one number of a spec in the SI unit of its field, with its spread.
type Quantity struct {
	Min, Nominal, Max float64
	Spread            bool   // a tolerance or range was written
	AssumedNominal    bool   // a range without nominal: the midpoint was taken
	Unit              string // SI symbol of the field's dimension: "H", "Hz", "V/s", "" for a plain ratio, "deg", "dB"
	Node              *Node
}

// Resolver finds the file that a reference in from names; the workspace supplies it (unsaved text before disk, nothing
// outside the workspace).
type Resolver interface {
	Resolve(from *Document, reference string) (*Document, error)
}
