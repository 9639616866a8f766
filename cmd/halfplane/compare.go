package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/workspace"
)

// compareCommand says what a change did.
type compareCommand struct {
	*analysisFlags
	*formFlags
}

func newCompare() *cobra.Command {
	c := &compareCommand{}
	cmd := &cobra.Command{
		Use:   "compare OLD NEW [PATH…]",
		Short: "What a change did to every margin, and which changed part explains it",
		Long: `compare takes two designs, two folders, two git revisions, or a revision and a path, and says for each design that differs, in its own text or in
anything that it uses, every margin before and after, where it is worst now, and which changed part explains it: alone put into the old design, and alone taken
back from the new one, in the mean (at quick depth). Designs are matched by path, renamed ones by title and topology. Behind two revisions, paths limit
what is compared (default: the working folder). Revisions are read from the repository; the work tree is not touched.

Exit status: 0 no margin fell through its target; 1 one did, or a loop became unstable; 2 wrong usage, or a design that cannot be read; 3 a defect of
the program. A design that is new is shown with its margins and falls through nothing.`,
		Example: `  halfplane compare old/beacon.converter.yaml new/beacon.converter.yaml
  halfplane compare main HEAD --as markdown --to comment.md
  halfplane compare HEAD .
  halfplane compare v1.4:shelf shelf`,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) < 2 {
				return fmt.Errorf("compare takes OLD and NEW: two designs, two folders, or two git revisions")
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error { return c.run(cmd, args) },
	}
	c.formFlags = addFormFlags(cmd, "text", "json", "markdown")
	c.analysisFlags = addAnalysisFlags(cmd)
	return cmd
}

// comparisonWriter takes comparisons design by design.
type comparisonWriter interface {
	Design(workspace.Comparison)
	Close() error
}

func (c *compareCommand) run(cmd *cobra.Command, args []string) error {
	outputs, err := c.outputs()
	if err != nil {
		return err
	}
	if err := c.analysisFlags.check(); err != nil {
		return err
	}
	pairs, err := workspace.Pairs(cmd.Context(), args[0], args[1], args[2:], c.root)
	if err != nil {
		return err
	}
	var writers []comparisonWriter
	var sinks []sink
	for _, o := range outputs {
		s := o.open(cmd.OutOrStdout())
		sinks = append(sinks, s)
		switch o.form {
		case "json":
			writers = append(writers, report.NewJSONComparison(s, version, args[0], args[1]))
		case "markdown":
			writers = append(writers, report.NewMarkdownComparison(s, args[0], args[1]))
		default:
			writers = append(writers, report.NewTextComparison(s))
		}
	}
	code := clean
	options := workspace.Options{Policy: c.policy, Depth: c.depthOf(), Jobs: c.jobs}
	options.Rules.Today = c.today.String()
	for _, pair := range pairs {
		compared := workspace.Compare(cmd.Context(), pair, options)
		code = max(code, statusOfComparison(&compared))
		for _, w := range writers {
			w.Design(compared)
		}
	}
	for i, w := range writers {
		if err := w.Close(); err != nil {
			return err
		}
		if err := sinks[i].close(); err != nil {
			return err
		}
	}
	if code != clean {
		return exit{code}
	}
	return nil
}

func statusOfComparison(c *workspace.Comparison) status {
	switch {
	case c.Before.Defect || c.After.Defect:
		return defect
	case c.Change == workspace.Incomparable:
		return usage
	case c.Fallen():
		return found
	}
	return clean
}
