package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/rules"
)

func newRule() *cobra.Command {
	var form *choice
	cmd := &cobra.Command{
		Use:   "rule [NAME]",
		Short: "The catalogue of rules, or one rule in full",
		Long: `rule lists every rule by group, with its severity and the sentence that says what good looks like. With a name it
prints that rule in full: sentence, formula, published source, policy keys with their defaults, and an example. As
Markdown it is the page that an editor's findings link to, when it lies as rules.md beside the program.`,
		Example: `  halfplane rule
  halfplane rule rhp-zero-crossover
  halfplane rule --as markdown > rules.md`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: completeRules,
		RunE: func(cmd *cobra.Command, args []string) error {
			markdown := form.value == "markdown"
			if len(args) == 0 {
				if markdown {
					return printed(cmd, rules.Catalogue())
				}
				return report.Catalogue(cmd.OutOrStdout(), rules.All())
			}
			r := rules.Find(args[0])
			if r == nil {
				return fmt.Errorf("there is no rule %q%s", args[0], suggest(args[0]))
			}
			if markdown {
				return printed(cmd, rules.Page(r))
			}
			return report.RulePage(cmd.OutOrStdout(), r)
		},
	}
	form = addChoice(cmd, "as", "text", "the form of the output", "text", "markdown")
	return cmd
}

// printed writes a text that is ready to read.
func printed(cmd *cobra.Command, text string) error {
	_, err := fmt.Fprint(cmd.OutOrStdout(), text)
	return err
}
