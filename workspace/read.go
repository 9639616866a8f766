package workspace

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"halfplane/schema"
)

// MaxSize is the largest spec file that is read, in bytes.
const MaxSize = 4 << 20

// kept is a shared file's document as it was when it was read.
type kept struct {
	doc      *schema.Document
	size     int64
	modified time.Time
}

// maxKept bounds the number of shared documents that are remembered.
const maxKept = 1024

// readText reads one file within the limits. Its errors say, in words for the person who named the file, what was found
// and what was expected.
func readText(path string) ([]byte, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, statReason(path, err)
	}
	if info.IsDir() {
		return nil, errors.New("this is a folder, expected a file")
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("this is %s, expected a file", inWords(info.Mode()))
	}
	if info.Size() > MaxSize {
		return nil, tooLarge(info.Size())
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, openReason(err)
	}
	defer f.Close()
	text, err := io.ReadAll(io.LimitReader(f, MaxSize+1))
	if err != nil {
		return nil, fmt.Errorf("the file could not be read to its end: %w", reason(err))
	}
	if len(text) > MaxSize {
		return nil, tooLarge(int64(len(text)))
	}
	return text, nil
}

// text reads one file of the workspace: from the disk, or from the revision that the workspace shows.
func (w *Workspace) text(abs string) ([]byte, error) {
	if w.past != nil {
		return w.past.text(abs)
	}
	return readText(abs)
}

func tooLarge(size int64) error {
	return fmt.Errorf("the file holds %.1f MB, expected a spec file of at most %d MB", float64(size)/(1<<20), MaxSize>>20)
}

// statReason words why there is nothing to read at path.
func statReason(path string, err error) error {
	link, lerr := os.Lstat(path)
	switch {
	case lerr == nil && link.Mode()&fs.ModeSymlink != 0 && errors.Is(err, fs.ErrNotExist):
		target, _ := os.Readlink(path)
		return fmt.Errorf("this is a link to %s, which does not exist; expected a file", filepath.ToSlash(target))
	case lerr == nil && link.Mode()&fs.ModeSymlink != 0 && !errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("this is a link that leads nowhere (%w); expected a file", reason(err))
	case errors.Is(err, fs.ErrNotExist):
		return errors.New("there is no such file")
	}
	return openReason(err)
}

func openReason(err error) error {
	if errors.Is(err, fs.ErrPermission) {
		return errors.New("the file may not be read: permission denied")
	}
	return fmt.Errorf("the file could not be read: %w", reason(err))
}

// inWords names what stands in a file's place.
func inWords(mode fs.FileMode) string {
	switch {
	case mode&fs.ModeSocket != 0:
		return "a socket"
	case mode&fs.ModeNamedPipe != 0:
		return "a pipe"
	case mode&fs.ModeDevice != 0:
		return "a device"
	}
	return "something other than a file"
}

// shared gives the document of a file that others refer to, from the overlay, from memory or from the disk.
func (w *Workspace) shared(abs string) (*schema.Document, error) {
	if doc := w.overlay(abs); doc != nil {
		return doc, nil
	}
	if w.past != nil {
		text, err := w.past.text(abs)
		if err != nil {
			return nil, err
		}
		return schema.Read(shown(abs), text, 0), nil
	}
	info, err := os.Stat(abs)
	if err != nil {
		return nil, statReason(abs, err)
	}
	w.mu.RLock()
	k, ok := w.disk[abs]
	w.mu.RUnlock()
	if ok && k.size == info.Size() && k.modified.Equal(info.ModTime()) {
		return k.doc, nil
	}
	text, err := readText(abs)
	if err != nil {
		return nil, err
	}
	doc := schema.Read(shown(abs), text, 0)
	w.mu.Lock()
	defer w.mu.Unlock()
	if len(w.disk) >= maxKept {
		clear(w.disk)
	}
	w.disk[abs] = kept{doc, info.Size(), info.ModTime()}
	return doc, nil
}
