package main

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"gonum.org/v1/plot/vg"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
	"keelfall/plots"
	"keelfall/rheology"
	"keelfall/solver/race"
)

// defaultExample is what `keelfall run` runs without a file.
const defaultExample = "tarnvik"

// options are what every computing command takes.
type options struct {
	Streams
	File     string // "" for the built-in example
	Set      []string
	Format   string
	Width    float64 // mm
	Settings configs.Settings

	settingsFile string
	cmd          *cobra.Command
}

// flags adds the flags that every computing command has.
func (o *options) flags(cmd *cobra.Command) {
	o.cmd = cmd
	f := cmd.Flags()
	f.StringArrayVar(&o.Set, "set", nil, "change the experiment, path=value; names in lists: layers.root.thickness=12km; an empty value removes the key")
	f.StringVar(&o.Format, "format", "text", "text, json or csv")
	f.String("out", "", "folder to write figures and tables into")
	f.String("figures", "", "formats of figures: png,svg,pdf")
	f.Int("workers", 0, "how many at once; 0: as many as there are cores")
	f.Float64Var(&o.Width, "width", 85, "width of figures in mm: 85 is a journal column, 180 a page")
	f.String("catalogues", "", "CSV files of further creep laws, separated by commas")
	f.StringVar(&o.settingsFile, "settings", "", "file of settings (default keelfall/settings.yaml in the user's configuration folder)")
}

// load reads settings and experiment.
func (o *options) load() (*configs.Experiment, *race.Problem, error) {
	if !slices.Contains([]string{"text", "json", "csv"}, o.Format) {
		return nil, nil, usageError{fmt.Errorf("--format %s is not known; needs text, json or csv", o.Format)}
	}
	if w := vg.Length(o.Width) * vg.Millimeter; w < 80*vg.Millimeter || w > 400*vg.Millimeter {
		return nil, nil, usageError{fmt.Errorf("--width %g; needs 80 to 400 mm", o.Width)}
	}
	var err error
	if o.Settings, err = configs.LoadSettings(o.settingsFile, o.cmd.Flags()); err != nil {
		return nil, nil, usageError{err}
	}
	if out := o.Settings.Out; out != "" {
		if err := report.CheckFolder(out); err != nil { // before hours are spent
			return nil, nil, err
		}
	}
	reader := configs.Reader{}
	for _, path := range o.Settings.Catalogues {
		laws, err := readLaws(path)
		if err != nil {
			return nil, nil, usageError{err}
		}
		reader.Laws = append(reader.Laws, laws...)
	}
	var e *configs.Experiment
	if o.File == "" {
		text, err := configs.Example(defaultExample)
		if err != nil {
			return nil, nil, err
		}
		e, err = reader.Read(defaultExample+".yaml", strings.NewReader(text), o.Set...)
		if err != nil {
			return nil, nil, inputError(err)
		}
		return o.problem(e)
	}
	e, err = reader.Open(o.File, o.Set...)
	if err != nil {
		return nil, nil, inputError(err)
	}
	return o.problem(e)
}

func (o *options) problem(e *configs.Experiment) (*configs.Experiment, *race.Problem, error) {
	p, err := e.Problem()
	if err != nil {
		return nil, nil, inputError(err)
	}
	p.Workers = o.Settings.Workers
	return e, &p, nil
}

// inputError marks an error of an experiment: exit status 2 whatever it is.
func inputError(err error) error {
	var m configs.Mistakes
	if errors.As(err, &m) {
		return err
	}
	return usageError{err}
}

func readLaws(path string) ([]rheology.Law, error) {
	b, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	laws, err := rheology.ReadLaws(bytes.NewReader(b))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return laws, nil
}

// print writes one part of a result in the asked format.
func (o *options) print(text string, value any, table report.Table) error {
	var err error
	switch o.Format {
	case "json":
		var b []byte
		if b, err = report.Encode(value); err == nil {
			_, err = o.Out.Write(b)
		}
	case "csv":
		_, err = o.Out.Write(table.Encode())
	default:
		_, err = fmt.Fprint(o.Out, text)
	}
	return err
}

// warn prints warnings to standard error, unless the text page holds them.
func (o *options) warn(warnings []string) {
	for _, w := range warnings {
		fmt.Fprintln(o.Err, "warning:", w)
	}
}

// output is what a folder is filled with.
type output struct {
	files   map[string][]byte
	order   []string
	figures []plots.Figure
}

func (w *output) add(name string, b []byte) {
	if w.files == nil {
		w.files = map[string][]byte{}
	}
	w.files[name] = b
	w.order = append(w.order, name)
}

func (w *output) json(name string, v any) error {
	b, err := report.Encode(v)
	w.add(name, b)
	return err
}

// write writes the folder whole, or not at all, and says what is in it.
func (o *options) write(place string, w *output) error {
	f, err := report.NewFolder(place)
	if err != nil {
		return err
	}
	err = func() error {
		for _, name := range w.order {
			if err := f.Write(name, w.files[name]); err != nil {
				return err
			}
		}
		for _, fig := range w.figures {
			for _, format := range o.Settings.Figures {
				var b bytes.Buffer
				if err := plots.Encode(&b, fig, format); err != nil {
					return err
				}
				if err := f.Write(fig.Name+"."+format, b.Bytes()); err != nil {
					return err
				}
			}
		}
		return f.Finish()
	}()
	if err != nil {
		f.Abandon()
		return fmt.Errorf("%s was not written: %w", place, err)
	}
	tables := 0
	for _, n := range w.order {
		if filepath.Ext(n) == ".csv" {
			tables++
		}
	}
	fmt.Fprintf(o.Err, "%s: %d figures (%s), %d tables, %s\n", place, len(w.figures), strings.Join(o.Settings.Figures, ", "), tables, strings.Join(others(w.order), ", "))
	return nil
}

func others(names []string) []string {
	var out []string
	for _, n := range names {
		if filepath.Ext(n) != ".csv" {
			out = append(out, n)
		}
	}
	return out
}
