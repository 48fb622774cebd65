package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"keelfall/cmd/internal/report"
	"keelfall/configs"
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
	o.formatFlag(f)
	o.folderFlags(f)
	f.Int("workers", 0, "how many at once; 0: as many as there are cores")
	o.settingsFlags(f)
}

// formatFlag adds the format of what is printed.
func (o *options) formatFlag(f *pflag.FlagSet) {
	f.StringVar(&o.Format, "format", "text", "text, json or csv")
}

// folderFlags add what a folder is filled with.
func (o *options) folderFlags(f *pflag.FlagSet) {
	f.String("out", "", "folder to write figures and tables into")
	f.String("figures", "", "formats of figures: png,svg,pdf")
	f.Float64Var(&o.Width, "width", 85, "width of figures in mm: 85 is a journal column, 180 a page")
}

// settingsFlags add the user's own catalogues and settings.
func (o *options) settingsFlags(f *pflag.FlagSet) {
	f.String("catalogues", "", "CSV files of further creep laws, separated by commas")
	f.StringVar(&o.settingsFile, "settings", "", "file of settings (default keelfall/settings.yaml in the user's configuration folder)")
}

// load reads settings and experiment.
func (o *options) load() (*configs.Experiment, *race.Problem, error) {
	if err := o.check(); err != nil {
		return nil, nil, err
	}
	if err := o.settings(); err != nil {
		return nil, nil, usageError{err}
	}
	own, err := o.catalogues()
	if err != nil {
		return nil, nil, err
	}
	reader := configs.Reader{Catalogues: own}
	if o.File == "" {
		text, err := configs.Example(defaultExample)
		if err != nil {
			return nil, nil, err
		}
		e, err := reader.Read(defaultExample+".yaml", strings.NewReader(text), o.Set...)
		if err != nil {
			return nil, nil, inputError(err)
		}
		return o.problem(e)
	}
	e, err := reader.Open(o.File, o.Set...)
	if err != nil {
		return nil, nil, inputError(err)
	}
	return o.problem(e)
}

// check refuses a format or a width that cannot be printed.
func (o *options) check() error {
	if !slices.Contains([]string{"text", "json", "csv"}, o.Format) {
		return usageError{fmt.Errorf("--format %s is not known; needs text, json or csv", o.Format)}
	}
	if !(o.Width >= 80 && o.Width <= 400) {
		return usageError{fmt.Errorf("--width %g; needs 80 to 400 mm", o.Width)}
	}
	if o.cmd == nil {
		return nil
	}
	if out := o.cmd.Flags().Lookup("out"); out != nil && out.Changed && strings.TrimSpace(out.Value.String()) == "" {
		return usageError{errors.New("--out needs the name of a folder")}
	}
	return nil
}

// without refuses flags that belong to the figure where no folder is asked for.
func (o *options) without(folder bool, flags ...string) error {
	for _, name := range flags {
		if f := o.cmd.Flags().Lookup(name); !folder && f != nil && f.Changed {
			return usageError{fmt.Errorf("--%s belongs to the figure; add --out DIR", name)}
		}
	}
	return nil
}

// catalogues reads the user's own creep laws.
func (o *options) catalogues() ([]configs.Catalogue, error) {
	var own []configs.Catalogue
	for _, path := range o.Settings.Catalogues {
		c, err := configs.ReadCatalogue(path)
		if err != nil {
			return nil, usageError{err}
		}
		own = append(own, c)
	}
	return own, nil
}

// settings loads the settings. A file in the user's configuration folder that cannot
// be read is warned about and left out: nobody named it.
func (o *options) settings() error {
	var err error
	o.Settings, err = configs.LoadSettings(o.settingsFile, o.cmd.Flags())
	if err == nil || o.settingsFile != "" {
		return err
	}
	dir, dirErr := os.UserConfigDir()
	if dirErr != nil {
		return err
	}
	if _, readErr := os.ReadFile(filepath.Join(dir, "keelfall", "settings.yaml")); readErr == nil || errors.Is(readErr, fs.ErrNotExist) {
		return err // it is not the file's fault, or the file is there and wrong
	}
	empty, tempErr := os.CreateTemp("", "keelfall-*.yaml")
	if tempErr != nil {
		return err
	}
	defer os.Remove(empty.Name())
	_, tempErr = empty.WriteString("workers: 0\n") // the default: a file that changes nothing
	without, again := configs.LoadSettings(empty.Name(), o.cmd.Flags())
	if errors.Join(tempErr, empty.Close(), again) != nil {
		return err
	}
	o.Settings = without
	o.warn([]string{fmt.Sprintf("settings are left out: %v", err)})
	return nil
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

// warn prints warnings to standard error.
func (o *options) warn(warnings []string) {
	for _, w := range warnings {
		fmt.Fprintln(o.Err, "warning:", w)
	}
}
