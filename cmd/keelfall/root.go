package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"keelfall/cmd/internal/report"
	"keelfall/column"
	"keelfall/configs"
	"keelfall/solver/race"
)

// Exit statuses of the contract.
const (
	exitDone        = 0   // also when nothing drips
	exitFailed      = 1   // the computation or the writing failed
	exitInput       = 2   // the input or the command line is wrong
	exitInterrupted = 130 // Ctrl-C
)

// Streams are where a command prints: results to Out, warnings and progress to Err.
type Streams struct{ Out, Err io.Writer }

// usageError marks a wrong command line.
type usageError struct{ error }

func (u usageError) Unwrap() error { return u.error }

// Main runs one command line and returns the exit status.
func Main(ctx context.Context, args []string, s Streams) int {
	root := newRoot(s)
	root.SetArgs(args)
	err := root.ExecuteContext(ctx)
	if err == nil {
		return exitDone
	}
	if ctx.Err() != nil {
		fmt.Fprintln(s.Err, "keelfall: interrupted; nothing was written")
		return exitInterrupted
	}
	var mistakes configs.Mistakes
	if errors.As(err, &mistakes) {
		fmt.Fprintln(s.Err, err)
		return exitInput
	}
	fmt.Fprintln(s.Err, "keelfall:", err)
	var usage usageError
	var outside *column.OutsideError
	if errors.As(err, &usage) || errors.As(err, &outside) || errors.Is(err, race.ErrInput) {
		return exitInput
	}
	return exitFailed
}

// later are commands that are planned and not there yet.
var later = []string{"map", "threshold", "ensemble", "compare"}

func newRoot(s Streams) *cobra.Command {
	root := &cobra.Command{
		Use:   "keelfall",
		Short: "Could the dense root of an arc have dripped, or was it cut out along shear zones first?",
		Long: `keelfall stacks layers with density, thickness and temperature-dependent viscosity,
and tells growth rates and wavelengths, when the root would drip, when shear zones
would have cut it out, and which comes first.

It is research software: linear theory in one dimension. Every result says what it
leaves out.`,
		Version:       report.Version,
		SilenceUsage:  true,
		SilenceErrors: true,
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				return usageError{errors.New("say what to do: keelfall run, or keelfall --help")}
			}
			if slices.Contains(later, args[0]) {
				return usageError{fmt.Errorf("%s: not in this version of keelfall", args[0])}
			}
			msg := fmt.Sprintf("there is no command %q", args[0])
			if near := cmd.SuggestionsFor(args[0]); len(near) > 0 {
				msg += "; did you mean " + strings.Join(near, " or ") + "?"
			}
			return usageError{errors.New(msg)}
		},
		RunE: func(*cobra.Command, []string) error { return nil },
	}
	root.SetOut(s.Out)
	root.SetErr(s.Err)
	root.CompletionOptions.DisableDefaultCmd = true
	root.SetFlagErrorFunc(func(_ *cobra.Command, err error) error { return usageError{err} })
	root.SuggestionsMinimumDistance = 2
	root.AddCommand(newRunCmd(s, run), newExampleCmd(s), newCheckCmd(s), newColumnCmd(s), newSpectrumCmd(s), newModeCmd(s),
		newDripCmd(s), newExciseCmd(s), newHistoryCmd(s), newLawsCmd(s), newMineralsCmd(s), newSchemaCmd(s), newVerifyCmd(s))
	return root
}

// args wraps a check of positional arguments so that a wrong count is an input error.
func args(check cobra.PositionalArgs) cobra.PositionalArgs {
	return func(cmd *cobra.Command, a []string) error {
		if err := check(cmd, a); err != nil {
			return usageError{fmt.Errorf("keelfall %s: %w", cmd.Name(), err)}
		}
		return nil
	}
}
