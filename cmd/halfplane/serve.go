package main

import (
	"github.com/spf13/cobra"

	"halfplane/lsp"
)

func newServe() *cobra.Command {
	var jobs int
	var root string
	cmd := &cobra.Command{
		Use:   "serve",
		Short: "The editor server, on standard input and output",
		Long: `serve speaks the Language Server Protocol on standard input and output: findings at their exact range while one types,
hover on quantities and rules. An editor starts it; there is nothing to see in a terminal.`,
		Example: `  vim.lsp.start({name = "halfplane", cmd = {"halfplane", "serve"}})   -- in Neovim`,
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			o := lsp.Options{Version: version, Jobs: jobs, Root: root}
			if code := lsp.Serve(cmd.Context(), cmd.InOrStdin(), cmd.OutOrStdout(), cmd.ErrOrStderr(), o); code != 0 {
				return exit{status(code)}
			}
			return nil
		},
	}
	cmd.Flags().IntVar(&jobs, "jobs", 0, "corners analysed at once; 0: as many as the machine runs")
	cmd.Flags().StringVar(&root, "root", "", "`FOLDER` that references between files may not leave (default: each file's own workspace)")
	return cmd
}
