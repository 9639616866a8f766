package schema

import (
	"cmp"
	"encoding/json"
	"errors"
	"net/url"
	"slices"
	"strconv"
	"strings"

	"github.com/santhosh-tekuri/jsonschema/v5"
)

const (
	shapeRule    = "spec-shape"
	quantityRule = "quantity"
)

// Validate judges a document against the schema of its kind and gives all its problems at once, those of its syntax
// included, sorted by place; a text that does not parse has no others. References are followed through r. The spec is nil unless the document is a design without
// any problem.
func Validate(doc *Document, r Resolver) (*Spec, []Problem) {
	if doc.Root == nil || doc.Root.Kind != Mapping || torn(doc) {
		return nil, doc.Problems
	}
	g := newGrower(doc, r)
	f := fieldOf(doc.Kind)
	root := g.grow(doc.Root, f, nil, "")
	if doc.Kind == Design || doc.Kind == Compensator {
		g.follow(root, f)
	}
	v := &validation{grower: g, root: root, field: f}
	v.check()
	problems := v.finish()
	if len(problems) > 0 || doc.Kind != Design {
		return nil, problems
	}
	return newSpec(g.doc, g.sources, root, f), nil
}

// torn tells a document that does not parse: of its tree only what stands before and behind the mistakes is known. A
// duplicate key tears nothing.
func torn(doc *Document) bool {
	for _, p := range doc.Problems {
		if doc.Find(p.Pointer) == nil || len(p.Related) == 0 {
			return true
		}
	}
	return false
}

// validation gathers the problems of one tree.
type validation struct {
	*grower
	root  *Node
	field *field
	seen  map[string]bool // problems that were reported, by place and text
	spent map[*Node]bool  // values whose key is not used: nothing inside them is worth a word
	// tables are the keys of large mappings.
	tables map[*Node]map[string]*Entry
}

// check runs the compiled schema and words each of its leaves.
func (v *validation) check() {
	v.seen, v.spent, v.tables = map[string]bool{}, map[*Node]bool{}, map[*Node]map[string]*Entry{}
	err := validatorOf(v.doc.Kind).Validate(valueOf(v.root, v.resolved))
	var failed *jsonschema.ValidationError
	if errors.As(err, &failed) {
		var leaves []leaf
		gather(failed, &leaves)
		slices.SortFunc(leaves, compareLeaves)
		for _, l := range leaves {
			v.unused(l)
		}
		for _, l := range leaves {
			v.word(l)
		}
	}
	if len(v.misspelt) > 0 {
		v.reportMisspelt(&site{node: v.root, field: v.field})
	}
}

// falseSchema is what the validator says of a value under the schema "false".
const falseSchema = "not allowed"

// leaf is one failed keyword of the schema at one place of the file.
type leaf struct {
	at      string // JSON pointer in the validated tree
	keyword string
	below   string // what stands behind the keyword: the key of "properties/KEY"
	message string
}

// compareLeaves puts what the validator found in random order into a fixed one.
func compareLeaves(a, b leaf) int {
	return cmp.Or(cmp.Compare(a.at, b.at), cmp.Compare(a.keyword, b.keyword), cmp.Compare(a.below, b.below), cmp.Compare(a.message, b.message))
}

// gather flattens an error to its leaves. What the general shape of a quantity has to say is left out: the vocabulary
// says it better.
func gather(e *jsonschema.ValidationError, leaves *[]leaf) {
	for _, general := range []string{"/$defs/quantity", "/$defs/window", "/$defs/number"} {
		if strings.Contains(e.AbsoluteKeywordLocation, general) {
			return
		}
	}
	if strings.HasSuffix(e.KeywordLocation, "/anyOf") {
		*leaves = append(*leaves, leaf{at: plainPointer(e.InstanceLocation), keyword: "anyOf"})
		return
	}
	for _, c := range e.Causes {
		gather(c, leaves)
	}
	if len(e.Causes) > 0 {
		return
	}
	path := strings.Split(e.KeywordLocation, "/")
	l := leaf{at: plainPointer(e.InstanceLocation), keyword: path[len(path)-1], message: e.Message}
	if i, ok := unpackIssue(e.Message); ok && i.kind == notUsed {
		l = leaf{at: l.at + i.path, keyword: "unused"}
	}
	if e.Message == falseSchema {
		l.keyword = "unused"
	}
	if len(path) >= 3 && path[len(path)-3] == "dependentRequired" {
		l.keyword, l.below = "dependentRequired", path[len(path)-2]
	}
	*leaves = append(*leaves, l)
}

// plainPointer undoes the escaping for URLs that the validator adds to the one for pointers.
func plainPointer(pointer string) string {
	if plain, err := url.PathUnescape(pointer); err == nil {
		return plain
	}
	return pointer
}

// valueOf is a tree in the types that the validator knows. Followed references are left out, so that the schema sees one
// complete compensator or component.
func valueOf(n *Node, followed map[*Node]bool) any {
	switch n.Kind {
	case Mapping:
		m := make(map[string]any, len(n.Entries))
		for _, e := range n.Entries {
			if followed[n] && (e.Key == "use" || e.Key == "part") {
				continue
			}
			m[e.Key] = valueOf(e.Value, followed)
		}
		return m
	case Sequence:
		items := make([]any, len(n.Items))
		for i, item := range n.Items {
			items[i] = valueOf(item, followed)
		}
		return items
	}
	switch n.Type {
	case Number:
		return numberOf(n)
	case Bool:
		return n.Value == "true" || n.Value == "True" || n.Value == "TRUE"
	case Null:
		return nil
	}
	return n.Value
}

// numberOf keeps a number as it was written where JSON writes it the same way. What is no finite number is left as text:
// the validator knows no others.
func numberOf(n *Node) any {
	text := strconv.FormatFloat(n.Number, 'g', -1, 64)
	switch {
	case n.Number-n.Number != 0: // infinite or not a number
		return n.Value
	case n.Number == 0:
		return json.Number("0")
	case len(n.Value) <= 24 && json.Valid([]byte(n.Value)):
		text = n.Value
	}
	return json.Number(text)
}

// finish sorts the problems by place.
func (v *validation) finish() []Problem {
	all := append(slices.Clone(v.doc.Problems), v.problems...)
	slices.SortStableFunc(all, func(a, b Problem) int {
		return cmp.Or(cmp.Compare(a.Start, b.Start), cmp.Compare(a.End, b.End), cmp.Compare(a.Rule, b.Rule), cmp.Compare(a.Pointer, b.Pointer), cmp.Compare(a.Message, b.Message))
	})
	return all
}

// report adds a problem once.
func (v *validation) report(p Problem, identity string) {
	key := p.Rule + "\x00" + p.Pointer + "\x00" + identity
	if v.seen[key] {
		return
	}
	v.seen[key] = true
	v.problems = append(v.problems, p)
}
