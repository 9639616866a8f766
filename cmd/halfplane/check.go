package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/rules"
	"halfplane/workspace"
)

// checkCommand is the gate.
type checkCommand struct {
	*analysisFlags
	*formFlags
	failAt        *choice
	only, without []string
	quiet, prove  bool
	ledger        ledger
	mends         bool
	shard         shard
	since         string
	merge         []string
	missed        error // what could not be searched
}

func newCheck() *cobra.Command {
	c := &checkCommand{}
	cmd := &cobra.Command{
		Use:   "check [PATH…]",
		Short: "Read, analyse and judge designs; exit 1 when a finding reaches the gate",
		Long: `check reads every design named, and every design and shared file in the folders named (default: the working folder),
analyses its loop over all corners, and prints what it finds as file:line:column: severity: message.

Folders are searched for NAME.converter.yaml, .yml and .json and for the files that designs share, without hidden
folders and what ignore files leave out; a file that is named is always read.

Exit status: 0 nothing at or above the gate; 1 a finding at or above it; 2 wrong usage, or a file that could not be
read, parsed or validated; 3 a defect of the program itself. When several apply, the highest.`,
		Example: `  halfplane check
  halfplane check shelf/ --fail-at warning
  halfplane check shelf/profiler.converter.yaml --as json
  halfplane check shelf/ --as json --to findings.json --as text
  halfplane check shelf/ --ledger known.ledger --ledger-renew=all    # put on record what is found today
  halfplane check shelf/ --as sarif --to findings.sarif              # for a code-scanning page or a viewer
  halfplane check --since main... --as markdown                      # what a branch has changed
  halfplane check --merge first.json second.json --as text           # what two jobs have found
  halfplane check shelf/ --ledger known.ledger                       # and count only what is new or worse`,
		RunE: func(cmd *cobra.Command, args []string) error { return c.run(cmd, args) },
	}
	c.formFlags = addFormFlags(cmd, "text", "json", "sarif", "junit", "markdown", "csv")
	c.failAt = addChoice(cmd, "fail-at", "error", "least severity that makes the exit status 1", "error", "warning", "note", "never")
	cmd.Flags().StringSliceVar(&c.only, "only", nil, "these rules only (`RULE,...`); what keeps a file from being read is always reported")
	cmd.Flags().StringSliceVar(&c.without, "without", nil, "all rules but these (`RULE,...`)")
	cmd.Flags().BoolVar(&c.quiet, "quiet", false, "findings only, no line of totals")
	cmd.Flags().Var(&c.shard, "shard", "every N-th file, beginning with the K-th: one of N jobs that run side by side")
	cmd.Flags().BoolVar(&c.prove, "prove", false, "certificate: prove each margin at every point of the box of input, load and tolerances; what refutes one is judged like any corner, what stays undecided is a note")
	cmd.Flags().BoolVar(&c.mends, "mends", false, "compute repairs: each is analysed over all corners before it is shown")
	cmd.Flags().StringVar(&c.since, "since", "", "only files that differ from the git revision `REV`, and the designs that use them; REV... counts from where the branches parted")
	cmd.Flags().StringArrayVar(&c.merge, "merge", nil, "join results instead of checking: `FILE`s that --as json wrote, for example by the jobs of --shard")
	c.ledger.declare(cmd)
	c.analysisFlags = addAnalysisFlags(cmd)
	cobra.CheckErr(cmd.RegisterFlagCompletionFunc("only", completeRules))
	cobra.CheckErr(cmd.RegisterFlagCompletionFunc("without", completeRules))
	return cmd
}

func (c *checkCommand) run(cmd *cobra.Command, args []string) error {
	outputs, err := c.outputs()
	if err != nil {
		return err
	}
	if err := c.checkFlags(); err != nil {
		return err
	}
	if err := c.mergeFlags(cmd); err != nil {
		return err
	}
	if err := c.ledger.open(); err != nil {
		return err
	}
	code := clean
	each, err := c.source(cmd, args, &code)
	if err != nil {
		return err
	}
	writers, sinks := c.writers(outputs, cmd.OutOrStdout())
	each(func(f workspace.File) {
		c.ledger.match(f)
		code = max(code, c.statusOf(f))
		for _, w := range writers {
			w.File(f)
		}
	})
	for i, w := range writers {
		if err := w.Close(); err != nil {
			return err
		}
		if err := sinks[i].close(); err != nil {
			return err
		}
	}
	if err := c.ledger.close(cmd.ErrOrStderr()); err != nil {
		return err
	}
	if code != clean {
		return exit{code}
	}
	return nil
}

