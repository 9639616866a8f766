package schema

import "strconv"

// Difference is a value that two specs do not share, as each writes it; "" where it has none.
type Difference struct{ Pointer, Old, New string }

// Differences lists the values in which two specs differ, in the order of the first and then of the second. Quantities are compared by
// what they mean: 22 uH and 0.022 mH are the same.
func Differences(a, b *Spec) []Difference {
	var out []Difference
	differ(a, b, a.Root, b.Root, "", &out)
	return out
}

func differ(a, b *Spec, x, y *Node, pointer string, out *[]Difference) {
	p, isP := a.Quantity(pointer)
	q, isQ := b.Quantity(pointer)
	switch {
	case x == nil && y == nil:
		return
	case isP && isQ && pointer != "":
		if p.Min == q.Min && p.Nominal == q.Nominal && p.Max == q.Max {
			return
		}
	case x != nil && y != nil && x.Kind == Mapping && y.Kind == Mapping:
		for _, key := range keysOf(x, y) {
			differ(a, b, x.Get(key), y.Get(key), pointer+"/"+escapePointer(key), out)
		}
		return
	case x != nil && y != nil && x.Kind == Sequence && y.Kind == Sequence:
		for i := range max(len(x.Items), len(y.Items)) {
			differ(a, b, item(x, i), item(y, i), pointer+"/"+strconv.Itoa(i), out)
		}
		return
	case x != nil && y != nil && x.Kind == Scalar && y.Kind == Scalar && x.Type == y.Type && x.Value == y.Value:
		return
	}
	*out = append(*out, Difference{pointer, written(x), written(y)})
}

func item(n *Node, i int) *Node {
	if i < len(n.Items) {
		return n.Items[i]
	}
	return nil
}

// keysOf is the keys of two mappings, those of the first first.
func keysOf(x, y *Node) []string {
	var keys []string
	for _, e := range x.Entries {
		keys = append(keys, e.Key)
	}
	for _, e := range y.Entries {
		if x.Entry(e.Key) == nil {
			keys = append(keys, e.Key)
		}
	}
	return keys
}

// written is the source text of a value, shortened where it is long.
func written(n *Node) string {
	if n == nil || n.Doc == nil {
		return ""
	}
	const longest = 60
	text := []rune(string(n.Doc.Text[n.Start:n.End]))
	for i, r := range text {
		if r == '\n' || i == longest {
			return string(text[:i]) + "…"
		}
	}
	return string(text)
}
