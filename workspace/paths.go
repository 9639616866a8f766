package workspace

import (
	"net/url"
	"os"
	"path/filepath"
	"strings"
)

// absolute turns a path, or a file: address as an editor names its documents, into a cleaned absolute path.
func absolute(name string) string {
	if strings.HasPrefix(name, "file:") {
		if u, err := url.Parse(name); err == nil && u.Path != "" {
			name = filepath.FromSlash(u.Path)
		}
	}
	abs, err := filepath.Abs(name)
	if err != nil {
		return filepath.Clean(name)
	}
	return abs
}

// follow resolves symbolic links; a path that cannot be resolved stays as it is.
func follow(path string) string {
	if real, err := filepath.EvalSymlinks(path); err == nil {
		return real
	}
	return path
}

// within tells whether path is root or lies below it; both are absolute and cleaned.
func within(root, path string) bool {
	rel, err := filepath.Rel(root, path)
	return err == nil && rel != ".." && !strings.HasPrefix(rel, ".."+string(filepath.Separator))
}

// Below is a file's path relative to a folder, with '/' between its parts; ok is false where the file lies elsewhere.
func Below(folder, name string) (path string, ok bool) {
	root, abs := absolute(folder), absolute(name)
	if !within(root, abs) {
		root, abs = follow(root), filepath.Join(follow(filepath.Dir(abs)), filepath.Base(abs))
	}
	if folder == "" || !within(root, abs) {
		return "", false
	}
	rel, err := filepath.Rel(root, abs)
	return filepath.ToSlash(rel), err == nil
}

// shown is an absolute path as a person reads it: relative to the working folder where it lies below it.
func shown(abs string) string {
	if here, err := filepath.Abs("."); err == nil && within(here, abs) {
		if rel, err := filepath.Rel(here, abs); err == nil {
			return filepath.ToSlash(rel)
		}
	}
	return filepath.ToSlash(abs)
}

// RootOf finds the workspace of a file or folder: its git work tree, else the outermost folder at or above it that holds a
// halfplane.yaml, else the folder itself (of a file: its folder).
func RootOf(path string) string {
	folder := absolute(path)
	if info, err := os.Stat(folder); err != nil || !info.IsDir() {
		folder = filepath.Dir(folder)
	}
	return rootOf(folder, folder)
}

// rootOf is RootOf for an absolute folder; otherwise is the answer where neither a git work tree nor a policy file is found.
func rootOf(folder, otherwise string) string {
	root := otherwise
	for dir := folder; ; dir = filepath.Dir(dir) {
		if exists(filepath.Join(dir, ".git")) {
			return dir
		}
		if exists(filepath.Join(dir, "halfplane.yaml")) {
			root = dir
		}
		if filepath.Dir(dir) == dir {
			return root
		}
	}
}

func exists(path string) bool {
	_, err := os.Lstat(path)
	return err == nil
}
