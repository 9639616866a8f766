// Command halfplane checks the control loops of switching converters. One file per command: flags, one call, an exit code;
// the work is done in the packages below. Start at main.go, then check.go.
package main
