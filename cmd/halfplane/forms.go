package main

import (
	"bytes"
	"fmt"
	"io"
	"slices"

	"github.com/spf13/cobra"

	"halfplane/workspace"
)

// formFlags are --as and --to: the n-th --to belongs to the n-th --as.
type formFlags struct{ forms, as, to []string }

// addFormFlags declares them for a command that has these forms; the first is the default.
func addFormFlags(cmd *cobra.Command, forms ...string) *formFlags {
	f := &formFlags{forms: forms}
	cmd.Flags().StringArrayVar(&f.as, "as", nil, "output `FORM`: "+either(forms)+"; may be repeated (default "+forms[0]+")")
	cmd.Flags().StringArrayVar(&f.to, "to", nil, "write to `FILE` instead of standard output; the n-th --to belongs to the n-th --as")
	cobra.CheckErr(cmd.RegisterFlagCompletionFunc("as", cobra.FixedCompletions(forms, cobra.ShellCompDirectiveNoFileComp)))
	return f
}

// output is one form and where it goes; an empty path is standard output.
type output struct{ form, path string }

func (f *formFlags) outputs() ([]output, error) {
	as := f.as
	if len(as) == 0 {
		as = []string{"text"}
	}
	if len(f.to) > len(as) {
		return nil, fmt.Errorf("--to is given %d times and --as %d times: each --to belongs to one --as", len(f.to), len(as))
	}
	if len(as)-len(f.to) > 1 {
		return nil, fmt.Errorf("%d forms would go to standard output, and only one can: give a --to for the others", len(as)-len(f.to))
	}
	var out []output
	for i, form := range as {
		if !slices.Contains(f.forms, form) {
			return nil, fmt.Errorf("--as expects %s, not %q", either(f.forms), form)
		}
		o := output{form: form}
		if i < len(f.to) {
			o.path = f.to[i]
			if o.path == "" {
				return nil, fmt.Errorf("--to expects the name of a file")
			}
			if slices.ContainsFunc(out, func(p output) bool { return p.path == o.path }) {
				return nil, fmt.Errorf("--to: two forms would be written to %s", o.path)
			}
		}
		out = append(out, o)
	}
	return out, nil
}

// sink is where one form is written: standard output as it comes, a file whole at the end.
type sink struct {
	output
	io.Writer
	held *bytes.Buffer
}

func (o output) open(stdout io.Writer) sink {
	if o.path == "" {
		return sink{o, stdout, nil}
	}
	held := &bytes.Buffer{}
	return sink{o, held, held}
}

func (s sink) close() error {
	if s.held == nil {
		return nil
	}
	return workspace.WriteFile(s.path, func(w io.Writer) error {
		_, err := w.Write(s.held.Bytes())
		return err
	})
}