// source is where the files come from: results that are joined, else the designs at the paths. What could not be searched is
// said, and the rest is still checked.
func (c *checkCommand) source(cmd *cobra.Command, args []string, code *status) (each func(func(workspace.File)), err error) {
	if len(c.merge) > 0 {
		files, err := joined(append(c.merge, args...))
		return func(done func(workspace.File)) {
			for _, f := range files {
				done(f)
			}
		}, err
	}
	if len(args) == 0 {
		args = []string{"."}
	}
	items, err := workspace.Find(args, c.root)
	if err != nil {
		fmt.Fprintf(cmd.ErrOrStderr(), "halfplane: %v\n", err)
		*code, c.missed = usage, err
	} else if len(items) == 0 {
		fmt.Fprintf(cmd.ErrOrStderr(), "halfplane: there is no spec file (NAME.converter.yaml) in %s\n", strings.Join(args, ", "))
	}
	if c.since != "" && len(items) > 0 {
		if items, err = workspace.Since(cmd.Context(), items, c.since, c.policy); err != nil {
			return nil, fmt.Errorf("--since: %w", err)
		}
		if len(items) == 0 {
			fmt.Fprintf(cmd.ErrOrStderr(), "halfplane: no design here, and nothing that one uses, differs from %s\n", c.since)
		}
	}
	items = c.shard.of(items)
	return func(done func(workspace.File)) { workspace.Each(cmd.Context(), items, c.options(), done) }, nil
}

func (c *checkCommand) checkFlags() error {
	if err := c.analysisFlags.check(); err != nil {
		return err
	}
	if err := ruleNames("only", c.only); err != nil {
		return err
	}
	return ruleNames("without", c.without)
}

// mergeFlags refuses what can only be said to a check, where results of checks are joined.
func (c *checkCommand) mergeFlags(cmd *cobra.Command) error {
	if len(c.merge) == 0 {
		return nil
	}
	for _, name := range []string{"since", "shard", "policy", "prove", "mends", "only", "without", "depth", "jobs", "root", "today"} {
		if cmd.Flags().Changed(name) {
			return fmt.Errorf("--%s belongs to the checks whose results --merge joins", name)
		}
	}
	return nil
}

func (c *checkCommand) options() workspace.Options {
	return workspace.Options{
		Rules: rules.RunOptions{Only: c.only, Without: c.without, Today: c.today.String()},
		Depth: c.depthOf(),
		Jobs:  c.jobs,
		Study: workspace.Study{Prove: c.prove},
		Mends: c.mends,

		Policy: c.policy,
	}
}

// statusOf is the status that one file asks for.
func (c *checkCommand) statusOf(f workspace.File) status {
	switch {
	case f.Defect:
		return defect
	case f.Status == workspace.Unreadable:
		return usage
	}
	least, any := c.gate()
	for _, finding := range f.Findings {
		if any && finding.Severity >= least && finding.Live() {
			return found
		}
	}
	return clean
}

// gate is the least severity that fails; any is false where nothing does.
func (c *checkCommand) gate() (least rules.Severity, any bool) {
	least, any = map[string]rules.Severity{"error": rules.Error, "warning": rules.Warning, "note": rules.Note}[c.failAt.value]
	return least, any
}

// findingsWriter takes findings file by file.
type findingsWriter interface {
	File(workspace.File)
	Close() error
}

func (c *checkCommand) writers(outputs []output, stdout io.Writer) (writers []findingsWriter, sinks []sink) {
	for _, o := range outputs {
		s := o.open(stdout)
		sinks = append(sinks, s)
		switch o.form {
		case "json":
			writers = append(writers, report.NewJSON(s, version))
		case "sarif":
			w := report.NewSARIF(s, version)
			w.Failed(c.missed)
			writers = append(writers, w)
		case "junit":
			gate, any := c.gate()
			if !any {
				gate = rules.None
			}
			writers = append(writers, report.NewJUnit(s, gate))
		case "markdown":
			writers = append(writers, report.NewMarkdown(s))
		case "csv":
			writers = append(writers, report.NewCSV(s))
		default:
			writers = append(writers, report.NewText(s, report.TextOptions{
				Color: s.held == nil && colored(c.color.value, stdout), NoSummary: c.quiet,
			}))
		}
	}
	return writers, sinks
}
