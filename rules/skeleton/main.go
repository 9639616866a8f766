// Command skeleton writes the start of a new rule: its file, its folder of spec files, and its line in the list.
//
//	go run ./rules/skeleton -group loop my-new-rule
//
// It runs from the repository's root and overwrites nothing.
package main

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
)

func main() {
	group := flag.String("group", "loop", "the catalogue group: declared, operating, plant, loop, transient, review or keeping")
	flag.Parse()
	if flag.NArg() != 1 {
		fmt.Fprintln(os.Stderr, "usage: go run ./rules/skeleton [-group GROUP] NAME")
		os.Exit(2)
	}
	written, err := write(".", *group, flag.Arg(0))
	if err != nil {
		fmt.Fprintln(os.Stderr, "skeleton:", err)
		os.Exit(1)
	}
	fmt.Println("wrote " + strings.Join(written, ", "))
	fmt.Println("now fill in the declaration and the two spec files, then run: go test ./rules")
}

var ruleName = regexp.MustCompile(`^[a-z]+(-[a-z]+)*$`)

// write makes the rule's files below root and says which. Nothing is written when any of them exists.
func write(root, group, name string) ([]string, error) {
	if !ruleName.MatchString(name) {
		return nil, fmt.Errorf("%q is not a rule name: lower-case words joined by hyphens", name)
	}
	list, err := listed(root, group, name)
	if err != nil {
		return nil, err
	}
	folder := filepath.Join(root, "testdata", "rules", name)
	files := map[string]string{
		filepath.Join(root, "rules", strings.ReplaceAll(name, "-", "_")+".go"): ruleSource(group, name),
		filepath.Join(folder, "breaking.converter.yaml"):                       specSource(fmt.Sprintf("  # finds %s on \"22 uH ± 20 %%\"", name)),
		filepath.Join(folder, "quiet.converter.yaml"):                          specSource(""),
	}
	for path := range files {
		if _, err := os.Stat(path); !errors.Is(err, os.ErrNotExist) {
			return nil, fmt.Errorf("%s exists already", path)
		}
	}
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return nil, fmt.Errorf("making %s: %w", folder, err)
	}
	files[filepath.Join(root, "rules", "list.go")] = list
	written := make([]string, 0, len(files))
	for path, text := range files {
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			return nil, fmt.Errorf("writing %s: %w", path, err)
		}
		written = append(written, path)
	}
	return written, nil
}

// listed is list.go with the rule's line at the end of its group.
func listed(root, group, name string) (string, error) {
	path := filepath.Join(root, "rules", "list.go")
	text, err := os.ReadFile(path)
	if err != nil {
		return "", fmt.Errorf("reading %s (run from the repository's root): %w", path, err)
	}
	head := "\t// " + group + "\n"
	before, after, found := strings.Cut(string(text), head)
	if !found {
		return "", fmt.Errorf("%s has no group %q", path, group)
	}
	end := strings.Index(after, "\n\t//")
	if last := strings.Index(after, "\n}"); end < 0 || last < end {
		end = last
	}
	return before + head + after[:end] + "\n\t&" + variable(name) + "," + after[end:], nil
}

// variable is the Go name of a rule: my-new-rule becomes myNewRule.
func variable(name string) string {
	words := strings.Split(name, "-")
	for i, word := range words[1:] {
		words[i+1] = strings.ToUpper(word[:1]) + word[1:]
	}
	return strings.Join(words, "")
}
