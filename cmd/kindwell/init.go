package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"kindwell/cmd/kindwell/internal/study"
)

func newInit() *cobra.Command {
	cmd := &cobra.Command{
		Use:   "init DIR",
		Short: "Look at the tables in a folder and write a study.yaml that runs",
		Long: `Looks at the CSV and TSV tables in DIR, finds out which holds the people, which
the measures and which the traits, and writes DIR/study.yaml with a comment at
every choice it made. Read it before you run it: a program can guess what a
column is called, not what you ask. An existing study.yaml is never replaced.`,
		Example: "  kindwell init mytables\n  kindwell check mytables/study.yaml",
		Args:    cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			written, err := study.Draft(args[0])
			if err != nil {
				return err
			}
			for _, line := range written.Notes {
				fmt.Fprintln(cmd.OutOrStdout(), line)
			}
			fmt.Fprintf(cmd.OutOrStdout(), "wrote %s; look it over, then: kindwell check %s\n", written.Path, written.Path)
			if written.Trouble != nil {
				return fmt.Errorf("the study does not run yet:\n%w", written.Trouble)
			}
			return nil
		},
	}
	return cmd
}
