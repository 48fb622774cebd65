package main

import (
	"context"
	"errors"
	"fmt"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/plots"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// newModeCmd prints and draws the modes at one wavelength.
func newModeCmd(s Streams) *cobra.Command {
	var at string
	var number int
	cmd, _ := newPartCmd(s, "mode FILE", "The growing modes at one wavelength: what moves, who resists, what controls it",
		func(_ context.Context, _ *options, p *race.Problem, st *state.State) (*part, error) {
			if at == "" {
				return nil, usageError{errors.New("keelfall mode needs --at, a wavelength, for example --at 60km")}
			}
			wavelengths, err := lengths(at)
			if err != nil {
				return nil, usageError{err}
			}
			if len(wavelengths) != 1 {
				return nil, usageError{fmt.Errorf("--at %s: needs one wavelength, for example 60km", at)}
			}
			solver, err := growth.NewSolver(race.GrowthColumn(p, st), 0)
			if err != nil {
				return nil, err
			}
			modes, err := solver.Modes(wavelengths[0])
			if err != nil {
				return nil, err
			}
			if number < 1 || number > len(modes) {
				return nil, usageError{fmt.Errorf("--mode %d: there are modes 1 to %d at this wavelength", number, len(modes))}
			}
			m := modes[number-1]
			return &part{name: "mode", text: report.ModesPage(p, st, wavelengths[0], modes, number-1),
				value: report.Modes(st, wavelengths[0], modes, race.Warnings(p, st)), table: report.ModeTable(st, m),
				figures:  one(func(w vg.Length) (plots.Figure, error) { return plots.Mode(st.Column, m, w) }),
				warnings: race.Warnings(p, st)}, nil
		})
	cmd.Flags().StringVar(&at, "at", "", "the wavelength, for example 60km")
	cmd.Flags().IntVar(&number, "mode", 1, "which of the growing modes, fastest first, to print in full and draw")
	return cmd
}
