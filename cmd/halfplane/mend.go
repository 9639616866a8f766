package main

import (
	"fmt"
	"io"
	"path/filepath"
	"slices"

	"github.com/aymanbagabas/go-udiff"
	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// mendCommand applies repairs.
type mendCommand struct {
	*analysisFlags
	only  []string
	write bool
}

func newMend() *cobra.Command {
	c := &mendCommand{}
	cmd := &cobra.Command{
		Use:   "mend [PATH…]",
		Short: "Apply repairs that were analysed over every corner, showing the change first",
		Long: `mend puts repairs into designs, of the gravest finding first and the smallest change first, each analysed over every corner before it is taken: it clears its
finding and brings none. It shows the change as a unified diff and the margins before and after; nothing is written without --write, and then whole or not at all. Only the
values that change are touched: comments, order, quotes and line ends stay. What cannot be mended is listed, with what stands in the way where that is known.

Exit status: 0 nothing to change, or written; 1 there is a change to show (without --write); 2 wrong usage, or a file that cannot be read; 3 a defect of the program.`,
		Example: `  halfplane mend shelf/profiler.converter.yaml
  halfplane mend shelf/ --only rhp-zero-crossover,phase-margin --write`,
		RunE: func(cmd *cobra.Command, args []string) error { return c.run(cmd, args) },
	}
	cmd.Flags().StringSliceVar(&c.only, "only", nil, "findings of these rules only (`RULE,...`)")
	cmd.Flags().BoolVar(&c.write, "write", false, "write the mended files")
	c.analysisFlags = addAnalysisFlags(cmd)
	cobra.CheckErr(cmd.RegisterFlagCompletionFunc("only", completeRules))
	return cmd
}

func (c *mendCommand) run(cmd *cobra.Command, args []string) error {
	if err := c.check(); err != nil {
		return err
	}
	if err := ruleNames("only", c.only); err != nil {
		return err
	}
	if len(args) == 0 {
		args = []string{"."}
	}
	code := clean
	items, err := workspace.Find(args, c.root)
	if err != nil {
		fmt.Fprintf(cmd.ErrOrStderr(), "halfplane: %v\n", err)
		code = usage
	}
	o := workspace.Options{Policy: c.policy, Depth: c.depthOf(), Jobs: c.jobs}
	o.Rules.Today = c.today.String()
	for _, item := range items {
		if kind, _ := schema.KindOf(filepath.Base(item.Path)); kind != schema.Design {
			continue
		}
		m := item.In.MendFile(cmd.Context(), item.Path, o, c.only)
		one, err := c.show(cmd.OutOrStdout(), item.Path, m)
		if err != nil {
			return err
		}
		code = max(code, one)
	}
	if code != clean {
		return exit{code}
	}
	return nil
}

// show prints what was mended in one file and what was not, and writes the file where that was asked for.
func (c *mendCommand) show(out io.Writer, path string, m workspace.Mending) (status, error) {
	switch {
	case m.After.Defect:
		return defect, report.TextFindings(out, []workspace.File{m.After}, report.TextOptions{NoSummary: true})
	case m.Before.Status == workspace.Unreadable:
		return usage, report.TextFindings(out, []workspace.File{m.Before}, report.TextOptions{NoSummary: true})
	}
	if err := report.Mending(out, m, func(f *rules.Finding) bool { return len(c.only) == 0 || slices.Contains(c.only, f.Rule) }); err != nil {
		return defect, err
	}
	if len(m.Applied) == 0 {
		return clean, nil
	}
	before, after := string(m.Before.Document.Text), string(m.After.Document.Text)
	if _, err := io.WriteString(out, udiff.Unified("a/"+path, "b/"+path, before, after)+"\n"); err != nil {
		return defect, err
	}
	if !c.write {
		return found, nil
	}
	return clean, workspace.WriteFile(path, func(w io.Writer) error {
		_, err := io.WriteString(w, after)
		return err
	})
}
