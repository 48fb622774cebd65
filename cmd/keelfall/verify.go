package main

import (
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"keelfall/cmd/internal/report"
	"keelfall/solver/checks"
)

// newVerifyCmd compares the program with published and derived answers.
func newVerifyCmd(s Streams) *cobra.Command {
	o := &options{Streams: s}
	cmd := &cobra.Command{
		Use: "verify", Short: "Compares the program with published and derived answers", Args: args(cobra.NoArgs),
		RunE: func(cmd *cobra.Command, _ []string) error {
			var outcomes []checks.Outcome
			failed := 0
			for _, c := range checks.All() {
				out := c.Run(cmd.Context())
				if err := cmd.Context().Err(); err != nil {
					return err
				}
				if !out.Pass {
					failed++
				}
				outcomes = append(outcomes, out)
			}
			if err := o.print(report.VerifyPage(outcomes), report.Verify(outcomes), report.VerifyTable(outcomes)); err != nil {
				return err
			}
			if failed > 0 {
				return fmt.Errorf("%d of %d checks failed", failed, len(outcomes))
			}
			return nil
		},
	}
	cmd.Flags().StringVar(&o.Format, "format", "text", "text, json or csv")
	cmd.PreRunE = func(*cobra.Command, []string) error {
		if !strings.Contains(" text json csv ", " "+o.Format+" ") {
			return usageError{errors.New("--format " + o.Format + " is not known; needs text, json or csv")}
		}
		return nil
	}
	return cmd
}
