package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/rules"
)

func newRule() *cobra.Command {
	return &cobra.Command{
		Use:   "rule [NAME]",
		Short: "The catalogue of rules, or one rule in full",
		Long: `rule lists every rule by group, with its severity and the sentence that says what good looks like. With a name it
prints that rule in full: sentence, formula, published source, policy keys with their defaults, and an example.`,
		Example: `  halfplane rule
  halfplane rule rhp-zero-crossover`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: completeRules,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				return report.Catalogue(cmd.OutOrStdout(), rules.All())
			}
			r := rules.Find(args[0])
			if r == nil {
				return fmt.Errorf("there is no rule %q%s", args[0], suggest(args[0]))
			}
			return report.RulePage(cmd.OutOrStdout(), r)
		},
	}
}
