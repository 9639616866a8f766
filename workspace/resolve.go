package workspace

import (
	"fmt"
	"path/filepath"
	"strings"

	"halfplane/schema"
)

// Resolve finds the file that a reference in the document from names: a path relative to that document, inside the
// workspace also when its symbolic links are followed. An unsaved text wins over the disk. Loops of references are found
// by the reader of the references.
func (w *Workspace) Resolve(from *schema.Document, reference string) (*schema.Document, error) {
	abs, err := w.locate(absolute(from.Name), reference)
	if err != nil {
		return nil, err
	}
	return w.shared(abs)
}

// locate is the path part of Resolve: the absolute path that a reference in the file at the absolute path from leads to.
func (w *Workspace) locate(from, reference string) (string, error) {
	if strings.TrimSpace(reference) == "" || strings.ContainsRune(reference, 0) {
		return "", fmt.Errorf("it names no file, expected a path relative to this file")
	}
	local := filepath.FromSlash(reference)
	if filepath.IsAbs(local) || filepath.VolumeName(local) != "" {
		return "", fmt.Errorf("it is an absolute path, expected one relative to this file")
	}
	abs := filepath.Join(filepath.Dir(from), local)
	if !within(w.root, abs) && !within(w.real, abs) {
		return "", fmt.Errorf("it leaves the workspace %s, expected a file inside it", filepath.ToSlash(w.root))
	}
	if w.past != nil { // links are no files there
		return abs, nil
	}
	if real, err := filepath.EvalSymlinks(abs); err == nil && !within(w.real, real) {
		return "", fmt.Errorf("a link leads out of the workspace %s to %s, expected a file inside it",
			filepath.ToSlash(w.root), filepath.ToSlash(real))
	}
	return abs, nil
}
