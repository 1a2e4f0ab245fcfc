package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"runtime"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"kindwell/cmd/kindwell/internal/report"
	"kindwell/cmd/kindwell/internal/study"
	"kindwell/cmd/kindwell/internal/tidy"
)

// runFlags are the options that run and demo share.
type runFlags struct {
	only      []string
	workers   int
	overwrite bool
	quiet     bool
}

func (f *runFlags) add(cmd *cobra.Command) {
	cmd.Flags().IntVar(&f.workers, "workers", 0, "goroutines that compute; 0: as many as cores (tables do not depend on it)")
	cmd.Flags().BoolVar(&f.overwrite, "overwrite", false, "replace an existing results folder")
	cmd.Flags().BoolVar(&f.quiet, "quiet", false, "no progress on stderr")
}

// validate checks what can be checked before a file is opened.
func (f *runFlags) validate() error {
	if f.workers < 0 {
		return usageError{fmt.Errorf("--workers is %d; give 1 or more, or 0 for all cores", f.workers)}
	}
	if f.workers == 0 {
		f.workers = runtime.GOMAXPROCS(0)
	}
	for _, part := range f.only {
		if !slices.Contains(study.Parts(), part) {
			return usageError{fmt.Errorf("--only names %q; the parts are %s", part, strings.Join(study.Parts(), ", "))}
		}
	}
	return nil
}

func newRun() *cobra.Command {
	var flags runFlags
	cmd := &cobra.Command{
		Use:   "run STUDY",
		Short: "Run a study and write its tables",
		Long: `Reads the study file and the tables it names, runs every analysis that has a
section in it, and writes the tables into the folder that output.folder names
(relative to the study file). The folder appears whole or not at all.`,
		Example: "  kindwell run saltmere/study.yaml\n  kindwell run study.yaml --only heritability --workers 1",
		Args:    cobra.ExactArgs(1),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := flags.validate(); err != nil {
				return err
			}
			return runStudy(cmd.Context(), args[0], flags, cmd.OutOrStdout(), cmd.ErrOrStderr())
		},
	}
	cmd.Flags().StringSliceVar(&flags.only, "only", nil, "parts to run, of: "+strings.Join(study.Parts(), ", "))
	flags.add(cmd)
	return cmd
}

// runStudy runs one study file and prints the headline to stdout.
func runStudy(ctx context.Context, path string, flags runFlags, stdout, stderr io.Writer) error {
	plan, err := study.Open(path)
	if err != nil {
		return err
	}
	if part := plan.Lacks(flags.only); part != "" {
		return usageError{fmt.Errorf("--only names %s, and %s has no section %s", part, path, part)}
	}
	folder, err := plan.Reserve(flags.overwrite)
	if errors.Is(err, tidy.ErrNotEmpty) {
		return fmt.Errorf("%w (--overwrite)", err)
	}
	if err != nil {
		return err
	}
	defer folder.Abort()
	progress, end := newProgress(ctx, stderr, flags.quiet)
	results, err := plan.Run(ctx, study.Options{Only: flags.only, Workers: flags.workers, Version: version(), Progress: progress})
	end()
	if err != nil {
		return err
	}
	if err := results.Write(folder); err != nil {
		return err
	}
	return report.Headline(stdout, results.Headline())
}
