package lsp

import (
	"os"
	"os/exec"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// spawn starts a server in a process of its own.
func spawn(t testing.TB) *client {
	cmd := exec.Command(os.Args[0])
	cmd.Env = append(os.Environ(), serveVariable+"=1")
	in, err := cmd.StdinPipe()
	require.NoError(t, err)
	out, err := cmd.StdoutPipe()
	require.NoError(t, err)
	k := newClient(t, in, out)
	cmd.Stderr = k.log
	require.NoError(t, cmd.Start())
	go func() {
		k.until("the end of the output", time.Hour, func() bool { return k.over })
		_ = cmd.Wait()
		k.code <- cmd.ProcessState.ExitCode()
	}()
	t.Cleanup(func() { in.Close() })
	return k
}

func TestProcessEndsWithItsInput(t *testing.T) {
	k := spawn(t)
	k.begin(nil)
	at := time.Now()
	require.NoError(t, k.in.Close())
	assert.Equal(t, 1, k.exitCode())
	assert.Less(t, time.Since(at), 2*time.Second)
	assert.Empty(t, k.notLSP)
}

func TestProcessEndsOnExit(t *testing.T) {
	k := spawn(t)
	k.begin(nil)
	k.open(boat, "format: [", 1)
	assert.NotEmpty(t, k.published(boat, 1, nil).Diagnostics)
	k.leave() // the input stays open
}

// TestProcessEndsWhenItsClientDies: the input stays open, as it does when another process has inherited it.
func TestProcessEndsWhenItsClientDies(t *testing.T) {
	for _, collected := range []bool{true, false} {
		editor := exec.Command("sleep", "60")
		if err := editor.Start(); err != nil {
			t.Skip("no sleep program here: ", err)
		}
		k := spawn(t)
		r := k.call("initialize", object{"processId": editor.Process.Pid, "capabilities": object{}})
		require.Nil(t, r.Error)
		time.Sleep(50 * time.Millisecond)
		at := time.Now()
		require.NoError(t, editor.Process.Kill())
		if collected {
			_ = editor.Wait()
		}
		assert.Equal(t, 1, k.exitCode())
		assert.Less(t, time.Since(at), 2*time.Second, "collected by its parent: %v", collected)
		if !collected {
			_ = editor.Wait()
		}
	}
}

func TestClientThatCannotBeSeenIsNotWatched(t *testing.T) {
	gone := exec.Command("true")
	if err := gone.Run(); err != nil {
		t.Skip("no true program here: ", err)
	}
	k := spawn(t)
	require.Nil(t, k.call("initialize", object{"processId": gone.Process.Pid, "capabilities": object{}}).Error)
	time.Sleep(3 * watchEvery)
	k.leave()
}
