package workspace

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// tree makes files (a name that ends in '/' is a folder) below a new folder, works there, and gives its path.
func tree(t *testing.T, files map[string]string) string {
	t.Helper()
	root := follow(t.TempDir())
	for name, text := range files {
		path := filepath.Join(root, filepath.FromSlash(name))
		if name[len(name)-1] == '/' {
			require.NoError(t, os.MkdirAll(path, 0o777))
			continue
		}
		require.NoError(t, os.MkdirAll(filepath.Dir(path), 0o777))
		require.NoError(t, os.WriteFile(path, []byte(text), 0o666))
	}
	t.Chdir(root)
	return root
}

func TestSearchTakesEveryKindAndLeavesTheRest(t *testing.T) {
	tree(t, map[string]string{
		"a.converter.yaml":               "",
		"b.converter.yml":                "",
		"c.converter.json":               "",
		"common/slow.compensator.yaml":   "",
		"store.parts.yaml":               "",
		"halfplane.yaml":                 "",
		"notes.yaml":                     "",
		"a.converter.yaml.bak":           "",
		".hidden/x.converter.yaml":       "",
		"deep/er/d.converter.yaml":       "",
		".git/x.converter.yaml":          "",
		"node/.cache/cached.parts.json":  "",
		"deep/.secret.converter.yaml":    "",
		"converter.yaml":                 "",
		"deep/er/and/e.compensator.json": "",
	})
	got, err := Search([]string{"."})
	require.NoError(t, err)
	assert.Equal(t, []string{
		"a.converter.yaml", "b.converter.yml", "c.converter.json", "common/slow.compensator.yaml", "deep/er/and/e.compensator.json",
		"deep/er/d.converter.yaml", "halfplane.yaml", "store.parts.yaml",
	}, got)
}

func TestSearchNamesFilesAsGivenAndOnce(t *testing.T) {
	root := tree(t, map[string]string{"shelf/a.converter.yaml": "", ".hidden/b.converter.yaml": "", "c.txt": ""})
	got, err := Search([]string{"./shelf/a.converter.yaml", "shelf", ".hidden/b.converter.yaml", "c.txt", "missing.converter.yaml"})
	require.NoError(t, err)
	assert.Equal(t, []string{"./shelf/a.converter.yaml", ".hidden/b.converter.yaml", "c.txt", "missing.converter.yaml"}, got,
		"a named file is always taken, under the name that was given")
	got, err = Search([]string{filepath.Join(root, "shelf")})
	require.NoError(t, err)
	assert.Equal(t, []string{"shelf/a.converter.yaml"}, got, "found in a folder: relative to the working folder")
}

