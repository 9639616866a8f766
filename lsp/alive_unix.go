//go:build unix

package lsp

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"syscall"
)

// alive tells whether a process runs. One that has ended and waits to be collected by its parent does not; where the
// system shows processes under /proc that is seen too.
func alive(pid int) bool {
	if err := syscall.Kill(pid, 0); err != nil && !errors.Is(err, syscall.EPERM) {
		return false
	}
	stat, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", pid))
	if err != nil {
		return true
	}
	// "pid (name) state …"; the name may hold anything, so the last parenthesis counts.
	i := bytes.LastIndexByte(stat, ')')
	return i < 0 || i+2 >= len(stat) || (stat[i+2] != 'Z' && stat[i+2] != 'X')
}
