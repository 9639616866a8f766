package main

import (
	"fmt"
	"os"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// choice is a flag that takes one of a few words.
type choice struct {
	value   string
	allowed []string
}

func (c *choice) String() string { return c.value }
func (c *choice) Type() string   { return strings.Join(c.allowed, "|") }

// Set refuses every other word.
func (c *choice) Set(s string) error {
	if !slices.Contains(c.allowed, s) {
		return fmt.Errorf("expects %s", either(c.allowed))
	}
	c.value = s
	return nil
}

// either is "a, b or c".
func either(words []string) string {
	if len(words) == 1 {
		return words[0]
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}

// addChoice declares such a flag with its completion.
func addChoice(cmd *cobra.Command, name, value, help string, allowed ...string) *choice {
	c := &choice{value, allowed}
	cmd.Flags().Var(c, name, help)
	cobra.CheckErr(cmd.RegisterFlagCompletionFunc(name, cobra.FixedCompletions(allowed, cobra.ShellCompDirectiveNoFileComp)))
	return c
}

// analysisFlags are shared by the commands that analyse files.
type analysisFlags struct {
	depth *choice
	color *choice
	jobs  int
	root  string

	policy string
	today  day
}

func addAnalysisFlags(cmd *cobra.Command) *analysisFlags {
	f := &analysisFlags{
		depth: addChoice(cmd, "depth", "full", "how many corners: quick (operating corners and the extremes of the power stage) or full (every extreme of every part, then refined)", "quick", "full"),
		color: addChoice(cmd, "color", "auto", "colours on standard output; auto: on a terminal, unless NO_COLOR is set", "auto", "always", "never"),
	}
	cmd.Flags().IntVar(&f.jobs, "jobs", 0, "analyses at once; 0: as many as the machine runs")
	cmd.Flags().StringVar(&f.policy, "policy", "", "`FILE` with severities and thresholds for all designs (default: each design's nearest halfplane.yaml at or above it)")
	f.today = addDay(cmd)
	cmd.Flags().StringVar(&f.root, "root", "", "`FOLDER` that references between files may not leave (default: the git work tree, else the outermost folder with a halfplane.yaml, else the folder named)")
	return f
}

func (f *analysisFlags) check() error {
	if f.jobs < 0 {
		return fmt.Errorf("--jobs expects a number from 0 upwards, not %d", f.jobs)
	}
	if f.policy != "" {
		if info, err := os.Stat(f.policy); err != nil || info.IsDir() {
			return fmt.Errorf("--policy: there is no file %s", f.policy)
		}
	}
	if f.root == "" {
		return nil
	}
	if info, err := os.Stat(f.root); err != nil || !info.IsDir() {
		return fmt.Errorf("--root: there is no folder %s", f.root)
	}
	return nil
}

func (f *analysisFlags) depthOf() analysis.Depth {
	if f.depth.value == "quick" {
		return analysis.Quick
	}
	return analysis.Full
}

// colored decides --color for a stream.
func colored(when string, stream any) bool {
	if when != "auto" {
		return when == "always"
	}
	file, ok := stream.(*os.File)
	if !ok || os.Getenv("NO_COLOR") != "" || os.Getenv("TERM") == "dumb" {
		return false
	}
	info, err := file.Stat()
	return err == nil && info.Mode()&os.ModeCharDevice != 0
}

// ruleNames checks the names given to --only or --without.
func ruleNames(flag string, names []string) error {
	for _, name := range names {
		if rules.Find(name) == nil {
			return fmt.Errorf("--%s: there is no rule %q%s", flag, name, suggest(name))
		}
	}
	return nil
}

// suggest names the rule that was probably meant.
func suggest(name string) string {
	var known []string
	for _, r := range rules.All() {
		known = append(known, r.Name)
	}
	if best := schema.Nearest(name, known); best != "" {
		return fmt.Sprintf("; did you mean %q?", best)
	}
	return " ('halfplane rule' lists them)"
}

// suggestFlag adds to the error about an unknown flag the one that was probably meant.
func suggestFlag(cmd *cobra.Command, err error) error {
	name, unknown := strings.CutPrefix(err.Error(), "unknown flag: --")
	if !unknown {
		return err
	}
	name, _, _ = strings.Cut(name, "=")
	var known []string
	cmd.Flags().VisitAll(func(f *pflag.Flag) { known = append(known, f.Name) })
	if best := schema.Nearest(name, known); best != "" {
		return fmt.Errorf("%w; did you mean --%s?", err, best)
	}
	return err
}

// oneDesign is the arguments of a command that takes one design.
func oneDesign(cmd *cobra.Command, args []string) error {
	if len(args) == 1 {
		return nil
	}
	return fmt.Errorf("%s takes one design (NAME.converter.yaml), and %d were given", cmd.Name(), len(args))
}

// completeRules offers the rules' names.
func completeRules(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
	var names []string
	for _, r := range rules.All() {
		names = append(names, r.Name+"\t"+r.Sentence)
	}
	return names, cobra.ShellCompDirectiveNoFileComp
}
