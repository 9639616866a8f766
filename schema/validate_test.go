package schema

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// folder resolves references to the files beside the design.
type folder struct{ path string }

func (f folder) Resolve(from *Document, reference string) (*Document, error) {
	if strings.HasPrefix(reference, "../") {
		return nil, errors.New("this leaves the workspace, expected a file inside it")
	}
	text, err := os.ReadFile(filepath.Join(f.path, reference))
	if err != nil {
		return nil, errors.New("there is no such file")
	}
	return Read(reference, text, 0), nil
}

func readFile(t testing.TB, path string) *Document {
	text, err := os.ReadFile(path)
	require.NoError(t, err)
	return Read(filepath.Base(path), text, 0)
}

var mark = regexp.MustCompile(`finds ([a-z-]+) on ("(?:[^"\\]|\\.)*")(?: saying ("(?:[^"\\]|\\.)*"))?`)

// expectation is one mark: a rule, the text that it stands on, and words of its message.
type expectation struct {
	line               int
	rule, text, saying string
}

func (e expectation) String() string {
	return fmt.Sprintf("line %d: %s on %q saying %q", e.line, e.rule, e.text, e.saying)
}

// expectations reads the marks in a file's comments.
func expectations(t testing.TB, text string) []expectation {
	var all []expectation
	for i, line := range strings.Split(text, "\n") {
		for _, m := range mark.FindAllStringSubmatch(line, -1) {
			e := expectation{line: i + 1, rule: m[1]}
			var err error
			e.text, err = strconv.Unquote(m[2])
			require.NoError(t, err)
			if m[3] != "" {
				e.saying, err = strconv.Unquote(m[3])
				require.NoError(t, err)
			}
			all = append(all, e)
		}
	}
	return all
}

func TestMarkedFilesHaveExactlyTheProblemsOfTheirMarks(t *testing.T) {
	files, err := filepath.Glob("testdata/validate/*.yaml")
	require.NoError(t, err)
	policies, err := filepath.Glob("testdata/validate/*/halfplane.yaml")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, path := range append(files, policies...) {
		t.Run(filepath.Base(path), func(t *testing.T) {
			doc := readFile(t, path)
			spec, problems := Validate(doc, folder{"testdata/validate"})
			want := expectations(t, string(doc.Text))
			for _, p := range problems {
				require.Equal(t, doc, p.Doc, p.Message)
				line, found := doc.Position(p.Start).Line, string(doc.Text[p.Start:p.End])
				hit := -1
				for i, e := range want {
					if e.line == line && e.rule == p.Rule && e.text == found && strings.Contains(p.Message, e.saying) {
						hit = i
						break
					}
				}
				if assert.GreaterOrEqual(t, hit, 0, "line %d, unexpected: %s on %q: %s (%s)", line, p.Rule, found, p.Message, p.Pointer) {
					want = append(want[:hit], want[hit+1:]...)
				}
				assertPlain(t, p.Message)
			}
			for _, e := range want {
				assert.Fail(t, "a mark without its problem", e.String())
			}
			if doc.Kind == Design && len(problems) == 0 {
				assert.NotNil(t, spec)
			} else {
				assert.Nil(t, spec)
			}
		})
	}
}

// assertPlain makes sure that a message is in a designer's words.
func assertPlain(t testing.TB, message string) {
	for _, jargon := range []string{"properties", "schema", "$", "#/", "allOf", "anyOf", "object", "string", "array", "null", "jsonschema", "regexp", "\x1f", "\n"} {
		assert.NotContains(t, message, jargon)
	}
	assert.False(t, strings.HasSuffix(message, "."), message)
}

func TestReferenceDesignsValidateWithoutProblem(t *testing.T) {
	files, err := filepath.Glob("../testdata/reference/*.converter.yaml")
	require.NoError(t, err)
	require.NotEmpty(t, files)
	for _, path := range files {
		spec, problems := Validate(readFile(t, path), nil)
		assert.Empty(t, problems, path)
		require.NotNil(t, spec, path)
	}
}

func TestProblemsComeInTheSameOrderEveryTime(t *testing.T) {
	doc := readFile(t, "testdata/validate/five.converter.yaml")
	_, first := Validate(doc, nil)
	require.Len(t, first, 5)
	for range 50 {
		_, again := Validate(doc, nil)
		require.Equal(t, first, again)
	}
	for i := 1; i < len(first); i++ {
		assert.LessOrEqual(t, first[i-1].Start, first[i].Start)
	}
}
