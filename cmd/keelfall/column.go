package main

import (
	"context"
	"errors"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
	"keelfall/plots"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// newColumnCmd prints and draws the column at its start.
func newColumnCmd(s Streams) *cobra.Command {
	var pressures string
	cmd, _ := newPartCmd(s, "column FILE", "Temperature, pressure, density, viscosity and strength against depth, and what would sink",
		func(_ context.Context, o *options, p *race.Problem, st *state.State) (*part, error) {
			if pressures != "" && o.Format == "csv" {
				return nil, usageError{errors.New("--depth-of has no place in the table of --format csv; take text or json")}
			}
			depths, err := depthsOf(st, pressures)
			if err != nil {
				return nil, usageError{err}
			}
			value := report.Column(p, st)
			value.DepthOf = report.DepthsJSON(depths)
			more := []report.Table{report.WeightTable(st), report.IsostasyTable(p, st)}
			if p.GeothermFit != nil {
				more = append(more, report.SamplesTable(p.GeothermFit))
			}
			return &part{name: "column", text: report.ColumnPage(p, st, depths), value: value,
				table: report.ColumnTable(st), more: more,
				figures:  func(w vg.Length) ([]plots.Figure, error) { return plots.Columns(st, w) },
				warnings: race.Warnings(p, st)}, nil
		})
	cmd.Long = `Prints the column as it is at the start: for every layer its depths, temperature,
pressure, density, viscosity and creep; and what it weighs against the rock below it,
with the garnet share, reaction extent or melt fraction at which that changes sign; how
high it stands by isostasy, with its root and without, and the force that drives.

With --out DIR it draws the column and its strength: the differential stress that each
rock bears at the background strain rate, by creep or, where that is weaker, by friction.
At --width 180 all is one figure.`
	cmd.Example = `  keelfall column arc.yaml --out arc
  keelfall column arc.yaml --depth-of "1.2 GPa,1.5 GPa"`
	cmd.Flags().StringVar(&pressures, "depth-of", "", "print the depths of these pressures: \"1.2 GPa,1.5 GPa\"")
	return cmd
}

// depthsOf returns the depths of a list of pressures with units.
func depthsOf(st *state.State, list string) ([]report.DepthOf, error) {
	if list == "" {
		return nil, nil
	}
	var out []report.DepthOf
	for _, s := range strings.Split(list, ",") {
		P, err := configs.ParseQuantity(strings.TrimSpace(s), "pressure")
		if err != nil {
			return nil, fmt.Errorf("--depth-of: %w", err)
		}
		if P < 0 {
			return nil, fmt.Errorf("--depth-of: a pressure of %s; must be 0 or more", strings.TrimSpace(s))
		}
		z, ok := st.DepthOf(P)
		out = append(out, report.DepthOf{Pressure: P, Depth: z, Found: ok})
	}
	return out, nil
}
