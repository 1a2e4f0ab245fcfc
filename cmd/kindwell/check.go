package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"kindwell/cmd/kindwell/internal/report"
	"kindwell/cmd/kindwell/internal/study"
)

func newCheck() *cobra.Command {
	var format string
	cmd := &cobra.Command{
		Use:   "check STUDY",
		Short: "Read everything, run nothing, and say what a run would do",
		Long: `Reads the study file and all tables it names and says who is in, which
relations were found, how many arrangements the families allow, what is
missing, the smallest effects this sample can see, and how much work a run is.
Everything that is wrong with the input is named, with file, row and column.`,
		Example: "  kindwell check saltmere/study.yaml\n  kindwell check study.yaml --format json",
		Args:    cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			if format != "text" && format != "json" {
				return usageError{fmt.Errorf("--format is %q; it can be text or json", format)}
			}
			plan, err := study.Open(args[0])
			if err != nil {
				return err
			}
			found, err := plan.Check()
			if err != nil {
				return err
			}
			if format == "json" {
				return report.CheckJSON(cmd.OutOrStdout(), found)
			}
			return report.CheckText(cmd.OutOrStdout(), found)
		},
	}
	cmd.Flags().StringVar(&format, "format", "text", "how to print: text or json")
	return cmd
}
