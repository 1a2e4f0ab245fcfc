package main

import (
	"fmt"
	"path/filepath"

	"github.com/spf13/cobra"

	"kindwell/cmd/kindwell/internal/demo"
)

func newDemo() *cobra.Command {
	var flags runFlags
	cmd := &cobra.Command{
		Use:   "demo [DIR]",
		Short: "Write the invented Saltmere cohort and run its study",
		Long: `Writes the tables and the study file of an invented cohort, the Saltmere
families, into DIR (saltmere, if none is given), runs the study, and prints
what it found. What was planted in the data stands in DIR/README.md. Nobody in
Saltmere exists.`,
		Example: "  kindwell demo\n  kindwell demo /tmp/saltmere --workers 1",
		Args:    cobra.MaximumNArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := flags.validate(); err != nil {
				return err
			}
			dir := "saltmere"
			if len(args) == 1 {
				dir = args[0]
			}
			if err := demo.WriteTo(dir, flags.overwrite); err != nil {
				return err
			}
			fmt.Fprintf(cmd.ErrOrStderr(), "wrote the Saltmere cohort into %s; running its study\n", dir)
			return runStudy(cmd.Context(), filepath.Join(dir, "study.yaml"), flags, cmd.OutOrStdout(), cmd.ErrOrStderr())
		},
	}
	flags.add(cmd)
	return cmd
}
