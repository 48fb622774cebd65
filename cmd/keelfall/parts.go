package main

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
	"keelfall/plots"
	"keelfall/solver/growth"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// part is what one computing command prints and writes.
type part struct {
	name     string
	text     string
	value    any
	table    report.Table
	more     []report.Table // written beside it into a folder
	figures  func(width vg.Length) ([]plots.Figure, error)
	warnings []string
}

// one makes the figures of a part that has a single one.
func one(draw func(vg.Length) (plots.Figure, error)) func(vg.Length) ([]plots.Figure, error) {
	return func(w vg.Length) ([]plots.Figure, error) {
		f, err := draw(w)
		return []plots.Figure{f}, err
	}
}

// newPartCmd makes a command that computes one part of an experiment.
func newPartCmd(s Streams, use, short string, compute func(context.Context, *options, *race.Problem, *state.State) (*part, error)) (*cobra.Command, *options) {
	o := &options{Streams: s}
	cmd := &cobra.Command{
		Use: use, Short: short, Args: args(cobra.ExactArgs(1)),
		RunE: func(cmd *cobra.Command, a []string) error {
			o.File = a[0]
			_, p, err := o.load()
			if err != nil {
				return err
			}
			if err := o.without(o.Settings.Out != "", "figures", "width"); err != nil {
				return err
			}
			var folder *report.Folder
			if place := o.Settings.Out; place != "" {
				if folder, err = report.NewFolder(place); err != nil { // before hours are spent
					return err
				}
				defer folder.Abandon()
			}
			progress := newProgress(o.Err, patience)
			defer progress.stop()
			progress.say("the " + cmd.Name())
			st, err := race.Prepare(p)
			if err != nil {
				return err
			}
			r, err := compute(cmd.Context(), o, p, st)
			if err != nil {
				return err
			}
			if folder != nil {
				if err := o.fill(folder, r); err != nil {
					return err
				}
			}
			progress.stop()
			o.warn(r.warnings)
			return o.print(r.text, r.value, r.table)
		},
	}
	o.flags(cmd)
	return cmd, o
}

// fill writes the part's folder.
func (o *options) fill(folder *report.Folder, r *part) error {
	w := &output{}
	if err := w.json(r.name+".json", r.value); err != nil {
		return err
	}
	for _, t := range append([]report.Table{r.table}, r.more...) {
		w.add(t.Name+".csv", t.Encode())
	}
	if r.figures != nil {
		var err error
		if w.figures, err = r.figures(vg.Length(o.Width) * vg.Millimeter); err != nil {
			return err
		}
	}
	return o.write(o.Settings.Out, folder, w)
}

func newSpectrumCmd(s Streams) *cobra.Command {
	var at string
	var follow bool
	cmd, _ := newPartCmd(s, "spectrum FILE", "Growth rate against wavelength",
		func(ctx context.Context, o *options, p *race.Problem, st *state.State) (*part, error) {
			var wavelengths []float64
			if at != "" {
				var err error
				if wavelengths, err = lengths(at); err != nil {
					return nil, usageError{err}
				}
			}
			sp, err := race.Spectrum(ctx, p, st)
			if err != nil {
				return nil, err
			}
			rates := sp.Rates
			var exact []growth.Rate
			if wavelengths != nil {
				if exact, err = growth.Evaluate(ctx, race.GrowthColumn(p, st), wavelengths, growth.Options{Workers: p.Workers}); err != nil {
					return nil, err
				}
				rates = exact
			}
			out := &part{name: "spectrum", text: report.SpectrumPage(p, st, sp, exact), table: report.SpectrumTable(rates),
				figures: one(func(w vg.Length) (plots.Figure, error) {
					return plots.Spectrum(sp, nil, plots.SettingOf(p), w)
				}),
				warnings: report.SpectrumWarnings(p, st, sp)}
			value := report.Spectrum(p, st, sp, exact)
			if follow {
				all, err := branches(ctx, p, st, sp, wavelengths)
				if err != nil {
					return nil, err
				}
				value.Branches = report.Branches(st, all)
				out.text += report.BranchesText(st, all)
				out.table = report.BranchesTable(st, all)
				out.figures = one(func(w vg.Length) (plots.Figure, error) {
					return plots.Branches(all, report.BranchLabels(st, all), plots.SettingOf(p), w)
				})
			}
			out.value = value
			return out, nil
		})
	cmd.Flags().StringVar(&at, "at", "", "evaluate exactly these wavelengths: 50km,100km")
	cmd.Flags().BoolVar(&follow, "branches", false, "follow every growing mode across the wavelengths, not the fastest alone")
	return cmd
}

// branches follows every growing mode over the wavelengths asked for, in increasing
// order, or over those of the spectrum.
func branches(ctx context.Context, p *race.Problem, st *state.State, sp *growth.Spectrum, wavelengths []float64) ([]growth.Branch, error) {
	wavelengths = slices.Clone(wavelengths)
	if wavelengths == nil {
		for _, r := range sp.Rates {
			wavelengths = append(wavelengths, r.Wavelength)
		}
	}
	slices.Sort(wavelengths)
	return growth.Branches(ctx, race.GrowthColumn(p, st), slices.Compact(wavelengths), growth.Options{Workers: p.Workers})
}

// Wavelengths that are taken, m: below, a hand sample; above, more than the Earth.
const shortest, longest = 10, 1e8

// lengths reads a list of wavelengths with units.
func lengths(list string) ([]float64, error) {
	var out []float64
	for _, s := range strings.Split(list, ",") {
		x, err := configs.ParseLength(strings.TrimSpace(s))
		if err != nil {
			return nil, fmt.Errorf("--at: %w", err)
		}
		if !(x >= shortest && x <= longest) {
			return nil, fmt.Errorf("--at: a wavelength of %s; must be from 10 m to 1e5 km", strings.TrimSpace(s))
		}
		out = append(out, x)
	}
	if len(out) == 0 {
		return nil, errors.New("--at needs wavelengths, for example 50km,100km")
	}
	return out, nil
}

func newDripCmd(s Streams) *cobra.Command {
	cmd, _ := newPartCmd(s, "drip FILE", "When the root drips, and at what spacing",
		func(ctx context.Context, _ *options, p *race.Problem, st *state.State) (*part, error) {
			r, err := race.DripStudy(ctx, p, st)
			if err != nil {
				return nil, err
			}
			return &part{name: "drip", text: report.DripPage(p, r), value: report.Drip(r), table: report.DripTable(r), more: report.DripTables(r),
				figures:  func(w vg.Length) ([]plots.Figure, error) { return plots.Drips(r, w) },
				warnings: report.DripWarnings(p, st, r.Drip)}, nil
		})
	return cmd
}

func newExciseCmd(s Streams) *cobra.Command {
	cmd, _ := newPartCmd(s, "excise FILE", "When shear zones have cut the root out",
		func(ctx context.Context, _ *options, p *race.Problem, st *state.State) (*part, error) {
			r := &race.Result{Problem: p, State: st}
			var err error
			if r.Excision, err = race.ExciseStudy(ctx, p, st); err != nil {
				return nil, err
			}
			return &part{name: "excise", text: report.ExcisionPage(p, r), value: report.Excision(p, st, r.Excision), table: report.ExcisionTable(r), more: report.ExcisionTables(r),
				figures:  func(w vg.Length) ([]plots.Figure, error) { return plots.Excisions(r, w) },
				warnings: report.ExcisionWarnings(p, st, r.Excision)}, nil
		})
	return cmd
}
