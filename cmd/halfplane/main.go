package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"

	"github.com/spf13/cobra"
)

// version of the program, as --version and the JSON output tell it.
const version = "0.1.0"

// status is what the program exits with; the numbers are a contract.
type status int

const (
	clean  status = 0 // nothing at or above the gate
	found  status = 1 // a finding at or above the gate
	usage  status = 2 // wrong usage, or a file that could not be read, parsed or validated
	defect status = 3 // a defect of the program itself
)

// exit ends a command with a status that has been explained already.
type exit struct{ status status }

func (e exit) Error() string { return fmt.Sprintf("exit %d", e.status) }

func main() {
	roomy()
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// run is the whole program but for the process around it.
func run(args []string, in io.Reader, out, errs io.Writer) (code int) {
	defer func() {
		if cause := recover(); cause != nil {
			fmt.Fprintf(errs, "halfplane: this is a defect of the program: %v\n%s\nplease report it with the command line and the files\n", cause, debug.Stack())
			code = int(defect)
		}
	}()
	root := newRoot()
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errs)
	command, err := root.ExecuteContextC(context.Background())
	var e exit
	switch {
	case err == nil:
		return int(clean)
	case errors.As(err, &e):
		return int(e.status)
	}
	fmt.Fprintf(errs, "halfplane: %v\nSee '%s --help'.\n", err, command.CommandPath())
	return int(usage)
}

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "halfplane",
		Short: "Check the control loops of switching converters",
		Long: `halfplane reads converter designs (NAME.converter.yaml, .yml or .json), analyses their control loops over every
operating corner and part tolerance, and reports what is too close to trouble, at the value that decides it.

Exit status: 0 nothing at or above the gate; 1 a finding at or above it; 2 wrong usage, or a file that could not be
read, parsed or validated; 3 a defect of the program itself. When several apply, the highest.`,
		Example: `  halfplane check shelf/
  halfplane figures shelf/profiler.converter.yaml
  halfplane demo`,
		Version:           version,
		SilenceErrors:     true,
		SilenceUsage:      true,
		CompletionOptions: cobra.CompletionOptions{HiddenDefaultCmd: false},
	}
	root.SetFlagErrorFunc(suggestFlag)
	root.SetVersionTemplate("halfplane {{.Version}}\n")
	root.AddCommand(newCheck(), newCompare(), newMend(), newFigures(), newRule(), newSchema(), newServe(), newDemo())
	return root
}
