package main

import (
	"bytes"
	"context"
	"embed"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"halfplane/analysis"
	"halfplane/report"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

//go:embed shelf
var shelf embed.FS

func newDemo() *cobra.Command {
	var to string
	var color *choice
	cmd := &cobra.Command{
		Use:   "demo",
		Short: "Check the demonstration shelf and say what was planted in it",
		Long: `demo checks a small shelf of invented designs, the supplies of the instruments and boats of a tidal research station.
Some are healthy, some have one defect each. It prints the findings and, for each file, what was planted there and
that it was found. The exit status is 0: it is a demonstration. A planted defect that is not found is a defect of the
program, exit status 3.`,
		Example: `  halfplane demo
  halfplane demo --to play && halfplane check play`,
		Args: cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if cmd.Flags().Changed("to") {
				return writeShelf(cmd.OutOrStdout(), to)
			}
			return showShelf(cmd.Context(), cmd.OutOrStdout(), cmd.ErrOrStderr(), colored(color.value, cmd.OutOrStdout()))
		},
	}
	cmd.Flags().StringVar(&to, "to", "", "write the shelf's files into `FOLDER` instead, to play with")
	color = addChoice(cmd, "color", "auto", "colours on standard output; auto: on a terminal, unless NO_COLOR is set", "auto", "always", "never")
	return cmd
}

// showShelf checks every exhibit and compares what is found with what was planted.
func showShelf(ctx context.Context, out, errs io.Writer, color bool) error {
	w := workspace.Open("shelf")
	missed := false
	var totals report.Totals
	for _, e := range exhibits() {
		name := "shelf/" + e.file
		text, err := shelf.ReadFile(name)
		if err != nil {
			return err
		}
		f := w.CheckDocument(ctx, schema.Read(name, text, 0), workspace.Options{Depth: analysis.Full})
		if err := report.TextFindings(out, []workspace.File{f}, report.TextOptions{Color: color, NoSummary: true}); err != nil {
			return err
		}
		totals.Add(f)
		verdict, ok := e.verdict(f)
		fmt.Fprintf(out, "%s: %s\n\n", name, verdict)
		if !ok {
			missed = true
			fmt.Fprintf(errs, "halfplane: %s does not come out as it was planted: this is a defect of the program, please report it\n", name)
		}
	}
	fmt.Fprintln(out, totals.Words())
	fmt.Fprintln(out, report.Care)
	if missed {
		return exit{defect}
	}
	return nil
}

// verdict says what was planted and whether it was found; ok is false when the findings differ from it.
func (e exhibit) verdict(f workspace.File) (words string, ok bool) {
	planted, other := false, false
	for _, found := range f.Findings {
		switch {
		case found.Rule == e.rule:
			planted = true
		case found.Severity >= rules.Warning && found.Cause == nil:
			other = true
		}
	}
	switch {
	case f.Defect:
		return "the program failed", false
	case e.rule == "" && !other:
		return "healthy. " + e.story, true
	case e.rule == "":
		return "healthy, yet something was found. " + e.story, false
	case !planted:
		return "planted for " + e.rule + ", NOT FOUND. " + e.story, false
	case other:
		return "planted for " + e.rule + ", found, and something else with it. " + e.story, false
	}
	return "planted for " + e.rule + ", found. " + e.story, true
}

// writeShelf puts the files into a folder. Nothing that is already there is overwritten with something else.
func writeShelf(out io.Writer, folder string) error {
	if folder == "" {
		return errors.New("--to expects the name of a folder")
	}
	if err := os.MkdirAll(folder, 0o777); err != nil {
		return fmt.Errorf("making the folder: %w", err)
	}
	for _, e := range exhibits() {
		text, err := shelf.ReadFile("shelf/" + e.file)
		if err != nil {
			return err
		}
		path := filepath.Join(folder, e.file)
		there, err := os.ReadFile(path)
		if err == nil && bytes.Equal(there, text) {
			continue
		}
		if !errors.Is(err, fs.ErrNotExist) {
			return fmt.Errorf("%s is there already and differs: nothing is overwritten", path)
		}
		if err := workspace.WriteFile(path, func(w io.Writer) error { _, err := w.Write(text); return err }); err != nil {
			return err
		}
	}
	fmt.Fprintf(out, "%d designs are in %s; try 'halfplane check %s'\n", len(exhibits()), folder, folder)
	return nil
}
