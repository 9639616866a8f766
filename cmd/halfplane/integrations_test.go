package main

import (
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	yaml "go.yaml.in/yaml/v4"

	"halfplane/schema"
)

func parsed(t *testing.T, path string, into any) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", path))
	require.NoError(t, err)
	require.NoError(t, yaml.Unmarshal(text, into))
}

// The systems themselves are not here to run these files; what can be held is that they parse, that every job has what a job needs, and that
// jobs wait for jobs that exist.
func TestTheWorkflowFilesAreWhole(t *testing.T) {
	var actions struct {
		Jobs map[string]struct {
			RunsOn string `yaml:"runs-on"`
			Needs  string
			Steps  []struct{ Uses, Run string }
		}
	}
	parsed(t, "integrations/ci/github-actions.yml", &actions)
	require.Len(t, actions.Jobs, 3)
	for name, job := range actions.Jobs {
		assert.NotEmpty(t, job.RunsOn, name)
		assert.NotEmpty(t, job.Steps, name)
		for _, step := range job.Steps {
			assert.True(t, (step.Uses == "") != (step.Run == ""), "%s: a step uses or runs", name)
		}
		if job.Needs != "" {
			assert.Contains(t, actions.Jobs, job.Needs)
		}
	}

	var pipeline map[string]any
	parsed(t, "integrations/ci/gitlab-ci.yml", &pipeline)
	stages, _ := pipeline["stages"].([]any)
	require.NotEmpty(t, stages)
	jobs := 0
	for name, value := range pipeline {
		job, ok := value.(map[string]any)
		if !ok {
			continue
		}
		jobs++
		assert.True(t, slices.Contains(stages, job["stage"]), "%s is in a stage", name)
		assert.NotEmpty(t, job["script"], name)
	}
	assert.Equal(t, 4, jobs)
}

// The declaration for hook frameworks names what the program reads, and options that it has.
func TestTheHookDeclarationFitsTheProgram(t *testing.T) {
	var hooks []struct{ ID, Entry, Language, Files string }
	parsed(t, ".pre-commit-hooks.yaml", &hooks)
	require.Len(t, hooks, 1)
	assert.Equal(t, "golang", hooks[0].Language)
	assert.Equal(t, "halfplane check --quiet --depth quick", hooks[0].Entry)
	files := regexp.MustCompile(hooks[0].Files)
	for _, name := range []string{"a.converter.yaml", "b/a.converter.yml", "a.converter.json", "x.compensator.yaml", "x.parts.yml", "halfplane.yaml", "b/halfplane.yaml"} {
		_, spec := schema.KindOf(filepath.Base(name))
		assert.True(t, spec, name)
		assert.True(t, files.MatchString(name), name)
	}
	assert.False(t, files.MatchString("nothalfplane.yaml"))
	assert.False(t, files.MatchString("a.yaml"))
}
