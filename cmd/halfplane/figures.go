package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"halfplane/analysis"
	"halfplane/report"
	"halfplane/rules"
	"halfplane/workspace"
)

// figuresCommand prints the numbers of one design.
type figuresCommand struct {
	*analysisFlags
	*formFlags
	at      []string
	corners *choice
	units   int
	seed    uint64
	prove   bool
}

func newFigures() *cobra.Command {
	c := &figuresCommand{}
	cmd := &cobra.Command{
		Use:   "figures FILE",
		Short: "Operating points, models, poles and zeros, margins: at each corner and at worst",
		Long: `figures analyses one design and prints its numbers: the operating corners with nominal parts, the power stage's model
beside the closed forms without losses, the models in force, the worst figures over all corners and tolerances, and
what became of each rule: it holds, is broken, does not apply, or could not be assessed.

` + report.Definitions + `

--at assigns fields of the spec by their dotted path (list items count from 0), in SI units or with a unit, as written
in the spec: of the winding's own side, one piece, one phase, before bias derating. Fields left out are nominal.

Exit status: 0, or 2 for wrong usage or a file that could not be read, parsed or validated.`,
		Example: `  halfplane figures shelf/profiler.converter.yaml
  halfplane figures shelf/profiler.converter.yaml --as json --corners all
  halfplane figures shelf/profiler.converter.yaml --yield 10000 --prove
  halfplane figures shelf/profiler.converter.yaml --at 'input-voltage=9 V,load.current=1.5,inductor.inductance=26.4uH'`,
		Args:              oneDesign,
		ValidArgsFunction: completeDesigns,
		RunE:              func(cmd *cobra.Command, args []string) error { return c.run(cmd, args[0]) },
	}
	c.formFlags = addFormFlags(cmd, "text", "json")
	cmd.Flags().StringArrayVar(&c.at, "at", nil, "one point only: `PATH=VALUE,...`")
	c.corners = addChoice(cmd, "corners", "operating", "which corners are listed: the operating corners and those of the worst figures, or all that were analysed", "operating", "all")
	cmd.Flags().IntVar(&c.units, "yield", 0, "Monte Carlo: build `N` units at random within the tolerances, tell how many meet the margins, with quantiles and root sum square")
	cmd.Flags().Uint64Var(&c.seed, "seed", analysis.DefaultSeed, "of the units of --yield: the same `NUMBER` builds the same units")
	cmd.Flags().BoolVar(&c.prove, "prove", false, "certificate: prove the margins at every point of the box of input, load and tolerances, or find a point that refutes them")
	c.analysisFlags = addAnalysisFlags(cmd)
	return cmd
}

func (c *figuresCommand) run(cmd *cobra.Command, path string) error {
	outputs, err := c.outputs()
	if err != nil {
		return err
	}
	if err := c.analysisFlags.check(); err != nil {
		return err
	}
	if err := c.studyFlags(cmd); err != nil {
		return err
	}
	items, err := workspace.Find([]string{path}, c.root)
	if err != nil {
		return err
	}
	if len(items) != 1 || items[0].Path != path {
		return fmt.Errorf("%s is a folder: figures takes one design", path)
	}
	o := workspace.Options{Rules: rules.RunOptions{Today: c.today.String()}, Policy: c.policy, Depth: c.depthOf(), Jobs: c.jobs, KeepAll: c.corners.value == "all"}
	if len(c.at) > 0 {
		o.Depth = analysis.Quick // only the assigned point is shown
	} else {
		o.Study = workspace.Study{Sensitivities: true, Units: c.units, Seed: c.seed, Prove: c.prove}
	}
	f := items[0].In.CheckFile(cmd.Context(), path, o)
	if f.Result == nil {
		return c.refuse(cmd, f)
	}
	shown := report.FigureOptions{AllCorners: c.corners.value == "all"}
	if len(c.at) > 0 {
		corner, err := workspace.Assign(f.Spec, c.at)
		if err != nil {
			return err
		}
		shown.At = &corner
	}
	for _, out := range outputs {
		if err := c.write(cmd, out, f, shown); err != nil {
			return err
		}
	}
	return nil
}

// studyFlags checks what goes beyond the corners.
func (c *figuresCommand) studyFlags(cmd *cobra.Command) error {
	yield := cmd.Flags().Changed("yield")
	switch {
	case yield && c.units < 1:
		return fmt.Errorf("--yield expects a number of units from 1 upwards, not %d", c.units)
	case cmd.Flags().Changed("seed") && !yield:
		return fmt.Errorf("--seed belongs to --yield, which is not given")
	case cmd.Flags().Changed("seed") && c.seed == 0:
		return fmt.Errorf("--seed expects a number from 1 upwards")
	case len(c.at) > 0 && (yield || c.prove):
		return fmt.Errorf("--at gives one point: --yield and --prove look at all of them")
	}
	return nil
}

// refuse says why a file has no figures.
func (c *figuresCommand) refuse(cmd *cobra.Command, f workspace.File) error {
	errs := cmd.ErrOrStderr()
	if err := report.TextFindings(errs, []workspace.File{f}, report.TextOptions{Color: colored(c.color.value, errs), NoSummary: true}); err != nil {
		return err
	}
	switch {
	case f.Defect:
		return exit{defect}
	case f.Status == workspace.Unreadable:
		return exit{usage}
	}
	return fmt.Errorf("%s is no design (NAME.converter.yaml): it has no figures", f.Path)
}

func (c *figuresCommand) write(cmd *cobra.Command, out output, f workspace.File, o report.FigureOptions) error {
	s := out.open(cmd.OutOrStdout())
	write := report.TextFigures
	if out.form == "json" {
		write = report.JSONFigures
	}
	o.Color = s.held == nil && colored(c.color.value, cmd.OutOrStdout())
	if err := write(s, f, o); err != nil {
		return err
	}
	return s.close()
}

// completeDesigns offers the files that can be designs.
func completeDesigns(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	return []string{"yaml", "yml", "json"}, cobra.ShellCompDirectiveFilterFileExt
}
