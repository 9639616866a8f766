package workspace

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"os/exec"
	"strings"
)

var errNoGit = errors.New("the program git is needed for this, and it is not on the search path")

// git runs the git program in a folder and gives what it writes. It reads the repository and changes nothing in it: no
// hook, pager, prompt or optional lock. What git itself has to say about a failure is the error.
func git(ctx context.Context, folder string, args ...string) ([]byte, error) {
	return gitReading(ctx, folder, nil, args...)
}

// gitReading is git with something on its standard input.
func gitReading(ctx context.Context, folder string, input []byte, args ...string) ([]byte, error) {
	cmd := exec.CommandContext(ctx, "git", append([]string{"--no-pager", "--no-optional-locks", "-C", folder}, args...)...)
	var out, said bytes.Buffer
	cmd.Stdin, cmd.Stdout, cmd.Stderr = bytes.NewReader(input), &out, &said
	err := cmd.Run()
	switch {
	case errors.Is(err, exec.ErrNotFound):
		return nil, errNoGit
	case err != nil && said.Len() > 0:
		return nil, fmt.Errorf("git: %s", strings.TrimPrefix(strings.TrimSpace(said.String()), "fatal: "))
	case err != nil:
		return nil, fmt.Errorf("git: %w", err)
	}
	return out.Bytes(), nil
}
