package main

import (
	"fmt"
	"slices"

	"github.com/spf13/cobra"

	"halfplane/report"
	"halfplane/schema"
)

// schemaKind is one JSON Schema that the program can print.
type schemaKind struct {
	name, of string
	text     func() []byte
}

func schemaKinds() []schemaKind {
	spec := func(k schema.Kind) func() []byte { return func() []byte { return schema.JSONSchema(k) } }
	return []schemaKind{
		{"design", "NAME.converter.yaml: one converter", spec(schema.Design)},
		{"compensator", "NAME.compensator.yaml: a compensator that designs share", spec(schema.Compensator)},
		{"parts", "NAME.parts.yaml: a library of components", spec(schema.Parts)},
		{"policy", "halfplane.yaml: a project's severities and thresholds", spec(schema.Policy)},
		{"findings", "output of 'halfplane check --as json'", report.FindingsSchema},
		{"figures", "output of 'halfplane figures --as json'", report.FiguresSchema},
		{"comparison", "output of 'halfplane compare --as json'", report.ComparisonSchema},
	}
}

func newSchema() *cobra.Command {
	var names []string
	for _, k := range schemaKinds() {
		names = append(names, k.name)
	}
	return &cobra.Command{
		Use:   "schema [KIND]",
		Short: "The JSON Schema of a kind of spec file or of an output form",
		Long:  "schema prints a JSON Schema (draft 2020-12); without a kind it lists the kinds. That of SARIF is published by OASIS:\n" + report.SARIFSchema + ".",
		Example: `  halfplane schema
  halfplane schema design > converter.schema.json`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: cobra.FixedCompletions(names, cobra.ShellCompDirectiveNoFileComp),
		RunE: func(cmd *cobra.Command, args []string) error {
			kinds := schemaKinds()
			if len(args) == 0 {
				for _, k := range kinds {
					fmt.Fprintf(cmd.OutOrStdout(), "%-12s %s\n", k.name, k.of)
				}
				return nil
			}
			i := slices.Index(names, args[0])
			if i < 0 {
				return fmt.Errorf("there is no schema %q: expected %s", args[0], either(names))
			}
			_, err := cmd.OutOrStdout().Write(kinds[i].text())
			return err
		},
	}
}
