package schema

import (
	"fmt"
	"strconv"
	"strings"
)

// chainLimit bounds how many compensator files may take each other in.
const chainLimit = 16

// follow expands the references of a grown design (or compensator file): libraries, then `use`, then `part`.
func (g *grower) follow(root *Node, f *field) {
	if g.doc.Kind == Compensator {
		g.use(root, f, "", []*Document{g.doc})
		return
	}
	if c := root.Get("compensator"); c != nil {
		g.use(c, f.child("compensator"), g.pointerOf(root, "compensator"), []*Document{g.doc})
	}
	g.openLibraries(root)
	for _, place := range []struct{ key, component string }{
		{"inductor", "inductor"}, {"second-inductor", "inductor"}, {"coupling-capacitor", "capacitor"},
		{"output-capacitor", "capacitor"}, {"switch", "switch"}, {"rectifier", "rectifier"},
	} {
		if n := root.Get(place.key); n != nil {
			g.part(n, f.child(place.key), g.pointerOf(root, place.key), place.component)
		}
	}
	if banks := root.Get("output-capacitors"); banks != nil {
		for i, n := range banks.Items {
			step := strconv.Itoa(i)
			g.part(n, f.at("/output-capacitors/"+step), g.pointerOf(root, "output-capacitors")+"/"+step, "capacitor")
		}
	}
}

// pointerOf is the pointer of a key of the root as it stands in the file.
func (g *grower) pointerOf(root *Node, key string) string {
	return "/" + escapePointer(g.keyAsWritten(root.Entry(key)))
}

// reference is the entry of a mapping that refers to something by a text, nil if there is none.
func reference(n *Node, key string) *Entry {
	e := n.Entry(key)
	if e == nil || e.Value.Kind != Scalar || e.Value.Type != Text || strings.TrimSpace(e.Value.Value) == "" {
		return nil
	}
	return e
}

// use takes a shared compensator into n: its keys, except those that n has itself. via stays the design's reference when
// the shared file takes in another one; chain holds the files so far.
func (g *grower) use(n *Node, f *field, pointer string, chain []*Document) bool {
	e := reference(n, "use")
	if e == nil {
		return false
	}
	from := chain[len(chain)-1]
	shared, problem := g.open(from, e.Value.Value, Compensator)
	if problem == nil {
		for _, d := range chain {
			if d.Name == shared.Name {
				problem = &Problem{Message: "use leads back to " + shown(shared.Name) + ": the files take each other in without end"}
			}
		}
	}
	if problem == nil && len(chain) > chainLimit {
		problem = &Problem{Message: "use leads through too many files"}
	}
	if problem != nil {
		g.refuse(e, pointer, problem)
		return false
	}
	via := e.Value
	if n.Via != nil {
		via = n.Via
	} else {
		g.sources[via] = source{reference: pointer + "/" + escapePointer(g.keyAsWritten(e)), base: pointer, doc: shared}
	}
	body := g.grow(shared.Root, f, via, "")
	if body.Entry("use") != nil && !g.use(body, f, pointer, append(chain, shared)) {
		return false
	}
	n.Entries = merge(n.Entries, body.Entries, func(key string) bool { return key != "format" && key != "title" && key != "use" })
	g.resolved[n] = true
	return true
}

// merge adds to own the entries that it has not and that keep wants.
func merge(own, brought []Entry, keep func(key string) bool) []Entry {
	has := map[string]bool{}
	for _, e := range own {
		has[e.Key] = true
	}
	for _, e := range brought {
		if !has[e.Key] && keep(e.Key) {
			own = append(own, e)
		}
	}
	return own
}

// open reads the file that a reference names and makes sure that it is of the kind and could be read.
func (g *grower) open(from *Document, reference string, kind Kind) (*Document, *Problem) {
	if g.resolver == nil {
		return nil, &Problem{Message: "'" + shown(reference) + "' cannot be followed here: files are not at hand"}
	}
	doc, err := g.resolver.Resolve(from, reference)
	switch {
	case err != nil:
		return nil, &Problem{Message: "'" + shown(reference) + "' cannot be followed: " + printable(err.Error())}
	case doc == nil:
		return nil, &Problem{Message: "'" + shown(reference) + "' cannot be followed"}
	case doc.Kind != kind:
		return nil, &Problem{Message: fmt.Sprintf("'%s' is a %s file, a file named NAME.%s.yaml is expected here", shown(reference), doc.Kind, kind.infix())}
	case len(doc.Problems) > 0:
		p := doc.Problems[0]
		return nil, &Problem{
			Message: fmt.Sprintf("'%s' cannot be read: %s", shown(reference), p.Message),
			Related: []Related{{Doc: p.Doc, Pointer: p.Pointer, Start: p.Start, End: p.End, Message: "in the shared file"}},
		}
	case doc.Root == nil || doc.Root.Kind != Mapping:
		return nil, &Problem{Message: "'" + shown(reference) + "' holds nothing that could be taken in"}
	}
	return doc, nil
}

