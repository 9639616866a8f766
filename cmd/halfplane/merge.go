package main

import (
	"fmt"
	"os"
	"path/filepath"
	"sort"

	"halfplane/report"
	"halfplane/workspace"
)

// joined reads results of several checks into one, in the order of the files' paths. The same file in two of them must say
// the same.
func joined(names []string) ([]workspace.File, error) {
	var all []workspace.File
	from := map[string]int{} // a path's place in all
	origin := map[string]string{}
	version := ""
	for i, name := range names {
		text, err := os.ReadFile(name)
		if err != nil {
			return nil, fmt.Errorf("--merge: %w", err)
		}
		files, by, err := report.Read(filepath.ToSlash(name), text)
		if err != nil {
			return nil, fmt.Errorf("--merge: %w", err)
		}
		if i > 0 && by != version {
			return nil, fmt.Errorf("--merge: %s was written by version %s and %s by version %s: check both with one", names[0], version, name, by)
		}
		version = by
		for _, f := range files {
			at, twice := from[f.Path]
			switch {
			case !twice:
				from[f.Path] = len(all)
				origin[f.Path] = name
				all = append(all, f)
			case !report.SameFile(all[at], f):
				return nil, fmt.Errorf("--merge: %s and %s say different things about %s", origin[f.Path], name, f.Path)
			}
		}
	}
	sort.SliceStable(all, func(i, j int) bool { return all[i].Path < all[j].Path })
	return all, nil
}
