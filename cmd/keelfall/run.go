package main

import (
	"context"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/plots"
	"keelfall/solver/race"
)

func newRunCmd(s Streams, do func(context.Context, *options) error) *cobra.Command {
	o := &options{Streams: s}
	cmd := &cobra.Command{
		Use:   "run [FILE]",
		Short: "The whole job: growth, drip, excision, verdict, figures; without FILE the built-in example",
		Args:  args(cobra.MaximumNArgs(1)),
		RunE: func(cmd *cobra.Command, a []string) error {
			if len(a) > 0 {
				o.File = a[0]
			}
			return do(cmd.Context(), o)
		},
	}
	o.flags(cmd)
	return cmd
}

func run(ctx context.Context, o *options) error {
	e, p, err := o.load()
	if err != nil {
		return err
	}
	place := o.Settings.Out
	if place == "" {
		place = stem(o.File)
	}
	folder, err := report.NewFolder(place) // before hours are spent
	if err != nil {
		return err
	}
	defer folder.Abandon()
	progress := newProgress(o.Err, patience)
	defer progress.stop()
	r, err := race.RunSaying(ctx, p, progress.say)
	if err != nil {
		return err
	}
	progress.say("the figures")
	figures, err := plots.All(r, vg.Length(o.Width)*vg.Millimeter)
	if err != nil {
		return err
	}
	prov := report.Provenance(e.SHA256, e.Resolved(), p, r.Limits)
	result := report.Result(r, prov)
	page := report.Page(r)

	w := &output{figures: figures}
	if err := w.json("result.json", result); err != nil {
		return err
	}
	w.add("page.txt", []byte(page))
	w.add("methods.md", []byte(report.Methods(r, prov)))
	w.add("sources.bib", []byte(report.Bibliography(prov.Sources)))
	for _, t := range report.Tables(r) {
		w.add(t.Name+".csv", t.Encode())
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	if err := o.write(place, folder, w); err != nil {
		return err
	}
	progress.stop()
	if o.Format != "text" {
		o.warn(r.Warnings)
	}
	return o.print(page, result, report.VerdictTable(r))
}

// stem names the folder of a run after its file.
func stem(file string) string {
	if file == "" {
		return defaultExample
	}
	base := filepath.Base(file)
	s := strings.TrimSuffix(base, filepath.Ext(base))
	if s == base { // a file without an extension cannot share its name with a folder
		s += "-results"
	}
	return s
}
