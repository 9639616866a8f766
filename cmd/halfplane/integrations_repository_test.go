package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// repository is a throw-away work tree on a branch of its own, and a repository that has the scripts and, in the place of a compiler, this
// test's own program.
type repository struct {
	t                     *testing.T
	folder, outside, tool string
	log                   bytes.Buffer
}

// bothWays runs a system's steps with healthy designs and with one that fails, and wants these exit statuses and every report.
func bothWays(t *testing.T, steps func(*repository) []int, healthy, failing []int) {
	for name, want := range map[string][]int{"healthy": healthy, "failing": failing} {
		t.Run(name, func(t *testing.T) {
			r := newRepository(t, name == "failing")
			assert.Equal(t, want, steps(r), "exit statuses\n%s", &r.log)
			for _, report := range []string{"findings.sarif", "findings.xml", "findings.md", "findings.json"} {
				assert.FileExists(t, filepath.Join(r.folder, "halfplane-reports", report))
			}
		})
	}
}

func newRepository(t *testing.T, failing bool) *repository {
	if _, err := exec.LookPath("git"); err != nil {
		t.Skip("git is not here")
	}
	outside := t.TempDir()
	r := &repository{t: t, folder: filepath.Join(outside, "tidal station"), outside: outside, tool: filepath.Join(outside, "tool")}
	origin := filepath.Join(outside, "origin")

	require.NoError(t, os.CopyFS(filepath.Join(r.tool, "integrations", "ci"), os.DirFS("../../integrations/ci")))
	r.write("tool/.gitignore", "/bin/\n")
	program, err := exec.LookPath("halfplane")
	require.NoError(t, err)
	r.write("bin/go", "#!/bin/sh\ncp '"+program+"' \"$3\"\n")
	require.NoError(t, os.Chmod(filepath.Join(outside, "bin/go"), 0o777))
	for _, name := range []string{"sonde", "skiff-light", "tide-gauge"} {
		text, err := shelf.ReadFile("shelf/" + name + ".converter.yaml")
		require.NoError(t, err)
		r.write("origin/shelf/"+name+".converter.yaml", string(text))
	}
	for _, folder := range []string{r.tool, origin} {
		r.git("init", "--quiet", "--initial-branch=main", folder)
		r.git("-C", folder, "add", "-A")
		r.git("-C", folder, "commit", "--quiet", "-m", "first")
	}
	r.git("clone", "--quiet", origin, r.folder)
	r.git("-C", r.folder, "checkout", "--quiet", "-b", "side")
	design := filepath.Join(r.folder, "shelf", "tide-gauge.converter.yaml")
	text, err := os.ReadFile(design)
	require.NoError(t, err)
	value := "3k24"
	if failing {
		value = "31k6"
	}
	require.NoError(t, os.WriteFile(design, bytes.Replace(text, []byte("feedback-resistor: 3k16"), []byte("feedback-resistor: "+value), 1), 0o666))
	r.git("-C", r.folder, "commit", "--quiet", "-a", "-m", "another resistor")
	return r
}

func (r *repository) write(name, text string) {
	path := filepath.Join(r.outside, name)
	require.NoError(r.t, os.MkdirAll(filepath.Dir(path), 0o777))
	require.NoError(r.t, os.WriteFile(path, []byte(text), 0o666))
}

// command runs in the repository's folder, once there is one, with no settings of the user who runs the tests.
func (r *repository) command(env []string, name string, args ...string) *exec.Cmd {
	cmd := exec.Command(name, args...)
	cmd.Dir = r.outside
	if _, err := os.Stat(r.folder); err == nil {
		cmd.Dir = r.folder
	}
	cmd.Env = []string{
		"PATH=" + filepath.Join(r.outside, "bin") + string(os.PathListSeparator) + os.Getenv("PATH"), "HOME=" + r.outside, "GIT_CONFIG_NOSYSTEM=1",
		"GIT_AUTHOR_NAME=keeper", "GIT_AUTHOR_EMAIL=keeper@station.invalid", "GIT_COMMITTER_NAME=keeper", "GIT_COMMITTER_EMAIL=keeper@station.invalid",
	}
	cmd.Env = append(cmd.Env, env...)
	cmd.Stdout, cmd.Stderr = &r.log, &r.log
	return cmd
}

func (r *repository) git(args ...string) {
	require.NoError(r.t, r.command(nil, "git", args...).Run(), "git %v\n%s", args, &r.log)
}

// sh runs lines as a CI system does, the first failure ends them, and gives the exit status.
func (r *repository) sh(lines string, env ...string) int {
	cmd := r.command(append(env, "HALFPLANE_DEPTH=quick"), "sh", "-e", "-c", lines)
	if err := cmd.Run(); cmd.ProcessState == nil {
		require.NoError(r.t, err)
	}
	return cmd.ProcessState.ExitCode()
}
