package main

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	yaml "go.yaml.in/yaml/v4"
)

// The systems themselves are not here to run their files. What they would run is: each test takes the shell lines out of a file and runs
// them, in the file's order, in a throw-away repository, once with healthy designs and once with one that fails the gate.

type workflow struct {
	Env  map[string]string
	Jobs map[string]workflowJob
}

type workflowJob struct {
	RunsOn   string `yaml:"runs-on"`
	Needs    string
	If       string
	Strategy struct{ Matrix struct{ Shard []int } }
	Steps    []step
}

type step struct {
	Uses, Run, If string
	Env           map[string]string
	With          map[string]any
}

func TestIntegrationsTheWorkflowFileRuns(t *testing.T) {
	var w workflow
	parsed(t, "integrations/ci/github-actions.yml", &w)
	shards := w.Jobs["check"].Strategy.Matrix.Shard
	assert.Equal(t, w.Env["SHARDS"], fmt.Sprint(len(shards)), "the matrix has as many jobs as are joined")
	uses := regexp.MustCompile(`^[a-z-]+/[a-z/-]+@v[0-9]+$`)
	for name, job := range w.Jobs {
		assert.NotEmpty(t, job.RunsOn, name)
		assert.True(t, job.Needs == "" || w.Jobs[job.Needs].RunsOn != "", "%s waits for a job that exists", name)
		for _, s := range job.Steps {
			assert.True(t, (s.Uses == "") != (s.Run == ""), "%s: a step uses or runs", name)
			assert.NotContains(t, s.Run, "${{", "%s: expressions come in by the environment, where they cannot become commands", name)
			if folder, local := strings.CutPrefix(s.Uses, "./.halfplane/"); local {
				assert.FileExists(t, filepath.Join("../..", folder, "action.yml"))
			} else if s.Uses != "" {
				assert.Regexp(t, uses, s.Uses)
			}
			if strings.HasPrefix(s.Uses, "actions/upload-artifact") {
				assert.Contains(t, s.If, "!cancelled()", "%s: kept also when a step has failed", name)
			}
		}
	}
	assert.Contains(t, w.Jobs["gate"].If, "!cancelled()", "it says which shard is missing")

	var action struct{ Runs struct{ Steps []step } }
	parsed(t, "integrations/ci/github-install/action.yml", &action)
	bothWays(t, func(r *repository) (statuses []int) {
		expressions := map[string]string{"${{ github.base_ref }}": "main", "${{ inputs.folder }}": ".halfplane"}
		run := func(steps []step) {
			for _, s := range steps {
				if s.Run == "" {
					continue
				}
				env := []string{"GITHUB_STEP_SUMMARY=" + filepath.Join(r.outside, "summary")}
				for key, value := range w.Env {
					env = append(env, key+"="+value)
				}
				for key, value := range s.Env {
					if known, ok := expressions[value]; ok {
						value = known
					}
					require.NotContains(t, value, "${{", "an expression that this test does not know")
					env = append(env, key+"="+value)
				}
				statuses = append(statuses, r.sh(s.Run, env...))
			}
		}
		r.git("clone", "--quiet", r.tool, ".halfplane") // what the checkout step does
		run(action.Runs.Steps)
		for _, k := range shards {
			expressions["${{ matrix.shard }}"] = fmt.Sprint(k)
			run(w.Jobs["check"].Steps)
		}
		run(w.Jobs["gate"].Steps)
		run(w.Jobs["review"].Steps)
		summary, err := os.ReadFile(filepath.Join(r.outside, "summary"))
		require.NoError(t, err)
		assert.Len(t, regexp.MustCompile(`(?m)^## `).FindAll(summary, -1), 2, "findings and review are on the run's page")
		return statuses
	}, []int{0, 0, 0, 0, 0, 0, 0, 0, 0}, []int{0, 0, 0, 0, 0, 1, 0, 0, 0})
}

type pipelineJob struct {
	Stage, Extends string
	Needs, Script  []string
	Parallel       int
	Variables      map[string]string
	Artifacts      struct{ Paths []string }
}

