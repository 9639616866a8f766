package lsp

import (
	"path/filepath"
	"strings"

	"go.lsp.dev/uri"
)

// filePath gives the path that a client's address names, if it is the address of a file. Everything else (untitled:,
// git:, or what does not parse) is no file.
func filePath(address string) (path string, ok bool) {
	if len(address) < len("file:") || !strings.EqualFold(address[:len("file:")], "file:") {
		return "", false
	}
	u, err := uri.Parse(address)
	if err != nil || !u.IsFile() {
		return "", false
	}
	path = u.FsPath()
	if path == "" || strings.ContainsRune(path, 0) || !filepath.IsAbs(path) {
		return "", false
	}
	return filepath.Clean(path), true
}

// fileAddress is the address of a path.
func fileAddress(path string) string {
	path = absolute(path)
	// The library panics on a path with an empty segment at its front; cleaning leaves such a one only to a network path.
	if strings.HasPrefix(filepath.ToSlash(path), "//") {
		return ""
	}
	return string(uri.File(path))
}

func absolute(path string) string {
	if abs, err := filepath.Abs(path); err == nil {
		return abs
	}
	return filepath.Clean(path)
}

// address is how the client knows a document by its name: by its own string where it has it open. The caller holds the
// lock.
func (s *server) address(name string) string {
	for _, d := range s.desks {
		if d.name == name || d.name == absolute(name) {
			return d.uri
		}
	}
	if name == "" || strings.Contains(name, ":") && !filepath.IsAbs(name) {
		return name
	}
	return fileAddress(name)
}
