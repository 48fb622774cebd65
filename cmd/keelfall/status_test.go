package main

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"testing"
)

// Exit statuses are the contract's: scripts outside the project rely on them.
func TestStatus(t *testing.T) {
	t.Setenv("XDG_CONFIG_HOME", t.TempDir())
	t.Chdir(t.TempDir())
	write := func(name, text string) {
		if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	write("good.yaml", "surface: {boundary: rigid}\nbase: {boundary: rigid}\nlayers:\n  - {name: a, root: true, thickness: 10 km, density: 3300 kg/m3, viscosity: 1e21 Pa s}\n  - {name: b, thickness: 10 km, density: 3200 kg/m3, viscosity: 1e21 Pa s}\n")
	write("bad.yaml", "layers: []\n")
	write("wall.yaml", "surface: {boundary: rigid}\nbase: {boundary: rigid}\nlayers:\n  - {name: a, root: true, thickness: 10 km, density: 3300 kg/m3, viscosity: 1e21 Pa s}\n")
	// 10 km of 3300 kg/m3 press with 0.324 GPa, after another 3 km with 0.42 GPa.
	write("short.yaml", "base: {boundary: rigid, temperature: 500 degC}\nlayers:\n  - {name: a, thickness: 10 km, density: 3300 kg/m3, viscosity: 1e21 Pa s, melt: {solidus: {table: short.csv}, liquidus: 1200 degC}}\nevents:\n  - accumulate: {layer: a, rate: 1 mm/yr, from: 0 Myr, to: 3 Myr}\n")
	write("short.csv", "pressure_GPa,temperature_degC\n0,900\n0.35,800\n")
	write("file", "not a folder")
	if err := os.MkdirAll("theirs/keep", 0o755); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		want int
		args []string
	}{
		{exitDone, []string{"run", "good.yaml"}},
		{exitDone, []string{"drip", "good.yaml", "--set", "layers.a.density=3100 kg/m3"}}, // nothing drips
		{exitDone, []string{"--version"}},
		{exitDone, []string{"run", "--help"}},
		{exitInput, []string{"run", "bad.yaml"}},
		{exitInput, []string{"run", "wall.yaml"}},
		{exitInput, []string{"run", "absent.yaml"}},
		{exitDone, []string{"column", "short.yaml"}},
		{exitInput, []string{"history", "short.yaml"}}, // on its way the column leaves the user's table
		{exitInput, []string{"run", "a", "b"}},
		{exitInput, []string{"run", "--nonsense"}},
		{exitInput, []string{"nonsense"}},
		{exitInput, []string{"run", "good.yaml", "--set", "drip.amplitude=10km"}}, // it already is the drip
		{exitInput, []string{"run", "good.yaml", "--width", "NaN"}},
		{exitInput, []string{"run", "good.yaml", "--out", ""}},
		{exitInput, []string{"drip", "good.yaml", "--out", ""}},
		{exitInput, []string{"spectrum", "good.yaml", "--figures", "svg"}}, // without --out
		{exitInput, []string{"laws", "--out", ""}},
		{exitInput, []string{"laws", "--from", "600 degC"}},
		{exitInput, []string{"laws", "foo"}},
		{exitInput, []string{"minerals", "--at", "800 degC,1 GPa"}},
		{exitInput, []string{"spectrum", "good.yaml", "--at", "9m"}},
		{exitInput, []string{"spectrum", "good.yaml", "--at", "50km,100001km"}},
		{exitDone, []string{"spectrum", "good.yaml", "--at", "10m"}},
		{exitInput, []string{"ensemble", "good.yaml"}},
		{exitInput, []string{}},
		{exitFailed, []string{"run", "good.yaml", "--out", "theirs"}},
		{exitFailed, []string{"run", "good.yaml", "--out", "file"}},
		{exitFailed, []string{"run", "good.yaml", "--out", "file/below"}},
	} {
		var out, errs bytes.Buffer
		if got := Main(context.Background(), c.args, Streams{&out, &errs}); got != c.want {
			t.Errorf("keelfall %v: status %d, want %d: %s", c.args, got, c.want, errs.String())
		}
	}
	if left, _ := filepath.Glob(".*part*"); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
}
