package workspace

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strings"

	"halfplane/schema"
)

// Pair is one design before and after a change.
type Pair struct {
	Path     string // as it is shown: of the new side, where there is one
	From     string // the path on the old side, where it is another
	Old, New *Item  // nil: it is not there
}

// side is the designs that are compared, by their path within what was named.
type side struct {
	named  string
	single bool
	items  map[string]Item
}

// Pairs matches the designs of two files, two folders, two git revisions, or a revision and what is at a path now. Designs are
// matched by their path; what is left over on both sides by title and topology, where those are unambiguous. limits are paths that revisions
// are limited to (default: the working folder). A name that is a path is one; a revision can also be written as REV:path.
func Pairs(ctx context.Context, before, after string, limits []string, root string) ([]Pair, error) {
	a, err := namedSide(ctx, before, after, limits, root)
	if err != nil {
		return nil, err
	}
	b, err := namedSide(ctx, after, before, limits, root)
	if err != nil {
		return nil, err
	}
	if a.single != b.single {
		return nil, fmt.Errorf("%s and %s cannot be compared: one is a design, the other a folder", before, after)
	}
	if a.single {
		return []Pair{onePair(a, b)}, nil
	}
	return matched(a, b), nil
}

func onePair(a, b side) Pair {
	var p Pair
	for _, item := range a.items {
		p.Old, p.From = &item, item.Path
	}
	for _, item := range b.items {
		p.New, p.Path = &item, item.Path
	}
	if p.From == p.Path {
		p.From = ""
	}
	return p
}

// namedSide opens one side; other is what stands on the other.
func namedSide(ctx context.Context, name, other string, limits []string, root string) (side, error) {
	info, err := os.Stat(name)
	switch {
	case err == nil && len(limits) > 0 && isPath(other):
		return side{}, errors.New("paths behind OLD and NEW belong to git revisions")
	case err == nil && info.IsDir():
		return diskFolder(name, root)
	case err == nil:
		items, err := Find([]string{name}, root)
		return side{name, true, map[string]Item{"": items[0]}}, err
	}
	revision, path, within := strings.Cut(name, ":")
	at := "."
	switch {
	case within:
		at = path
		if at == "" {
			at = "."
		}
	case isPath(other):
		at = other
	}
	top := workTree(absolute(at))
	if info, err := os.Stat(at); err != nil || !info.IsDir() {
		top = workTree(filepath.Dir(absolute(at)))
	}
	if top == "" {
		return side{}, fmt.Errorf("there is no file or folder %s, and no git work tree here in which it could be a revision", name)
	}
	w, err := AtRevision(ctx, top, revision)
	if err != nil {
		return side{}, fmt.Errorf("there is no file or folder %s, and as a revision: %w", name, err)
	}
	if len(limits) == 0 || within || isPath(other) {
		limits = []string{at}
	}
	return pastSide(name, w, limits, isPath(other) || within)
}

func isPath(name string) bool {
	_, err := os.Stat(name)
	return err == nil
}

// diskFolder is the designs in a folder.
func diskFolder(name, root string) (side, error) {
	items, err := Find([]string{name}, root)
	s := side{named: name, items: map[string]Item{}}
	for _, item := range items {
		if kind, _ := schema.KindOf(filepath.Base(item.Path)); kind == schema.Design {
			s.items[below(absolute(name), absolute(item.Path))] = item
		}
	}
	return s, err
}

// pastSide is the designs at some paths of a revision. relative: named by their path below the one path that there is.
func pastSide(name string, w *Workspace, limits []string, relative bool) (side, error) {
	s := side{named: name, items: map[string]Item{}}
	for _, limit := range limits {
		at := absolute(limit)
		if relative && w.past.has(at) {
			return side{name, true, map[string]Item{"": {Path: shown(at), In: w}}}, nil
		}
		for _, abs := range w.past.specs(at, schema.Design) {
			key := below(w.root, abs)
			if relative {
				key = below(at, abs)
			}
			s.items[key] = Item{Path: shown(abs), In: w}
		}
	}
	if relative && len(s.items) == 0 {
		return s, fmt.Errorf("there is no design at %s in %s", limits[0], name)
	}
	return s, nil
}

// below is a path relative to a folder, with '/'.
func below(folder, abs string) string {
	rel, err := filepath.Rel(folder, abs)
	if err != nil {
		return filepath.ToSlash(abs)
	}
	return filepath.ToSlash(rel)
}

// matched pairs the designs of two sides, sorted by path.
func matched(a, b side) []Pair {
	var pairs []Pair
	left := map[string]Item{}
	for key, item := range a.items {
		if after, both := b.items[key]; both {
			pairs = append(pairs, Pair{Path: after.Path, Old: &item, New: &after})
		} else {
			left[key] = item
		}
	}
	come := map[string]Item{}
	for key, item := range b.items {
		if _, both := a.items[key]; !both {
			come[key] = item
		}
	}
	gone, fresh := byName(left), byName(come)
	for name, from := range gone {
		if to := fresh[name]; name != "" && len(from) == 1 && len(to) == 1 {
			before, after := left[from[0]], come[to[0]]
			pairs = append(pairs, Pair{Path: after.Path, From: before.Path, Old: &before, New: &after})
			delete(left, from[0])
			delete(come, to[0])
		}
	}
	for _, item := range left {
		pairs = append(pairs, Pair{Path: item.Path, Old: &item})
	}
	for _, item := range come {
		pairs = append(pairs, Pair{Path: item.Path, New: &item})
	}
	sort.Slice(pairs, func(i, j int) bool { return pairs[i].Path < pairs[j].Path })
	return pairs
}

// byName groups designs by title and topology, as far as their text tells.
func byName(items map[string]Item) map[string][]string {
	names := map[string][]string{}
	for key, item := range items {
		name := ""
		if doc, err := item.In.shared(absolute(item.Path)); err == nil && doc.Root != nil {
			title, topology := doc.Find("/title"), doc.Find("/topology")
			if title != nil && topology != nil {
				name = topology.Value + " " + title.Value
			}
		}
		names[name] = append(names[name], key)
	}
	return names
}
