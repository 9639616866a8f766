package workspace

import (
	"os"
	"path"
	"path/filepath"
	"strings"

	"github.com/bmatcuk/doublestar/v4"
)

// ignoreLine is one pattern of an ignore file, in the notation of gitignore(5).
type ignoreLine struct {
	base    string // absolute folder that the pattern is relative to
	pattern string // for doublestar, with '/' between segments
	again   bool   // "!pattern": take back what an earlier line left out
	folders bool   // "pattern/": folders only
}

// ignoreList is a stack of patterns; later ones win.
type ignoreList []ignoreLine

// ignores tells whether the entry at the absolute path is left out.
func (l ignoreList) ignores(abs string, folder bool) bool {
	for i := len(l) - 1; i >= 0; i-- {
		line := l[i]
		if line.folders && !folder {
			continue
		}
		rel, err := filepath.Rel(line.base, abs)
		if err != nil {
			continue
		}
		if ok, err := doublestar.Match(line.pattern, filepath.ToSlash(rel)); err == nil && ok {
			return !line.again
		}
	}
	return false
}

// with adds the patterns of the ignore files that lie in folder. The list itself is not written to.
func (l ignoreList) with(folder string) ignoreList {
	out := l[:len(l):len(l)]
	for _, name := range []string{".gitignore", ".ignore"} {
		out = append(out, readIgnore(filepath.Join(folder, name), folder)...)
	}
	return out
}

// ignoresAbove collects what the ignore files above folder say, from the git work tree's root downwards, without a work tree
// from the working folder where folder lies below it. What lies further up is somebody else's.
func ignoresAbove(folder string) ignoreList {
	root := rootAbove(folder)
	var above []string
	for dir := folder; dir != root; dir = filepath.Dir(dir) {
		above = append(above, filepath.Dir(dir))
	}
	list := ignoreList(readIgnore(filepath.Join(root, ".git", "info", "exclude"), root))
	for i := len(above) - 1; i >= 0; i-- {
		list = list.with(above[i])
	}
	return list
}

// rootAbove is the folder from which ignore files count for folder.
func rootAbove(folder string) string {
	for dir := folder; ; dir = filepath.Dir(dir) {
		if exists(filepath.Join(dir, ".git")) {
			return dir
		}
		if filepath.Dir(dir) == dir {
			break
		}
	}
	if here := absolute("."); within(here, folder) {
		return here
	}
	return folder
}

// maxIgnore bounds the size of an ignore file that is read: larger ones are no ignore files.
const maxIgnore = 1 << 20

func readIgnore(file, base string) []ignoreLine {
	info, err := os.Stat(file)
	if err != nil || !info.Mode().IsRegular() || info.Size() > maxIgnore {
		return nil
	}
	text, err := os.ReadFile(file)
	if err != nil {
		return nil
	}
	var lines []ignoreLine
	for _, s := range strings.Split(strings.TrimPrefix(string(text), "\ufeff"), "\n") {
		if line, ok := parseIgnore(strings.TrimSuffix(s, "\r"), base); ok {
			lines = append(lines, line)
		}
	}
	return lines
}

// parseIgnore reads one line as gitignore(5) describes it.
func parseIgnore(s, base string) (ignoreLine, bool) {
	line := ignoreLine{base: base}
	for strings.HasSuffix(s, " ") && !strings.HasSuffix(s, `\ `) {
		s = s[:len(s)-1]
	}
	if s == "" || s[0] == '#' {
		return line, false
	}
	if s[0] == '!' {
		line.again = true
		s = s[1:]
	}
	if strings.HasSuffix(s, "/") {
		line.folders = true
		s = strings.TrimSuffix(s, "/")
	}
	anchored := strings.Contains(s, "/")
	s = strings.TrimPrefix(s, "/")
	if s == "" {
		return line, false
	}
	if !anchored {
		s = path.Join("**", s)
	}
	if strings.HasSuffix(s, "/**") {
		s += "/*" // everything inside, not the folder itself
	}
	line.pattern = strings.NewReplacer("{", `\{`, "}", `\}`).Replace(s)
	return line, doublestar.ValidatePattern(line.pattern)
}
