package workspace

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"sort"
	"strconv"
	"strings"
	"sync"

	"halfplane/schema"
)

// past is the files of one revision of a git repository, read from its objects: the work tree is neither read nor touched.
type past struct {
	ctx   context.Context
	top   string            // absolute path of the work tree, under which the files are shown
	blobs map[string]string // objects, by absolute path

	mu    sync.Mutex
	texts map[string][]byte // by absolute path
}

// AtRevision opens the workspace of a git work tree as it was at a revision.
func AtRevision(ctx context.Context, top, revision string) (*Workspace, error) {
	commit, err := commitOf(ctx, top, revision)
	if err != nil {
		return nil, err
	}
	listing, err := git(ctx, top, "ls-tree", "-r", "-z", "--full-tree", commit)
	if err != nil {
		return nil, err
	}
	p := &past{ctx: ctx, top: top, blobs: map[string]string{}, texts: map[string][]byte{}}
	for _, entry := range strings.Split(string(listing), "\x00") {
		about, name, ok := strings.Cut(entry, "\t") // MODE blob OBJECT <tab> PATH; a link or a submodule is no file here
		fields := strings.Fields(about)
		if ok && len(fields) == 3 && strings.HasPrefix(fields[0], "100") {
			p.blobs[filepath.Join(top, filepath.FromSlash(name))] = fields[2]
		}
	}
	if err := p.load(); err != nil {
		return nil, err
	}
	w := Open(top)
	w.past = p
	return w, nil
}

// specs lists the spec files of a kind at or below a folder, or the one at the path, sorted.
func (p *past) specs(at string, kind schema.Kind) []string {
	var out []string
	for abs := range p.blobs {
		if k, ok := schema.KindOf(filepath.Base(abs)); ok && k == kind && (abs == at || within(at, abs)) {
			out = append(out, abs)
		}
	}
	sort.Strings(out)
	return out
}

// load reads every spec file of the revision in one go.
func (p *past) load() error {
	var paths []string
	var input bytes.Buffer
	for abs, object := range p.blobs {
		if _, spec := schema.KindOf(filepath.Base(abs)); spec {
			paths = append(paths, abs)
			input.WriteString(object + "\n")
		}
	}
	if len(paths) == 0 {
		return nil
	}
	out, err := gitReading(p.ctx, p.top, input.Bytes(), "cat-file", "--batch")
	if err != nil {
		return err
	}
	for _, abs := range paths {
		head, rest, ok := bytes.Cut(out, []byte("\n")) // OBJECT blob SIZE, the text, a line end
		fields := strings.Fields(string(head))
		if !ok || len(fields) != 3 {
			return fmt.Errorf("git: the object of %s cannot be read: %s", shown(abs), head)
		}
		size, err := strconv.Atoi(fields[2])
		if err != nil || size+1 > len(rest) {
			return fmt.Errorf("git: the object of %s is cut off", shown(abs))
		}
		p.texts[abs], out = rest[:size:size], rest[size+1:]
	}
	return nil
}

func (p *past) has(abs string) bool { return p.blobs[abs] != "" }

// text is a file's text at the revision.
func (p *past) text(abs string) ([]byte, error) {
	p.mu.Lock()
	defer p.mu.Unlock()
	text, known := p.texts[abs]
	if !known {
		object := p.blobs[abs]
		if object == "" {
			return nil, errors.New("there is no such file in that revision")
		}
		var err error
		if text, err = git(p.ctx, p.top, "cat-file", "blob", object); err != nil {
			return nil, err
		}
		p.texts[abs] = text
	}
	if len(text) > MaxSize {
		return nil, tooLarge(int64(len(text)))
	}
	return text, nil
}
