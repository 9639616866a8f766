package workspace

import (
	"bytes"
	"os"
	"path/filepath"
	"sort"
	"time"

	"halfplane/schema"
)

// linked is what one file refers to, as it was when it was read.
type linked struct {
	to       []string // absolute paths
	doc      *schema.Document
	size     int64
	modified time.Time
}

// Dependents gives the files of the workspace that use the file at path, directly or through another shared file, as
// absolute paths, sorted. Unsaved texts count as they stand.
func (w *Workspace) Dependents(path string) []string {
	users := map[string][]string{} // a file, and those that refer to it
	for _, at := range w.specFiles() {
		for _, to := range w.references(at) {
			users[to] = append(users[to], at)
		}
	}
	var out []string
	seen := map[string]bool{absolute(path): true}
	for next := []string{absolute(path)}; len(next) > 0; next = next[1:] {
		for _, user := range users[next[0]] {
			if !seen[user] {
				seen[user] = true
				out = append(out, user)
				next = append(next, user)
			}
		}
	}
	sort.Strings(out)
	return out
}

// specFiles lists the workspace's spec files and the open texts inside it, as absolute paths.
func (w *Workspace) specFiles() []string {
	var out []string
	seen := map[string]bool{}
	take := func(abs string) {
		if !seen[abs] {
			seen[abs] = true
			out = append(out, abs)
		}
	}
	walker{take: take, fail: func(error) {}}.folder(w.root, ignoresAbove(w.root))
	w.mu.RLock()
	defer w.mu.RUnlock()
	for abs := range w.overlays {
		if within(w.root, abs) || within(w.real, abs) {
			take(abs)
		}
	}
	return out
}

// references gives the absolute paths that a file refers to. They are remembered until the file changes.
func (w *Workspace) references(abs string) []string {
	now := linked{doc: w.overlay(abs)}
	if now.doc == nil && w.past == nil {
		info, err := os.Stat(abs)
		if err != nil {
			return nil
		}
		now.size, now.modified = info.Size(), info.ModTime()
	}
	w.mu.RLock()
	old, ok := w.links[abs]
	w.mu.RUnlock()
	if ok && old.doc == now.doc && old.size == now.size && old.modified.Equal(now.modified) {
		return old.to
	}
	now.to = w.readReferences(abs, now.doc)
	w.mu.Lock()
	defer w.mu.Unlock()
	w.links[abs] = now
	return now.to
}

func (w *Workspace) readReferences(abs string, doc *schema.Document) []string {
	if doc == nil {
		text, err := w.text(abs)
		// Most designs of a large shelf share nothing; they need no parsing to know that.
		if err != nil || (!bytes.Contains(text, []byte("use")) && !bytes.Contains(text, []byte("libraries"))) {
			return nil
		}
		doc = schema.Read(filepath.ToSlash(abs), text, 0)
	}
	var to []string
	References(doc.Root, func(reference string) {
		if at, err := w.locate(abs, reference); err == nil {
			to = append(to, at)
		}
	})
	return to
}

// References calls take with every path that a document's tree refers to: the values of `use` and the items of `libraries`.
func References(n *schema.Node, take func(string)) {
	if n == nil {
		return
	}
	for _, e := range n.Entries {
		switch {
		case e.Key == "use" && e.Value != nil && e.Value.Kind == schema.Scalar:
			take(e.Value.Value)
		case e.Key == "libraries" && e.Value != nil:
			for _, item := range e.Value.Items {
				take(item.Value)
			}
		default:
			References(e.Value, take)
		}
	}
	for _, item := range n.Items {
		References(item, take)
	}
}
