package workspace

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"sort"
	"strings"

	"halfplane/schema"
)

// Item is one file to check and the workspace that its references are followed in.
type Item struct {
	Path string // as it is shown
	In   *Workspace
}

// Search gives the spec files at the paths, sorted: folders are searched for every kind of spec file, without hidden
// entries and what ignore files leave out; a named file is always taken, also when it does not exist (checking it says
// so). Folders that cannot be listed are named in the error; the other files are still returned.
func Search(paths []string) ([]string, error) {
	found, err := search(paths)
	out := make([]string, len(found))
	for i, f := range found {
		out[i] = f.path
	}
	return out, err
}

// Find is Search with each file's workspace beside it. A root that is not empty is the workspace of all of them.
func Find(paths []string, root string) ([]Item, error) {
	found, err := search(paths)
	open := map[string]*Workspace{}
	roots := map[string]string{}
	items := make([]Item, len(found))
	for i, f := range found {
		at := root
		if at == "" {
			key := f.folder + "\x00" + filepath.Dir(absolute(f.path))
			if roots[key] == "" {
				roots[key] = rootOf(filepath.Dir(absolute(f.path)), f.folder)
			}
			at = roots[key]
		}
		if open[at] == nil {
			open[at] = Open(at)
		}
		items[i] = Item{Path: f.path, In: open[at]}
	}
	return items, err
}

// found is a file and the folder that was named for it (of a named file: its own folder).
type found struct{ path, folder string }

func search(paths []string) ([]found, error) {
	var out []found
	var errs []error
	seen := map[string]bool{}
	take := func(path, abs, folder string) {
		if !seen[abs] {
			seen[abs] = true
			out = append(out, found{path, folder})
		}
	}
	for _, p := range paths {
		abs := absolute(p)
		if !searchable(abs) {
			take(filepath.ToSlash(p), abs, filepath.Dir(abs))
			continue
		}
		walk := walker{
			take: func(at string) { take(shown(at), at, abs) },
			fail: func(err error) { errs = append(errs, err) },
		}
		walk.folder(abs, ignoresAbove(abs))
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].path < out[j].path })
	return out, errors.Join(errs...)
}

// searchable tells a folder from everything that is read as a file. A folder named like a spec file is not searched:
// someone expects a file there and is told.
func searchable(abs string) bool {
	if _, spec := schema.KindOf(filepath.Base(abs)); spec {
		return false
	}
	info, err := os.Stat(abs)
	return err == nil && info.IsDir()
}

// walker searches folders. Symbolic links to folders are not followed, so no walk can go round in a loop.
type walker struct {
	take func(abs string)
	fail func(error)
}

func (w walker) folder(dir string, above ignoreList) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		w.fail(fmt.Errorf("searching %s: %w", shown(dir), reason(err)))
	}
	ignore := above.with(dir)
	for _, e := range entries {
		abs := filepath.Join(dir, e.Name())
		if strings.HasPrefix(e.Name(), ".") || ignore.ignores(abs, e.IsDir()) {
			continue
		}
		if _, spec := schema.KindOf(e.Name()); spec {
			w.take(abs)
		} else if e.IsDir() {
			w.folder(abs, ignore)
		}
	}
}

// reason is an error of the operating system without the operation and the path, which its reader has already seen.
func reason(err error) error {
	var p *fs.PathError
	if errors.As(err, &p) {
		return p.Err
	}
	return err
}
