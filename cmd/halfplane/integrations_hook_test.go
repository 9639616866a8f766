package main

import (
	"path/filepath"
	"regexp"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/schema"
)

// The hook runner's declaration fires for what the program reads; integrations/test.sh runs its entries.
func TestIntegrationsTheHookDeclarationFitsTheProgram(t *testing.T) {
	var hooks []struct {
		ID, Entry, Language, Files string
		AlwaysRun                  bool `yaml:"always_run"`
		PassFilenames              bool `yaml:"pass_filenames"`
	}
	parsed(t, ".pre-commit-hooks.yaml", &hooks)
	require.Len(t, hooks, 2)
	assert.True(t, hooks[0].AlwaysRun, "a deleted file is none that a runner would name")
	for _, hook := range hooks {
		assert.Equal(t, "golang", hook.Language)
		assert.False(t, hook.PassFilenames, "a shared file alone does not say which designs use it")
	}
	files := regexp.MustCompile(hooks[1].Files)
	for name, want := range map[string]bool{
		"a.converter.yaml": true, "b/a.converter.yml": true, "a.converter.json": true, "x.compensator.yaml": true, "x.parts.yml": true,
		"halfplane.yaml": true, "b/halfplane.yaml": true, "nothalfplane.yaml": false, "a.yaml": false, "a.converter.yaml.bak": false,
	} {
		_, spec := schema.KindOf(filepath.Base(name))
		assert.Equal(t, want, spec, name)
		assert.Equal(t, want, files.MatchString(name), name)
	}
}