// refuse reports a reference that leads nowhere, in the design.
func (g *grower) refuse(e *Entry, pointer string, p *Problem) {
	p.Rule, p.Pointer = shapeRule, pointer+"/"+escapePointer(g.keyAsWritten(e))
	g.place(p, e.Value)
	g.problems = append(g.problems, *p)
}

// place puts a problem on a node: on its reference in the design when it was brought in.
func (g *grower) place(p *Problem, n *Node) {
	if n.Via == nil {
		p.Doc, p.Start, p.End = n.Doc, n.Start, n.End
		return
	}
	p.Doc, p.Start, p.End = n.Via.Doc, n.Via.Start, n.Via.End
	s := g.sources[n.Via]
	p.Related = append(p.Related, Related{Doc: n.Doc, Pointer: sharedPointer(s, p.Pointer), Start: n.Start, End: n.End, Message: "in the shared file"})
	p.Pointer = s.reference
}

// sharedPointer is the pointer in the shared file of what stands at a pointer in the design.
func sharedPointer(s source, pointer string) string {
	return s.inShared + strings.TrimPrefix(pointer, s.base)
}

// openLibraries reads the parts files that the design names.
func (g *grower) openLibraries(root *Node) {
	list := root.Get("libraries")
	if list == nil {
		return
	}
	for i, item := range list.Items {
		if item.Kind != Scalar || item.Type != Text {
			g.blind = true
			continue
		}
		doc, problem := g.open(g.doc, item.Value, Parts)
		if problem != nil {
			problem.Rule, problem.Pointer = shapeRule, g.pointerOf(root, "libraries")+"/"+strconv.Itoa(i)
			g.place(problem, item)
			g.problems = append(g.problems, *problem)
			g.blind = true
			continue
		}
		g.libraries = append(g.libraries, doc)
	}
}

// part takes a component of a library into n. Keys that the component has and this place has no use for are left out.
func (g *grower) part(n *Node, f *field, pointer, component string) {
	e := reference(n, "part")
	if e == nil || f == nil {
		return
	}
	found, doc := g.findPart(e.Value.Value)
	if found == nil {
		if !g.blind {
			g.refuse(e, pointer, &Problem{Message: g.unknownPart(e.Value.Value)})
		}
		return
	}
	if kind := found.Get("type"); kind == nil || kind.Value != component {
		g.refuse(e, pointer, g.wrongType(e.Value.Value, found, kind, component))
		return
	}
	library := fieldOf(Parts).at("/parts/" + escapePointer(e.Value.Value))
	via := e.Value
	g.sources[via] = source{
		reference: pointer + "/" + escapePointer(g.keyAsWritten(e)), base: pointer, doc: doc,
		inShared: "/parts/" + escapePointer(e.Value.Value),
	}
	body := g.grow(found, library, via, "")
	here := f.keys()
	n.Entries = merge(n.Entries, body.Entries, func(key string) bool {
		return key != "part" && key != "type" && (containsText(here, key) || !containsText(library.keys(), key))
	})
	g.resolved[n] = true
}

// findPart looks a part up in the libraries, the first of that name.
func (g *grower) findPart(name string) (*Node, *Document) {
	for _, doc := range g.libraries {
		if n := doc.Root.Get("parts").Get(name); n != nil && n.Kind == Mapping {
			return n, doc
		}
	}
	return nil, nil
}

// unknownPart words that no library has the part.
func (g *grower) unknownPart(name string) string {
	if len(g.libraries) == 0 {
		return fmt.Sprintf("part '%s' cannot be found: the design names no libraries", shown(name))
	}
	var names []string
	for _, doc := range g.libraries {
		if parts := doc.Root.Get("parts"); parts != nil {
			for _, e := range parts.Entries {
				names = append(names, e.Key)
			}
		}
	}
	message := fmt.Sprintf("no library has a part '%s'", shown(name))
	if near := Nearest(name, names); near != "" {
		message += fmt.Sprintf(": did you mean '%s'?", shown(near))
	}
	return message
}

// wrongType words that the part is another kind of component.
func (g *grower) wrongType(name string, found, kind *Node, component string) *Problem {
	p := &Problem{Message: fmt.Sprintf("part '%s' does not say what it is, a part of type %s is expected here", shown(name), component)}
	at := found
	if kind != nil {
		at = kind
		p.Message = fmt.Sprintf("part '%s' is of type %s, a part of type %s is expected here", shown(name), kindOf(valueOf(kind, nil)), component)
	}
	p.Related = []Related{{Doc: at.Doc, Pointer: "/parts/" + escapePointer(name), Start: at.Start, End: at.End, Message: "in the library"}}
	return p
}
