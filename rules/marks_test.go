package rules

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/schema"
)

// today is the day on which the files' waivers are judged.
const today = "2030-06-30"

const (
	shelf     = "../testdata/rules"
	reference = "../testdata/reference"
)

// folder resolves references to files relative to the referring file.
type folder struct{}

func (folder) Resolve(from *schema.Document, name string) (*schema.Document, error) {
	path := filepath.Join(filepath.Dir(from.Name), filepath.FromSlash(name))
	text, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("reading %s: %w", name, err)
	}
	return schema.Read(path, text, 0), nil
}

// check reads a spec file and gives everything that the rules say about it, exactly as the program does.
func check(t testing.TB, path string, settings Settings) ([]Finding, *Case) {
	t.Helper()
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	return checkText(t, path, text, settings)
}

func checkText(t testing.TB, path string, text []byte, settings Settings) ([]Finding, *Case) {
	t.Helper()
	doc := schema.Read(path, text, 0)
	c, problems, err := Prepare(context.Background(), doc, folder{}, settings, analysis.Options{Depth: analysis.Full})
	require.NoError(t, err)
	if c == nil {
		require.NotEmpty(t, problems)
		return FromProblems(problems), nil
	}
	return Run(c, RunOptions{Today: today}), c
}

// mark is one expectation: a rule, the exact text that its finding covers, and the line on which that text starts.
type mark struct {
	line       int
	rule, text string
}

var markPattern = regexp.MustCompile(`finds ([a-z-]+) on "((?:[^"\\]|\\.)*)"`)

// marksOf reads the marks in a text's comments: # finds RULE on "TEXT". A text of several lines is marked by its first.
func marksOf(text string) []mark {
	var marks []mark
	for number, line := range strings.Split(text, "\n") {
		_, comment, found := strings.Cut(line, "# ")
		if !found {
			continue
		}
		for _, m := range markPattern.FindAllStringSubmatch(comment, -1) {
			marks = append(marks, mark{number + 1, m[1], strings.ReplaceAll(m[2], `\"`, `"`)})
		}
	}
	return marks
}

// found is what a finding looks like as a mark.
func found(f Finding) mark {
	text, _, _ := strings.Cut(string(f.Doc.Text[f.Start:f.End]), "\n")
	text, _, _ = strings.Cut(text, "   # ") // a mapping's first line holds its mark
	return mark{f.Doc.Position(f.Start).Line, f.Rule, strings.TrimRight(text, " \r")}
}

func TestFindingsAreExactlyTheMarkedOnes(t *testing.T) {
	files, err := filepath.Glob(shelf + "/*/*.converter.*")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, path := range files {
		if strings.HasSuffix(path, ".marks") {
			continue
		}
		t.Run(strings.TrimPrefix(filepath.ToSlash(path), shelf+"/"), func(t *testing.T) {
			findings, _ := check(t, path, Settings{})
			text, err := os.ReadFile(path)
			require.NoError(t, err)
			if sibling, err := os.ReadFile(path + ".marks"); err == nil {
				text = sibling
			}
			want, got := marksOf(string(text)), []mark{}
			messages := map[mark]string{}
			for _, f := range findings {
				m := found(f)
				if f.Rule == notAssessed.Name && slices.Contains(got, m) {
					continue // one note for each rule stands at the same place
				}
				got = append(got, m)
				messages[m] = f.Message
			}
			for _, m := range got {
				if !slices.Contains(want, m) {
					t.Errorf("line %d: no mark for %s on %q: %s", m.line, m.rule, m.text, messages[m])
				}
			}
			for _, m := range want {
				if !slices.Contains(got, m) {
					t.Errorf("line %d: mark without a finding: %s on %q", m.line, m.rule, m.text)
				}
			}
			assert.Len(t, got, len(want), "each finding once")
		})
	}
}

// TestMarksOfJSONStandBesideIt keeps the sibling form honest: every line of a .marks file is the JSON file's own line with a
// comment behind it.
func TestMarksOfJSONStandBesideIt(t *testing.T) {
	files, err := filepath.Glob(shelf + "/*/*.json.marks")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, path := range files {
		marked, err := os.ReadFile(path)
		require.NoError(t, err)
		plain, err := os.ReadFile(strings.TrimSuffix(path, ".marks"))
		require.NoError(t, err)
		var stripped []string
		for _, line := range strings.Split(string(marked), "\n") {
			line, _, _ = strings.Cut(line, "   # ")
			stripped = append(stripped, line)
		}
		assert.Equal(t, string(plain), strings.Join(stripped, "\n"), path)
	}
}
