package configs

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/pflag"
	"github.com/spf13/viper"
)

// Settings are what a user sets once for all experiments: where results go and how
// they look. Nothing in them changes the physics of an experiment; a creep law of an
// extra catalogue acts only where an experiment names it, never has the name of a
// built-in one, and stands in the result with its constants and its file's SHA-256.
type Settings struct {
	Out        string   // folder results are written into; "" leaves the choice to the command
	Figures    []string // formats of figures, of png, svg and pdf
	Workers    int      // 0: as many as there are cores
	Catalogues []string // CSV files of further creep laws, in the columns of the built-in one
}

// settingsFile is Settings as a file, under the same schema rules as experiments.
type settingsFile struct {
	block
	Out        text   `key:"out" as:"file" doc:"folder results are written into"`
	Figures    []text `key:"figures" one:"png|svg|pdf" doc:"formats of figures"`
	Workers    count  `key:"workers" range:"[0,10000]" doc:"how many at once; 0: as many as there are cores"`
	Catalogues []text `key:"catalogues" as:"file" doc:"CSV files of further creep laws"`
}

var settingsSchema = compile(reflect.TypeFor[settingsFile]())

// settingKeys are the keys of the settings; the flags and, in capitals behind
// KEELFALL_ and but for catalogues, the environment variables have the same names.
var settingKeys = []string{"out", "figures", "workers", "catalogues"}

// LoadSettings layers the settings: defaults, then the user's file, then KEELFALL_OUT,
// KEELFALL_FIGURES and KEELFALL_WORKERS, then those flags of the same names that were
// given. Catalogues come from the file or the flag alone: an environment variable
// decides no creep law. Lists are separated by commas. path names the file; ""
// means keelfall/settings.yaml in the user's configuration folder, which may be
// absent. flags may be nil. An unknown key or a wrong value is an error that says
// where it was found. Catalogue paths of the file are relative to it.
func LoadSettings(path string, flags *pflag.FlagSet) (Settings, error) {
	v := viper.NewWithOptions(viper.WithDecoderRegistry(codecs(settingsSchema)))
	v.SetDefault("figures", []string{"png", "svg"})
	v.SetDefault("workers", 0)
	v.SetDefault("catalogues", []string{})
	v.SetDefault("out", "")
	if err := settingsFrom(v, path); err != nil {
		return Settings{}, err
	}
	where := map[string]string{}
	for _, key := range settingKeys {
		if name := "KEELFALL_" + strings.ToUpper(key); key != "catalogues" {
			if err := v.BindEnv(key, name); err != nil {
				return Settings{}, fmt.Errorf("configs: %s: %w", name, err)
			}
			if os.Getenv(name) != "" {
				where[key] = name
			}
		}
		if flags == nil {
			continue
		}
		if f := flags.Lookup(key); f != nil {
			if err := v.BindPFlag(key, f); err != nil {
				return Settings{}, fmt.Errorf("configs: flag --%s: %w", key, err)
			}
			if f.Changed {
				where[key] = "--" + key
			}
		}
	}
	return settingsOf(v, where)
}

func settingsFrom(v *viper.Viper, path string) error {
	optional := path == ""
	if optional {
		dir, err := os.UserConfigDir()
		if err != nil {
			return nil // no home: nothing to read
		}
		path = filepath.Join(dir, "keelfall", "settings.yaml")
	}
	if _, err := os.Stat(path); optional && errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	b, err := readFile(path, "settings in YAML (.yaml, .yml), JSON (.json) or TOML (.toml)")
	if err != nil {
		return err
	}
	format := strings.TrimPrefix(filepath.Ext(path), ".")
	if !slices.Contains([]string{"yaml", "yml", "json", "toml"}, format) {
		format = "yaml"
	}
	v.SetConfigType(format)
	if err := v.ReadConfig(strings.NewReader(string(b))); err != nil {
		var m Mistakes
		if errors.As(err, &m) {
			for i := range m {
				m[i].File = path
			}
			return m
		}
		return fmt.Errorf("%s: %w", path, err)
	}
	var files []string
	for _, f := range v.GetStringSlice("catalogues") {
		if !filepath.IsAbs(f) {
			f = filepath.Join(filepath.Dir(path), f)
		}
		files = append(files, f)
	}
	v.SetDefault("catalogues", []string{})
	return v.MergeConfigMap(map[string]any{"catalogues": files})
}

// settingsOf reads every key once, strictly.
func settingsOf(v *viper.Viper, where map[string]string) (Settings, error) {
	var s Settings
	s.Out = v.GetString("out")
	s.Figures = split(v.Get("figures"))
	s.Catalogues = split(v.Get("catalogues"))
	for _, f := range s.Figures {
		if !slices.Contains([]string{"png", "svg", "pdf"}, f) {
			return Settings{}, fmt.Errorf("%s: %s is not a format of figures; needs png, svg or pdf, for example png,svg", where["figures"], shorten(f))
		}
	}
	n, err := strconv.Atoi(strings.TrimSpace(fmt.Sprint(v.Get("workers"))))
	if err != nil || n < 0 || n > 10000 {
		return Settings{}, fmt.Errorf("%s: %v is not a number of workers; needs a whole number from 0 to 10000", where["workers"], v.Get("workers"))
	}
	s.Workers = n
	return s, nil
}

// split reads a list that may come as one text with commas.
func split(v any) []string {
	var out []string
	switch l := v.(type) {
	case string:
		l = strings.Trim(l, "[]") // a string-slice flag prints itself in brackets
		for _, p := range strings.Split(l, ",") {
			if p = strings.TrimSpace(p); p != "" {
				out = append(out, p)
			}
		}
	case []string:
		out = append(out, l...)
	case []any:
		for _, p := range l {
			out = append(out, fmt.Sprint(p))
		}
	}
	return out
}
