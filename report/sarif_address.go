package report

import (
	"fmt"
	"net/url"
	"path/filepath"
	"slices"
	"strings"

	"halfplane/workspace"
)

// sourceRoot names the folder that addresses are relative to: the git work tree, else the workspace. Where files of several
// such folders are checked, the further ones have a number behind it.
const sourceRoot = "SRCROOT"

// sarifAddresses finds the address of each file: relative to its folder, so that a reader resolves it in a clone of its own and
// nothing is told of the machine.
type sarifAddresses struct {
	roots []string // by the number of their base
	known map[string]sarifAddress
}

// of is a file's address. Its path is as it was given; it may be relative to the working folder. A file outside the root, as a policy
// can be, is in a folder of its own.
func (a *sarifAddresses) of(root, name string) sarifAddress {
	key := root + "\x00" + name
	if at, known := a.known[key]; known {
		return at
	}
	path, inside := workspace.Below(root, name)
	if !inside {
		root = workspace.RootOf(filepath.Dir(filepath.FromSlash(name)))
		if path, inside = workspace.Below(root, name); !inside {
			path = filepath.Base(filepath.FromSlash(name))
		}
	}
	if a.known == nil {
		a.known = map[string]sarifAddress{}
	}
	a.known[key] = sarifAddress{URI: percent(path), Base: a.base(root)}
	return a.known[key]
}

// base is the name of a folder's base.
func (a *sarifAddresses) base(root string) string {
	i := slices.Index(a.roots, root)
	if i < 0 {
		i = len(a.roots)
		a.roots = append(a.roots, root)
	}
	if i == 0 {
		return sourceRoot
	}
	return fmt.Sprintf("%s%d", sourceRoot, i+1)
}

// bases describes the folders. Their addresses are left out: a reader knows where its own clone is.
func (a *sarifAddresses) bases() object {
	var out object
	for i, root := range a.roots {
		words := "The root of the git work tree; outside of one, the folder of the project's policy or the one that was checked."
		if i > 0 {
			words = "A further root, apart from " + sourceRoot + "."
			if rel, err := filepath.Rel(a.roots[0], root); err == nil {
				words = fmt.Sprintf("A further root: %s, seen from %s.", safe(filepath.ToSlash(rel)), sourceRoot)
			}
		}
		out = append(out, member{a.base(root), sarifBase{sarifText{escapedMessage(words)}}})
	}
	return out
}

// percent is a path as a URI reference (RFC 3986).
func percent(path string) string {
	parts := strings.Split(path, "/")
	for i, p := range parts {
		parts[i] = strings.ReplaceAll(url.PathEscape(p), ":", "%3A") // a colon in the first part would look like a scheme
	}
	return strings.Join(parts, "/")
}
