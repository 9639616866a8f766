package workspace

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"strings"
)

// Since keeps the items that differ from a git revision, and those that use a file that does: a compensator, a parts library, the nearest
// policy, also one that is gone. What counts is the work tree as it is, whether committed, staged, or neither, new files that are not ignored
// included. A revision that ends in three dots stands for the last commit that it has in common with HEAD. Errors: a file outside any git work tree, a revision that is
// none, no git program.
func Since(ctx context.Context, items []Item, revision, policy string) ([]Item, error) {
	trees := map[string]map[string]bool{} // what changed, by the work tree's folder
	var kept []Item
	for _, item := range items {
		abs := absolute(item.Path)
		top := workTree(filepath.Dir(abs))
		if top == "" {
			return nil, fmt.Errorf("%s is in no git work tree", item.Path)
		}
		if trees[top] == nil {
			changed, err := changedSince(ctx, top, revision)
			if err != nil {
				return nil, err
			}
			trees[top] = changed
		}
		if item.In.differs(abs, top, policy, trees[top]) {
			kept = append(kept, item)
		}
	}
	return kept, nil
}

// workTree is the folder of the git work tree that a folder is in, "" for none. A linked work tree has a file in the place of .git.
func workTree(folder string) string {
	for {
		if exists(filepath.Join(folder, ".git")) {
			return folder
		}
		above := filepath.Dir(folder)
		if above == folder {
			return ""
		}
		folder = above
	}
}

// changedSince gives the absolute paths of the files in a work tree that differ from a revision, deleted ones included.
func changedSince(ctx context.Context, top, revision string) (map[string]bool, error) {
	commit, err := commitOf(ctx, top, revision)
	if err != nil {
		return nil, err
	}
	changed := map[string]bool{}
	for _, args := range [][]string{
		{"diff", "--name-only", "-z", "--no-renames", "--no-ext-diff", "--ignore-submodules", commit, "--"},
		{"ls-files", "-z", "--others", "--exclude-standard", "--full-name"},
	} {
		out, err := git(ctx, top, args...)
		if err != nil {
			return nil, err
		}
		for _, name := range bytes.Split(out, []byte{0}) {
			if len(name) > 0 {
				changed[filepath.Join(top, filepath.FromSlash(string(name)))] = true
			}
		}
	}
	return changed, nil
}

// commitOf is the commit that a revision names.
func commitOf(ctx context.Context, top, revision string) (string, error) {
	name, common := strings.CutSuffix(revision, "...")
	if name == "" || strings.HasPrefix(name, "-") || strings.Contains(name, "..") {
		return "", fmt.Errorf("%q is no revision: expected a commit, a branch or a tag, or one with '...' behind it", revision)
	}
	out, err := git(ctx, top, "rev-parse", "--verify", "--quiet", "--end-of-options", name+"^{commit}")
	if errors.Is(err, errNoGit) {
		return "", err
	}
	if err != nil {
		return "", fmt.Errorf("git knows no revision %q in %s", name, shown(top))
	}
	commit := strings.TrimSpace(string(out))
	if common {
		if out, err = git(ctx, top, "merge-base", commit, "HEAD"); err != nil {
			return "", fmt.Errorf("%q and HEAD have no commit in common here (a shallow clone does not have it)", name)
		}
		commit = strings.TrimSpace(string(out))
	}
	return commit, nil
}

// differs says whether the file at an absolute path, or anything that it is judged with, is among the changed files.
func (w *Workspace) differs(abs, top, policy string, changed map[string]bool) bool {
	if changed[abs] || policy != "" && changed[absolute(policy)] {
		return true
	}
	seen := map[string]bool{abs: true}
	for next := []string{abs}; len(next) > 0; next = next[1:] {
		for _, to := range w.references(next[0]) {
			if changed[to] || changed[follow(to)] {
				return true
			}
			if !seen[to] {
				seen[to] = true
				next = append(next, to)
			}
		}
	}
	return policy == "" && policyDiffers(filepath.Dir(abs), top, changed)
}

// policyDiffers says whether the nearest policy at or above a folder has changed, come or gone.
func policyDiffers(folder, top string, changed map[string]bool) bool {
	for within(top, folder) {
		at := filepath.Join(folder, policyName)
		if changed[at] {
			return true
		}
		if exists(at) {
			return false
		}
		folder = filepath.Dir(folder)
	}
	return false
}
