package schema

import (
	"math"
	"strconv"
	"strings"
)

// Spec is a validated design: the document's tree with `use` and `part` expanded, every quantity in SI units.
type Spec struct {
	Document   *Document
	Root       *Node // expanded; nodes brought in keep their own Doc and name the reference in Via
	quantities map[string]Quantity
	order      []string // pointers of the quantities in the order of the file
	sources    map[*Node]source
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

// newSpec reads every quantity of a tree that has no problem.
func newSpec(doc *Document, sources map[*Node]source, root *Node, f *field) *Spec {
	s := &Spec{Document: doc, Root: root, quantities: map[string]Quantity{}, sources: sources}
	s.collect(root, f, "")
	return s
}

// collect walks the tree beside its schema.
func (s *Spec) collect(n *Node, f *field, pointer string) {
	if f == nil {
		return
	}
	if q, ok := quantityOf(n, f); ok {
		s.quantities[pointer] = q
		s.order = append(s.order, pointer)
		return
	}
	for _, e := range n.Entries {
		s.collect(e.Value, f.child(e.Key), pointer+"/"+escapePointer(e.Key))
	}
	for i, item := range n.Items {
		s.collect(item, f.child(strconv.Itoa(i)), itemPointer(pointer, i))
	}
}

// itemPointer is the pointer of an item of the list at a pointer.
func itemPointer(list string, index int) string { return list + "/" + strconv.Itoa(index) }

// quantityOf reads a node as the quantity that its field says it is. A zero or pole that is written as a pair is none.
func quantityOf(n *Node, f *field) (Quantity, bool) {
	qf, ok := f.quantity()
	if !ok || n.Kind == Sequence || n.Get("frequency") != nil {
		return Quantity{}, false
	}
	q, issues := qf.read(valueOf(n, nil))
	q.Node = n
	return q, len(issues) == 0
}

// quantity is what the schema says about the quantity at f.
func (f *field) quantity() (q quantityField, ok bool) {
	q.sign = "positive"
	f.each(func(g *field) bool {
		if g.dimension == "" {
			return false
		}
		q.dim, ok = dimensionNamed(g.dimension)
		if g.sign != "" {
			q.sign = g.sign
		}
		q.most, q.window, q.scalar, q.because = g.most, g.window, g.scalar, g.because
		return true
	})
	return q, ok
}

// Quantity is the quantity at a JSON pointer, also one that `use` or `part` brought in.
func (s *Spec) Quantity(pointer string) (Quantity, bool) {
	q, ok := s.quantities[pointer]
	return q, ok
}

// Quantities visits every quantity, in the order of the file, those that `use` and `part` brought in at their place.
func (s *Spec) Quantities(visit func(pointer string, q Quantity)) {
	for _, pointer := range s.order {
		visit(pointer, s.quantities[pointer])
	}
}

// Tolerance is the larger of the two sides of a spread that is written as a tolerance; ok is false for a range, or without
// any spread.
func (q Quantity) Tolerance() (ratio float64, ok bool) {
	if !q.Spread || q.Nominal == 0 || q.Node == nil || q.Node.Get("max") != nil || q.Node.Get("min") != nil {
		return 0, false
	}
	return max(q.Max-q.Nominal, q.Nominal-q.Min) / math.Abs(q.Nominal), true
}

// Node is the value at a JSON pointer of the expanded tree, nil if there is none.
func (s *Spec) Node(pointer string) *Node {
	n, _ := s.Root.walk(pointer)
	return n
}

// Has tells whether there is a value at a JSON pointer.
func (s *Spec) Has(pointer string) bool { return s.Node(pointer) != nil }

// Text is the text of the scalar at a JSON pointer, "" if there is none.
func (s *Spec) Text(pointer string) string {
	if n := s.Node(pointer); n != nil && n.Kind == Scalar {
		return n.Value
	}
	return ""
}

// Bool is the yes/no value at a JSON pointer, false if there is none.
func (s *Spec) Bool(pointer string) bool {
	n := s.Node(pointer)
	return n != nil && n.Type == Bool && valueOf(n, nil) == true
}

// Place is where a finding about the value at a JSON pointer goes: the value's range; for a value that `use` or `part`
// brought in, the reference in the design; where nothing is, the key of the nearest mapping above, at the top level the
// first key of the file.
func (s *Spec) Place(pointer string) Related {
	n, _ := s.Root.walk(pointer)
	if n == nil {
		return s.nearestAbove(pointer)
	}
	if n.Via != nil {
		return Related{Doc: n.Via.Doc, Pointer: s.sources[n.Via].reference, Start: n.Via.Start, End: n.Via.End}
	}
	return Related{Doc: n.Doc, Pointer: pointer, Start: n.Start, End: n.End}
}

// nearestAbove is the key of the nearest value above a pointer that leads nowhere.
func (s *Spec) nearestAbove(pointer string) Related {
	for {
		cut := strings.LastIndexByte(pointer, '/')
		if cut < 0 {
			pointer = ""
			break
		}
		pointer = pointer[:cut]
		n, e := s.Root.walk(pointer)
		if n == nil {
			continue
		}
		if n.Via != nil {
			return s.Place(pointer)
		}
		if e != nil {
			return Related{Doc: e.KeyDoc, Pointer: pointer, Start: e.KeyStart, End: e.KeyEnd}
		}
	}
	for _, e := range s.Root.Entries {
		return Related{Doc: e.KeyDoc, Start: e.KeyStart, End: e.KeyEnd}
	}
	return Related{Doc: s.Document, Start: s.Root.Start, End: s.Root.End}
}

// Shared is the place in the shared file of a value that `use` or `part` brought in; ok is false for the design's own.
func (s *Spec) Shared(pointer string) (place Related, ok bool) {
	n, _ := s.Root.walk(pointer)
	if n == nil || n.Via == nil {
		return Related{}, false
	}
	return Related{Doc: n.Doc, Pointer: sharedPointer(s.sources[n.Via], pointer), Start: n.Start, End: n.End}, true
}
