//go:build !unix

package lsp

import "os"

// alive tells whether a process runs: on Windows a process that has ended cannot be opened.
func alive(pid int) bool {
	p, err := os.FindProcess(pid)
	if err != nil {
		return false
	}
	_ = p.Release()
	return true
}