func TestIntegrationsThePipelineFileRuns(t *testing.T) {
	var document map[string]yaml.Node
	parsed(t, "integrations/ci/gitlab-ci.yml", &document)
	variables := map[string]string{}
	jobs := map[string]pipelineJob{}
	for name, node := range document {
		var job pipelineJob
		if name == "variables" {
			require.NoError(t, node.Decode(&variables))
		} else if require.NoError(t, node.Decode(&job)); !strings.HasPrefix(name, ".") {
			assert.Equal(t, ".halfplane", job.Extends, name)
			assert.Contains(t, []string{"build", "test", "deploy"}, job.Stage, "%s: a stage that every pipeline has", name)
			assert.NotEmpty(t, job.Artifacts.Paths, name)
			jobs[name] = job
		}
	}
	for name, job := range jobs {
		for _, needed := range job.Needs {
			assert.Contains(t, jobs, needed, name)
		}
	}
	parallel := jobs["halfplane check"].Parallel
	assert.Equal(t, fmt.Sprint(parallel), jobs["halfplane gate"].Variables["SHARDS"], "as many jobs as are joined")

	bothWays(t, func(r *repository) (statuses []int) {
		run := func(name string, more ...string) {
			for key, value := range variables {
				more = append(more, key+"="+value)
			}
			for key, value := range jobs[name].Variables {
				more = append(more, key+"="+value)
			}
			statuses = append(statuses, r.sh(strings.Join(jobs[name].Script, "\n"), more...))
		}
		run("halfplane build", "HALFPLANE_SOURCE="+r.tool)
		for k := range parallel {
			run("halfplane check", fmt.Sprintf("CI_NODE_INDEX=%d", k+1), fmt.Sprintf("CI_NODE_TOTAL=%d", parallel))
		}
		run("halfplane gate")
		run("halfplane review", "CI_MERGE_REQUEST_DIFF_BASE_SHA=origin/main")
		run("halfplane build", "HALFPLANE_SOURCE="+r.tool) // over what a cache has brought back
		return statuses
	}, []int{0, 0, 0, 0, 0, 0, 0, 0}, []int{0, 0, 0, 0, 0, 1, 0, 0})
}

func TestIntegrationsTheJenkinsfileRuns(t *testing.T) {
	text, err := os.ReadFile("../../integrations/ci/Jenkinsfile")
	require.NoError(t, err)
	assert.Equal(t, strings.Count(string(text), "{"), strings.Count(string(text), "}"))
	var env []string
	for _, m := range regexp.MustCompile(`(?m)^ +([A-Z_]+) = '([^']*)'`).FindAllStringSubmatch(string(text), -1) {
		env = append(env, m[1]+"="+m[2])
	}
	revision := regexp.MustCompile(`name: 'HALFPLANE_REVISION', defaultValue: '([^']*)'`).FindStringSubmatch(string(text))
	require.Len(t, revision, 2)
	values := regexp.MustCompile(`values (.*)`).FindStringSubmatch(string(text))
	require.Len(t, values, 2)
	axis := regexp.MustCompile(`'(\d+)'`).FindAllStringSubmatch(values[1], -1)
	assert.Contains(t, env, fmt.Sprintf("SHARDS=%d", len(axis)), "the matrix has as many jobs as are joined")

	lines := regexp.MustCompile(`(?s)\bsh (?:'''(.*?)'''|'([^'\n]*)')`).FindAllStringSubmatch(string(text), -1)
	require.Len(t, lines, 5, "build, shard, review, tidying up, gate")
	bothWays(t, func(r *repository) (statuses []int) {
		here := append(env, "HALFPLANE_SOURCE="+r.tool, "HALFPLANE_REVISION="+revision[1], "CHANGE_TARGET=main")
		for i, m := range lines {
			shell := m[1] + m[2]
			if i == 3 {
				assert.Equal(t, "rm -rf halfplane-reports", shell)
				require.NoError(t, os.Rename(filepath.Join(r.folder, "halfplane-reports", "shards"), filepath.Join(r.outside, "stash")))
			}
			if !strings.Contains(shell, `"$SHARD"`) {
				statuses = append(statuses, r.sh(shell, here...))
			} else {
				for _, k := range axis {
					statuses = append(statuses, r.sh(shell, append(here, "SHARD="+k[1])...))
				}
			}
			if i == 3 { // and what unstash does
				require.NoError(t, os.Mkdir(filepath.Join(r.folder, "halfplane-reports"), 0o777))
				require.NoError(t, os.Rename(filepath.Join(r.outside, "stash"), filepath.Join(r.folder, "halfplane-reports", "shards")))
			}
		}
		return statuses
	}, []int{0, 0, 0, 0, 0, 0, 0, 0}, []int{0, 0, 0, 0, 0, 0, 0, 1})
}

func parsed(t *testing.T, path string, into any) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", path))
	require.NoError(t, err)
	require.NoError(t, yaml.Unmarshal(text, into))
}
