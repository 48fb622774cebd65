package configs

import (
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"github.com/spf13/pflag"
	"github.com/spf13/viper"
)

// settingsHome makes an empty configuration folder and clears the environment.
func settingsHome(t *testing.T) string {
	t.Helper()
	home := t.TempDir()
	t.Setenv("XDG_CONFIG_HOME", home)
	t.Setenv("HOME", home)
	t.Setenv("AppData", home)
	for _, k := range settingKeys {
		t.Setenv("KEELFALL_"+strings.ToUpper(k), "")
	}
	dir, err := os.UserConfigDir()
	if err != nil {
		t.Fatal(err)
	}
	dir = filepath.Join(dir, "keelfall")
	if err := os.MkdirAll(dir, 0o700); err != nil {
		t.Fatal(err)
	}
	return dir
}

func settingsFlags(t *testing.T, args ...string) *pflag.FlagSet {
	t.Helper()
	f := pflag.NewFlagSet("keelfall", pflag.ContinueOnError)
	f.String("out", "", "")
	f.StringSlice("figures", nil, "")
	f.Int("workers", 0, "")
	f.String("format", "text", "") // not a setting
	if err := f.Parse(args); err != nil {
		t.Fatal(err)
	}
	return f
}

func TestSettingsLayers(t *testing.T) {
	dir := settingsHome(t)
	check := func(what string, flags *pflag.FlagSet, want Settings) {
		t.Helper()
		if got, err := LoadSettings("", flags); err != nil || !reflect.DeepEqual(got, want) {
			t.Errorf("%s: %+v, %v; want %+v", what, got, err, want)
		}
	}
	check("defaults", nil, Settings{Figures: []string{"png", "svg"}})
	check("flags not given", settingsFlags(t), Settings{Figures: []string{"png", "svg"}})
	if err := os.WriteFile(filepath.Join(dir, "settings.yaml"), []byte("workers: 3\nfigures: [pdf]\nout: results\ncatalogues: [mine.csv]\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	mine := []string{filepath.Join(dir, "mine.csv")}
	check("file", settingsFlags(t), Settings{Out: "results", Figures: []string{"pdf"}, Workers: 3, Catalogues: mine})
	t.Setenv("KEELFALL_WORKERS", "5")
	t.Setenv("KEELFALL_FIGURES", "svg, png")
	t.Setenv("KEELFALL_CATALOGUES", "theirs.csv") // decides no creep law
	check("environment", settingsFlags(t), Settings{Out: "results", Figures: []string{"svg", "png"}, Workers: 5, Catalogues: mine})
	check("flags", settingsFlags(t, "--workers", "7", "--figures", "png,pdf", "--out", "there"), Settings{Out: "there", Figures: []string{"png", "pdf"}, Workers: 7, Catalogues: mine})
}

func TestSettingsMistakes(t *testing.T) {
	dir := settingsHome(t)
	path := filepath.Join(dir, "mine.yaml")
	for text, want := range map[string]string{
		"worker: 3\n":              path + ":1: worker: unknown key; did you mean workers?",
		"workers: 3\nworkers: 4\n": path + ":2: workers stands here and in line 1; a key may stand once",
		"workers: 1.5\n":           path + ":1: workers: 1.5 is not a whole number; needs one, for example 41",
		"figures: [gif]\n":         path + ":1: figures[0]: gif is not known; needs one of png, svg, pdf",
		"gravity: 9.81 m/s2\n":     path + ":1: gravity: unknown key; known are source, notes, out, figures, workers, catalogues",
	} {
		if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		if _, err := LoadSettings(path, nil); err == nil || err.Error() != want {
			t.Errorf("got %v\nwant %s", err, want)
		}
	}
	if _, err := LoadSettings(filepath.Join(dir, "none.yaml"), nil); err == nil {
		t.Error("a named file that is missing is an error")
	}
	t.Setenv("KEELFALL_WORKERS", "many")
	if _, err := LoadSettings("", nil); err == nil || err.Error() != "KEELFALL_WORKERS: many is not a number of workers; needs a whole number from 0 to 10000" {
		t.Error(err)
	}
	t.Setenv("KEELFALL_WORKERS", "")
	if _, err := LoadSettings("", settingsFlags(t, "--figures", "gif")); err == nil || err.Error() != "--figures: gif is not a format of figures; needs png, svg or pdf, for example png,svg" {
		t.Error(err)
	}
}

// TestEnvironmentLeavesPhysicsAlone: no variable reaches an experiment.
func TestEnvironmentLeavesPhysicsAlone(t *testing.T) {
	want := mustProblem(t, mustRead(t, "s.yaml", small))
	t.Setenv("KEELFALL_GRAVITY", "1 m/s2")
	t.Setenv("KEELFALL_DRIP_AMPLITUDE", "1 m")
	if got := mustProblem(t, mustRead(t, "s.yaml", small)); !reflect.DeepEqual(got.Drip, want.Drip) || got.Column.Gravity != want.Column.Gravity {
		t.Errorf("%+v", got)
	}
}

// TestViperLoadsExperiments: viper reads experiments through this package's reader.
func TestViperLoadsExperiments(t *testing.T) {
	for format, text := range map[string]string{"yaml": yamlTwo, "json": jsonTwo, "toml": tomlTwo} {
		v := viper.NewWithOptions(viper.WithDecoderRegistry(ExperimentCodecs()))
		v.SetConfigType(format)
		if err := v.ReadConfig(strings.NewReader(text)); err != nil {
			t.Fatal(err)
		}
		if v.GetString("drip.window") != "5 Myr" || v.GetFloat64("drip.removes") != 0.25 || v.GetString("gravity") != "9.81 m/s2" {
			t.Errorf("%s: %v", format, v.AllSettings())
		}
		i := strings.Index(text, "10 km")
		v = viper.NewWithOptions(viper.WithDecoderRegistry(ExperimentCodecs()))
		v.SetConfigType(format)
		if err := v.ReadConfig(strings.NewReader(text[:i] + "11" + text[i+5:])); err == nil || !strings.Contains(err.Error(), "layers[0] (upper).thickness: 11 has no unit") {
			t.Errorf("%s: %v", format, err)
		}
	}
}