// Source of the pattern notation: gitignore(5) of git 2.
func TestSearchFollowsIgnoreFiles(t *testing.T) {
	cases := []struct {
		name   string
		ignore map[string]string
		want   []string
	}{
		{"a name anywhere", map[string]string{".gitignore": "old\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
		{"a name with a wildcard", map[string]string{".gitignore": "a.*\n"}, []string{"new/b.converter.yaml", "old/b.converter.yaml"}},
		{"taken back", map[string]string{".gitignore": "*.yaml\n!new/a.converter.yaml\n"}, []string{"new/a.converter.yaml"}},
		{"anchored", map[string]string{".gitignore": "/a.converter.yaml\n/old/\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
		{"folders only", map[string]string{".gitignore": "b.converter.yaml/\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml", "old/a.converter.yaml", "old/b.converter.yaml"}},
		{"a nearer file wins", map[string]string{".gitignore": "b.*\n", "new/.gitignore": "!b.*\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml", "old/a.converter.yaml"}},
		{"comments, blanks and line ends", map[string]string{".gitignore": "# old\r\n\r\nold   \r\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
		{"any depth", map[string]string{".gitignore": "**/old/**\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
		{"braces are plain characters", map[string]string{".gitignore": "{old,new}\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml", "old/a.converter.yaml", "old/b.converter.yaml"}},
		{"a broken pattern matches nothing", map[string]string{".gitignore": "[\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml", "old/a.converter.yaml", "old/b.converter.yaml"}},
		{"the other common name", map[string]string{".ignore": "old\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
		{"excluded by the work tree", map[string]string{".git/info/exclude": "old\n"}, []string{"new/a.converter.yaml", "new/b.converter.yaml"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			files := map[string]string{"new/a.converter.yaml": "", "new/b.converter.yaml": "", "old/a.converter.yaml": "", "old/b.converter.yaml": ""}
			for name, text := range c.ignore {
				files[name] = text
			}
			tree(t, files)
			got, err := Search([]string{"."})
			require.NoError(t, err)
			assert.Equal(t, c.want, got)
		})
	}
}

func TestIgnoreFilesAboveANamedFolderCountFromTheWorkTreeElseTheWorkingFolder(t *testing.T) {
	files := map[string]string{".gitignore": "b.*\n", "top/shelf/a.converter.yaml": "", "top/shelf/b.converter.yaml": ""}
	root := tree(t, files)
	got, err := Search([]string{"top/shelf"})
	require.NoError(t, err)
	assert.Equal(t, []string{"top/shelf/a.converter.yaml"}, got, "below the working folder")
	t.Chdir("top")
	got, err = Search([]string{"shelf"})
	require.NoError(t, err)
	assert.Len(t, got, 2, "what lies above the working folder is somebody else's")
	require.NoError(t, os.MkdirAll(filepath.Join(root, ".git"), 0o777))
	got, err = Search([]string{"shelf"})
	require.NoError(t, err)
	assert.Equal(t, []string{"shelf/a.converter.yaml"}, got, "but inside a work tree it is this project's")
}

func TestSearchEndsOnLoopsOfLinks(t *testing.T) {
	root := tree(t, map[string]string{"shelf/a.converter.yaml": ""})
	require.NoError(t, os.Symlink(root, filepath.Join(root, "shelf", "loop")))
	require.NoError(t, os.Symlink("b.converter.yaml", filepath.Join(root, "shelf", "b.converter.yaml")))
	got, err := Search([]string{"."})
	require.NoError(t, err)
	assert.Equal(t, []string{"shelf/a.converter.yaml", "shelf/b.converter.yaml"}, got, "a link that leads nowhere is reported when it is read")
}

func TestSearchTellsWhatItCannotList(t *testing.T) {
	if os.Getuid() == 0 {
		t.Skip("everything may be listed by this user")
	}
	root := tree(t, map[string]string{"shut/a.converter.yaml": "", "open/b.converter.yaml": ""})
	require.NoError(t, os.Chmod(filepath.Join(root, "shut"), 0))
	t.Cleanup(func() { os.Chmod(filepath.Join(root, "shut"), 0o777) })
	got, err := Search([]string{"."})
	require.Error(t, err)
	assert.Contains(t, err.Error(), "shut")
	assert.Equal(t, []string{"open/b.converter.yaml"}, got)
}

func TestRootIsWorkTreeElseOutermostPolicyElseTheFolder(t *testing.T) {
	root := tree(t, map[string]string{
		"git/.git/HEAD": "", "git/sub/a.converter.yaml": "", "git/sub/halfplane.yaml": "",
		"policy/halfplane.yaml": "", "policy/sub/halfplane.yaml": "", "policy/sub/a.converter.yaml": "",
		"plain/sub/a.converter.yaml": "",
	})
	at := func(s string) string { return filepath.Join(root, filepath.FromSlash(s)) }
	assert.Equal(t, at("git"), RootOf("git/sub/a.converter.yaml"))
	assert.Equal(t, at("git"), RootOf("git"))
	assert.Equal(t, at("policy"), RootOf("policy/sub/a.converter.yaml"))
	assert.Equal(t, at("plain/sub"), RootOf("plain/sub/a.converter.yaml"))
	assert.Equal(t, at("plain"), RootOf("plain"))
	items, err := Find([]string{"plain", "policy", "git/sub/a.converter.yaml"}, "")
	require.NoError(t, err)
	roots := map[string]string{}
	for _, i := range items {
		roots[i.Path] = i.In.Root()
	}
	assert.Equal(t, at("plain"), roots["plain/sub/a.converter.yaml"], "a file in a searched folder belongs to that folder")
	assert.Equal(t, at("policy"), roots["policy/sub/a.converter.yaml"])
	assert.Equal(t, at("git"), roots["git/sub/a.converter.yaml"])
	items, err = Find([]string{"plain"}, at("."))
	require.NoError(t, err)
	assert.Equal(t, root, items[0].In.Root())
}
