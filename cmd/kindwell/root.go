package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"runtime/debug"

	"github.com/spf13/cobra"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
)

// Exit statuses of the program.
const (
	statusDone   = 0
	statusFailed = 1 // the work could not be done
	statusInput  = 2 // the input or the command line is wrong
)

// usageError marks a mistake on the command line.
type usageError struct{ error }

func (e usageError) Unwrap() error { return e.error }

// execute runs one command line and returns the exit status. Results go to
// stdout, messages and progress to stderr.
func execute(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	root := newRoot()
	root.SetArgs(args)
	root.SetOut(stdout)
	root.SetErr(stderr)
	err := root.ExecuteContext(ctx)
	if err == nil {
		return statusDone
	}
	if errors.Is(err, context.Canceled) {
		fmt.Fprintln(stderr, "kindwell: stopped; nothing was written")
		return statusFailed
	}
	fmt.Fprintf(stderr, "kindwell: %v\n", err)
	var usage usageError
	if errors.As(err, &usage) {
		return statusInput
	}
	if isInputFault(err) {
		return statusInput
	}
	return statusFailed
}

// isInputFault says whether err is about what the analyst gave us.
func isInputFault(err error) bool {
	var tables *cohort.Faults
	var one *cohort.Fault
	var study config.Faults
	return errors.As(err, &tables) || errors.As(err, &one) || errors.As(err, &study)
}

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "kindwell",
		Short: "Brain-state dynamics and questionnaires in families",
		Long: `kindwell relates summaries of brain-state dynamics to questionnaires in
cohorts of twins, siblings and parents. One study.yaml says what to do: which
measures predict which traits in people never seen, with relatives kept on one
side of every split, and how heritable each of them is.

For research only; not for diagnosis, selection or any decision about a person.`,
		Version:       version(),
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			return cmd.Help()
		},
	}
	root.SetFlagErrorFunc(func(cmd *cobra.Command, err error) error {
		return usageError{fmt.Errorf("%w; see '%s --help'", err, cmd.CommandPath())}
	})
	root.AddCommand(newDemo(), newInit(), newCheck(), newRun())
	for _, c := range root.Commands() {
		c.Args = asUsage(c.Args)
	}
	root.Args = asUsage(root.Args)
	return root
}

// asUsage turns complaints about arguments into usage errors.
func asUsage(check cobra.PositionalArgs) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if err := check(cmd, args); err != nil {
			if near := suggestions(cmd, args); len(near) > 0 {
				return usageError{fmt.Errorf("%w; did you mean %q?", err, near[0])}
			}
			return usageError{fmt.Errorf("%w; see '%s --help'", err, cmd.CommandPath())}
		}
		return nil
	}
}

// suggestions are the commands that a mistyped one may mean.
func suggestions(cmd *cobra.Command, args []string) []string {
	if cmd.HasParent() || len(args) == 0 {
		return nil
	}
	cmd.SuggestionsMinimumDistance = 2
	return cmd.SuggestionsFor(args[0])
}

// release is the version that the next tag will carry.
const release = "0.1.0"

// version names the release, and the commit when the program was built from
// a checkout.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return release
	}
	for _, s := range info.Settings {
		if s.Key == "vcs.revision" && len(s.Value) >= 12 {
			return release + "+" + s.Value[:12]
		}
	}
	return release
}
