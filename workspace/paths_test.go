package workspace

import (
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestBelowIsAPathSeenFromAFolderThatHoldsIt(t *testing.T) {
	top := t.TempDir()
	folder := filepath.Join(top, "shelf")
	require.NoError(t, os.Mkdir(folder, 0o777))
	require.NoError(t, os.Symlink(folder, filepath.Join(top, "link")))
	for _, c := range []struct {
		folder, name, want string
		ok                 bool
	}{
		{folder, folder + "/pumps/a.converter.yaml", "pumps/a.converter.yaml", true},
		{folder, folder + "/pumps/../a.converter.yaml", "a.converter.yaml", true},
		{folder, top + "/link/a.converter.yaml", "a.converter.yaml", true},
		{top + "/link", folder + "/a.converter.yaml", "a.converter.yaml", true},
		{folder, top + "/a.converter.yaml", "", false},
		{folder, folder + "-two/a.converter.yaml", "", false},
		{"", folder + "/a.converter.yaml", "", false},
	} {
		got, ok := Below(c.folder, c.name)
		assert.Equal(t, c.want, got, c.name)
		assert.Equal(t, c.ok, ok, c.name)
	}
	t.Chdir(folder)
	got, ok := Below(top, "pumps/a.converter.yaml")
	assert.True(t, ok)
	assert.Equal(t, "shelf/pumps/a.converter.yaml", got, "relative to the working folder")
}
