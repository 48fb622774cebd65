package main

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
	"keelfall/plots"
	"keelfall/rheology"
)

// lawsOptions are what `keelfall laws` takes.
type lawsOptions struct {
	options
	filter                                       report.LawFilter
	rate, pressure, grain, fugacity, start, stop string
	content                                      float64
}

func newLawsCmd(s Streams) *cobra.Command {
	o := &lawsOptions{options: options{Streams: s}}
	cmd := &cobra.Command{
		Use:   "laws [NAME…]",
		Short: "Lists the creep laws, shows one with its sources, or draws several against temperature",
		Long: `Without a name, lists the creep laws that the filters leave; with one name, shows that
law with its sources; with several, lists those. The laws of your own catalogues
(--catalogues, or the settings) are among them.

With --out DIR the laws are drawn as viscosity against temperature, at one strain rate,
pressure, grain size and amount of water, and the curves are written beside the figure.
A curve is dashed outside the temperatures, pressures or stresses of its law's
experiments, as far as those are known, and thin where their temperatures are not. The
caption and what the errors are taken about stand in captions.md.`,
		Example: `  keelfall laws --material olivine --water wet
  keelfall laws "wet quartzite Gleason 1995"
  keelfall laws --material olivine --mechanism dislocation --out olivine --rate "1e-15 1/s"`,
		RunE: func(cmd *cobra.Command, names []string) error { return o.run(names) },
	}
	o.cmd = cmd
	f := cmd.Flags()
	f.StringVar(&o.filter.Material, "material", "", "only laws of this rock or mineral, for example olivine")
	f.StringVar(&o.filter.Mechanism, "mechanism", "", "only laws of this mechanism, for example dislocation")
	f.StringVar(&o.filter.Water, "water", "", "only laws measured wet, dry or undried")
	f.StringVar(&o.filter.Search, "search", "", "only laws with these words in name, source or notes")
	o.formatFlag(f)
	o.folderFlags(f)
	o.settingsFlags(f)
	f.StringVar(&o.rate, "rate", "1e-15 1/s", "strain rate of the figure")
	f.StringVar(&o.pressure, "pressure", "1 GPa", "pressure of the figure")
	f.StringVar(&o.grain, "grain-size", "2 mm", "grain size of the figure, for laws that depend on it")
	f.StringVar(&o.fugacity, "fugacity", "200 MPa", "water fugacity of the figure, for laws that count water so")
	f.Float64Var(&o.content, "content", 1000, "water content of the figure in H per million Si, for laws that count water so")
	f.StringVar(&o.start, "from", "500 degC", "lowest temperature of the figure")
	f.StringVar(&o.stop, "to", "1200 degC", "highest temperature of the figure")
	return cmd
}

func (o *lawsOptions) run(names []string) error {
	if err := o.check(); err != nil {
		return err
	}
	laws, err := o.laws()
	if err != nil {
		return err
	}
	out := o.cmd.Flags().Changed("out")
	if err := o.without(out, "rate", "pressure", "grain-size", "fugacity", "content", "from", "to", "figures", "width"); err != nil {
		return err
	}
	one := len(names) == 1
	if len(names) > 0 {
		if laws, err = named(laws, names); err != nil {
			var unknown *rheology.UnknownLawError
			if errors.As(err, &unknown) {
				err = errors.New(strings.TrimPrefix(err.Error(), "rheology: ") + "; keelfall laws lists them all")
			}
			return usageError{err}
		}
	}
	o.filter.Named = len(names) > 0
	if laws, err = o.filter.Choose(laws); err != nil {
		return usageError{err}
	}
	if out {
		if err := o.draw(laws); err != nil {
			return err
		}
	}
	if one {
		return o.print(report.LawPage(&laws[0]), report.Laws(laws), report.LawsTable(laws))
	}
	return o.print(report.LawsPage(laws), report.Laws(laws), report.LawsTable(laws))
}

// laws returns the catalogue with the user's own laws, by name.
func (o *lawsOptions) laws() ([]rheology.Law, error) {
	if err := o.settings(); err != nil {
		return nil, usageError{err}
	}
	all := rheology.Laws()
	own, err := o.catalogues()
	if err != nil {
		return nil, err
	}
	for _, c := range own {
		all = append(all, c.Laws...)
	}
	return all, nil
}

// named returns the laws of these names, in their order, each once.
func named(laws []rheology.Law, names []string) ([]rheology.Law, error) {
	var out []rheology.Law
	for _, n := range names {
		l, err := rheology.FindIn(laws, n)
		if err != nil {
			return nil, err
		}
		if !slices.ContainsFunc(out, func(o rheology.Law) bool { return o.Name == l.Name }) {
			out = append(out, l)
		}
	}
	return out, nil
}

// draw fills a folder with the laws' figure and its table.
func (o *lawsOptions) draw(laws []rheology.Law) error {
	if len(laws) > plots.MostLaws {
		return usageError{fmt.Errorf("a figure takes up to %d creep laws, and these are %d; name some, or narrow them down with --material, --mechanism, --water or --search", plots.MostLaws, len(laws))}
	}
	at, err := o.conditions()
	if err != nil {
		return usageError{err}
	}
	curves, words, err := report.LawCurves(laws, at)
	if err != nil {
		return usageError{err}
	}
	folder, err := report.NewFolder(o.Settings.Out)
	if err != nil {
		return err
	}
	defer folder.Abandon()
	o.warn(report.LawWarnings(curves))
	return o.fill(folder, &part{name: "laws", value: report.LawFigure(laws, at, curves), table: report.LawCurvesTable(curves, laws, at),
		figures: one(func(w vg.Length) (plots.Figure, error) { return plots.Laws(curves, words, w) })})
}

// conditions reads what the figure is drawn at.
func (o *lawsOptions) conditions() (report.LawConditions, error) {
	c := report.LawConditions{Content: o.content}
	for _, q := range []struct {
		flag, text, dimension string
		to                    *float64
		least, most           float64
		needs                 string
	}{
		{"--rate", o.rate, "strain-rate", &c.Rate, 1e-25, 1, "1e-25 to 1 1/s"},
		{"--pressure", o.pressure, "pressure", &c.Pressure, 0, 100e9, "0 or more, up to 100 GPa"},
		{"--grain-size", o.grain, "length", &c.GrainSize, 1e-9, 1, "1e-9 to 1 m"},
		{"--fugacity", o.fugacity, "pressure", &c.Fugacity, 1, 1e12, "1 Pa to 1000 GPa"},
		{"--from", o.start, "temperature", &c.From, 200, 2500, "200 to 2500 K"},
		{"--to", o.stop, "temperature", &c.To, 200, 2500, "200 to 2500 K"},
	} {
		x, err := configs.ParseQuantity(q.text, q.dimension)
		if err != nil {
			return c, fmt.Errorf("%s: %w", q.flag, err)
		}
		if !(x >= q.least && x <= q.most) {
			return c, fmt.Errorf("%s %s is out of range; needs %s", q.flag, q.text, q.needs)
		}
		*q.to = x
	}
	switch {
	case !(c.Content >= 1e-3 && c.Content <= 1e6):
		return c, fmt.Errorf("--content %g is out of range; needs 0.001 to 1e6 H per million Si", c.Content)
	case !(c.To > c.From):
		return c, fmt.Errorf("--to %s is not above --from %s", o.stop, o.start)
	}
	return c, nil
}
