package lsp

import (
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"halfplane/schema"
	"halfplane/workspace"
)

// spaceOf gives the workspace that a document belongs to: the one set for the whole server, else the file's own, else the
// client's folder around it. The caller holds the lock.
func (s *server) spaceOf(name string, isFile bool) *workspace.Workspace {
	root := s.o.Root
	if root == "" && isFile {
		root = s.rootOf(name)
	}
	if root == "" && len(s.folders) > 0 {
		root = s.folders[0]
	}
	if root == "" {
		root = "."
	}
	root = absolute(root)
	w := s.spaces[root]
	if w == nil {
		w = workspace.Open(root)
		s.spaces[root] = w
	}
	return w
}

// rootOf is the workspace folder of a file. Where nothing on disk marks one, the client's folder stands for the one that
// a command line would have named.
func (s *server) rootOf(path string) string {
	own := workspace.RootOf(path)
	if own != filepath.Dir(path) || marked(own) {
		return own
	}
	for _, f := range s.folders {
		if rel, err := filepath.Rel(f, path); err == nil && filepath.IsLocal(rel) {
			return workspace.RootOf(f)
		}
	}
	return own
}

// marked tells whether something in the folder itself makes it a workspace.
func marked(folder string) bool {
	for _, name := range []string{".git", "halfplane.yaml"} {
		if _, err := os.Lstat(filepath.Join(folder, name)); err == nil {
			return true
		}
	}
	return false
}

// adopt lets other documents see this text, and renews the open designs that use it. It does nothing once the text has
// been replaced.
func (s *server) adopt(ctx context.Context, d *desk, snap *snapshot) {
	doc := snap.document()
	links := linksOf(d.space, doc)
	s.mu.Lock()
	defer s.mu.Unlock()
	if ctx.Err() != nil || d.current != snap {
		return
	}
	d.links = links
	d.space.Overlay(d.name, doc)
	if !snap.echo {
		s.renewUsers(d)
	}
}

// renewUsers checks the open documents anew that use this one. The caller holds the lock.
func (s *server) renewUsers(of *desk) {
	if of.kind == schema.Design {
		return
	}
	for _, d := range s.desks {
		if d != of && d.uses(of.name) {
			s.recheck(d)
		}
	}
}

// uses tells whether the document's last check read the file; a policy counts for everything below its folder.
func (d *desk) uses(path string) bool {
	if slices.Contains(d.links, path) {
		return true
	}
	if kind, known := schema.KindOf(path); known && kind == schema.Policy {
		rel, err := filepath.Rel(filepath.Dir(path), d.name)
		return err == nil && filepath.IsLocal(rel)
	}
	return false
}

// recheck checks a document's text once more. The caller holds the lock.
func (s *server) recheck(d *desk) {
	if d.served && !d.lost && d.current != nil {
		d.renew(s.root, d.current.again())
	}
}

// linksOf gives the absolute paths of the shared files that a document uses, directly or through another. A reference
// that leads nowhere now counts too: the file may come.
func linksOf(w *workspace.Workspace, doc *schema.Document) []string {
	var out []string
	var visit func(*schema.Document)
	visit = func(doc *schema.Document) {
		workspace.References(doc.Root, func(reference string) {
			local := filepath.FromSlash(reference)
			if reference == "" || filepath.IsAbs(local) || strings.ContainsRune(reference, 0) {
				return
			}
			path := filepath.Join(filepath.Dir(absolute(doc.Name)), local)
			if slices.Contains(out, path) {
				return
			}
			out = append(out, path)
			if shared, err := w.Resolve(doc, reference); err == nil {
				visit(shared)
			}
		})
	}
	visit(doc)
	return out
}

// filesChanged is told by the client that files changed outside of it.
func (s *server) filesChanged(raw json.RawMessage) error {
	var p watchedParams
	if err := json.Unmarshal(raw, &p); err != nil {
		return err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, c := range p.Changes {
		path, ok := filePath(c.URI)
		if !ok {
			continue
		}
		for _, d := range s.desks {
			if d.name != path && d.uses(path) {
				s.recheck(d)
			}
		}
	}
	return nil
}

// foldersChanged follows the client's workspace folders; documents that are open keep theirs.
func (s *server) foldersChanged(raw json.RawMessage) error {
	var p foldersParams
	if err := json.Unmarshal(raw, &p); err != nil {
		return err
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, f := range p.Event.Removed {
		if path, ok := filePath(f.URI); ok {
			s.folders = slices.DeleteFunc(s.folders, func(at string) bool { return at == path })
		}
	}
	for _, f := range p.Event.Added {
		if path, ok := filePath(f.URI); ok && !slices.Contains(s.folders, path) {
			s.folders = append(s.folders, path)
		}
	}
	return nil
}
