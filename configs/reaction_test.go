package configs

import (
	"encoding/json"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/floats/scalar"

	"keelfall/column"
)

const (
	gabbroModes = "{modes: {anorthite: 0.4, albite: 0.1, diopside: 0.3, enstatite: 0.2}}"
	garnetModes = "{modes: {diopside: 0.5, pyrope: 0.3, almandine: 0.2}, by: weight}"
	reacting    = "density: {protolith: " + gabbroModes + ", product: " + garnetModes + ", extent: 0.25, cap: 0.8, stable: {above: 1.0 GPa, at: 800 degC, slope: 1.2 MPa/K}, rate: {prefactor: 2e-5 1/s, activation-energy: 210 kJ/mol}}"
	curves      = "melt: {solidus: {surface: 1020 degC, slope: 100 K/GPa}, liquidus: 1260 degC, latent-heat: 450 kJ/kg, density: 2750 kg/m3, weakening: 30}"
)

func TestReactionDensity(t *testing.T) {
	e := mustRead(t, "s.yaml", swap("density: 3450 kg/m3", reacting))
	p := mustProblem(t, e)
	r, ok := p.Column.Layers[1].Density.(column.Reaction)
	if !ok || r.Extent != 0.25 || r.Cap != 0.8 || *r.Field != (column.StabilityField{Above: 1e9, Slope: 1.2e6, At: 1073.15}) || *r.Kinetics != (column.Kinetics{Prefactor: 2e-5, ActivationEnergy: 210e3}) {
		t.Fatalf("%+v", p.Column.Layers[1].Density)
	}
	a, b := r.Protolith.At(1100, 1.2e9, 0), r.Product.At(1100, 1.2e9, 0)
	if got := r.At(1100, 1.2e9, 0); !scalar.EqualWithinRel(1/got, 0.75/a+0.25/b, 1e-15) {
		t.Errorf("density %g of %g and %g", got, a, b)
	}
	if p.ThermalBuoyancy != "diffusive" {
		t.Errorf("thermal buoyancy %s; its parts depend on temperature", p.ThermalBuoyancy)
	}
	if n := len(e.Resolved()["minerals"].([]any)); n != 6 { // diopside is in both
		t.Errorf("%d minerals listed, want 6", n)
	}
	out, err := json.Marshal(e.Resolved())
	if err != nil || !strings.Contains(string(out), `"slope_Pa_K":1200000`) || !strings.Contains(string(out), `"activation_energy_J_mol":210000`) {
		t.Errorf("%v in %s", err, out)
	}
	// Nothing reacted, no cap below 1, and modes by volume, unless said.
	p = mustProblem(t, mustRead(t, "s.yaml", swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: {modes: {pyrope: 1}}, stable: {above: 1 GPa}}")))
	for _, want := range []string{"layers.root.density.extent 0", "layers.root.density.cap 1", "layers.root.density.product.by volume", "layers.root.density.stable.slope 0 Pa/K"} {
		found := false
		for _, d := range p.Defaults {
			found = found || d.Key+" "+d.Value == want
		}
		if !found {
			t.Errorf("the default %s is not listed: %v", want, p.Defaults)
		}
	}
	if r := p.Column.Layers[1].Density.(column.Reaction); r.Extent != 0 || r.Cap != 1 || r.Kinetics != nil {
		t.Errorf("%+v", r)
	}
	if _, err := e.Set("layers.root.density.extent=0.7"); err != nil {
		t.Error(err)
	}
}

// TestReactionBase: the half-space is the last layer's rock at its bottom, in each part,
// and its melt with it.
func TestReactionBase(t *testing.T) {
	in := swap("density: 3300 kg/m3", "melt: {fraction: 0.05, density: 2700 kg/m3, weakening: 30}, density: {protolith: {top: 3000 kg/m3, bottom: 3100 kg/m3}, product: 3500 kg/m3, extent: 0.5}")
	p := mustProblem(t, mustRead(t, "s.yaml", in))
	solid := 1 / (0.5/3100 + 0.5/3500)
	if got := p.Column.Base.Density.At(1000, 1e9, 0); !scalar.EqualWithinRel(got, 0.95*solid+0.05*2700, 1e-15) || p.Column.Base.Melt.Weakening != 30 {
		t.Errorf("density %g of the base, melt %+v", got, p.Column.Base.Melt)
	}
	if p.ThermalBuoyancy != "none" {
		t.Errorf("thermal buoyancy %s; nothing depends on temperature", p.ThermalBuoyancy)
	}
	for _, own := range []string{"density: 3300 kg/m3", "viscosity: 1e20 Pa s"} {
		p = mustProblem(t, mustRead(t, "s.yaml", strings.Replace(in, "temperature: 1100 degC", "temperature: 1100 degC, "+own, 1)))
		if p.Column.Base.Melt != nil {
			t.Errorf("%s: a base of its own takes melt from the last layer", own)
		}
	}
}

func TestMelt(t *testing.T) {
	p := mustProblem(t, mustRead(t, "s.yaml", swap("density: 3450 kg/m3", "density: 3450 kg/m3, "+curves)))
	r := &p.Column.Layers[1].Rock
	m, ok := r.Density.(column.Molten)
	is := func(c *column.Curve, surface, slope float64) bool {
		return scalar.EqualWithinRel(c.Surface, surface, 1e-15) && scalar.EqualWithinRel(c.Slope, slope, 1e-15)
	}
	if !ok || m.Melt != r.Melt || !is(r.Melt.Solidus, 1293.15, 1e-7) || !is(r.Melt.Liquidus, 1533.15, 0) || r.Melt.LatentHeat != 450e3 || r.Melt.Density != 2750 {
		t.Fatalf("%+v, %+v", r.Density, r.Melt)
	}
	if c := r.CreepWith(p.Column.Limits); c.Weakening != 30 || !scalar.EqualWithinRel(c.Melt(1393.15+35, 1e9), 0.25, 1e-12) {
		t.Errorf("weakening %g", c.Weakening)
	}
	if p.ThermalBuoyancy != "diffusive" {
		t.Errorf("thermal buoyancy %s; the melt's density counts", p.ThermalBuoyancy)
	}
	// Without a density of its own the melt leaves the rock's alone.
	p = mustProblem(t, mustRead(t, "s.yaml", swap("density: 3450 kg/m3", "density: 3450 kg/m3, melt: {fraction: 0.1, weakening: 30}")))
	if r := &p.Column.Layers[1].Rock; r.Density != column.Uniform(3450) || r.Melt.Fraction != 0.1 || p.ThermalBuoyancy != "none" {
		t.Errorf("%+v", r)
	}
}

func TestReactionMistakes(t *testing.T) {
	reaction := func(s string) string {
		return swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: 3500 kg/m3, "+s+"}")
	}
	melt := func(s string) string { return swap("density: 3450 kg/m3", "density: 3450 kg/m3, melt: {"+s+"}") }
	cold := strings.Replace(strings.Replace(swap("density: 3450 kg/m3", reacting), ", temperature: 1100 degC", "", 1), "creep: dry eclogite Zhang 2007", "viscosity: 1e21 Pa s", 1)
	for _, c := range []struct{ in, want string }{
		{reaction("extent: 1.2"), ".density.extent: 1.2 is out of range; needs a value of at least 0 and at most 1"},
		{reaction("extent: -0.1"), ".density.extent: -0.1 is out of range"},
		{reaction("extent: 20 %"), ".density.extent: 20 %"},
		{reaction("cap: 1.5"), ".density.cap: 1.5 is out of range"},
		{reaction("extent: 0.9, cap: 0.8"), ".density.extent: 0.9 is above the cap, 0.8; the reacted share never passes that"},
		{reaction("stable: {above: 1 GPa, slope: 1.2 MPa/K}"), ".density.stable.at: is missing; a slope needs the temperature at which above holds"},
		{reaction("stable: {at: 800 degC}"), ".density.stable.above: is missing"},
		{reaction("rate: {prefactor: 2e-5 1/s}"), ".density.rate.activation-energy: is missing"},
		{reaction("by: volume"), ".density.by: unknown key"},
		{swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3}"), ".density.product: is missing"},
		{swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: {protolith: 2900 kg/m3, product: 3500 kg/m3}}"), ".density.product: is itself a reaction; needs the density of one rock"},
		{swap("density: 3450 kg/m3", "density: {protolith: {modes: {anortite: 1}}, product: 3500 kg/m3}"), `.density.protolith.modes.anortite: no mineral is called "anortite"; did you mean anorthite`},
		{swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: {modes: {pyrope: 0.6, diopside: 0.38}}}"), ".density.product.modes: sum to 0.98; need 1 (within 0.01)"},
		{swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: {table: none.csv}}"), ".density.product.table: "},
		{melt("density: 2700 kg/m3"), ".melt: needs a fraction, or a solidus and a liquidus"},
		{melt("solidus: 1000 degC"), ".melt: needs a fraction, or a solidus and a liquidus"},
		{melt("fraction: 0.1, solidus: 1000 degC, liquidus: 1200 degC"), ".melt: has a fraction and a solidus or liquidus; needs the one or the others"},
		{melt("fraction: 1.1"), ".melt.fraction: 1.1 is out of range"},
		{melt("fraction: 0.1, latent-heat: 400 kJ/kg"), ".melt.latent-heat: belongs to a solidus and a liquidus"},
		{melt("solidus: 1200 degC, liquidus: {surface: 1100 degC, slope: 100 K/GPa}"), ".melt.solidus: 1200 degC at no pressure is not below the liquidus, 1100 degC"},
		{melt("solidus: {surface: 1000 degC, slope: 100 MPa/K}, liquidus: 1200 degC"), ".melt.solidus.slope: 100 MPa/K"},
		{melt("solidus: 1000 degC, liquidus: {surface: 1200 degC, slope: 1e300 K/Pa}"), ".melt.liquidus.slope: 1e300 K/Pa is out of range"},
		{strings.Replace(melt("fraction: 0.1, weakening: 30"), "creep: dry eclogite Zhang 2007", "viscosity: 1e21 Pa s", 1), ".melt.weakening: belongs to creep laws"},
		{cold, ".density: depends on temperature and the experiment has none; " + howWarm},
		{strings.Replace(strings.Replace(melt("solidus: 1000 degC, liquidus: 1200 degC"), ", temperature: 1100 degC", "", 1), "creep: dry eclogite Zhang 2007", "viscosity: 1e21 Pa s", 1), ".melt: has a solidus, which needs a temperature, and the experiment has none; " + howWarm},
	} {
		_, err := Read("s.yaml", strings.NewReader(c.in))
		if err == nil || !strings.HasPrefix(err.Error(), "s.yaml:7: layers[1] (root)"+c.want) {
			t.Errorf("got %v\nwant …%s", err, c.want)
		}
	}
}

// TestReactionTable: a table in a part is listed with its hash, and one whose rows jump
// to and fro is refused at the row that turns.
func TestReactionTable(t *testing.T) {
	dir := t.TempDir()
	path, table := filepath.Join(dir, "s.yaml"), filepath.Join(dir, "d.csv")
	write := func(name, s string) {
		if err := os.WriteFile(name, []byte(s), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	const head = "temperature_degC,pressure_GPa,density_kg_m3\n"
	write(path, swap("density: 3450 kg/m3", "density: {protolith: 2900 kg/m3, product: {table: d.csv}, extent: 0.5}"))
	rows := []string{"0,0,3500", "0,3,3550", "700,0,3450", "700,3,3500", "1400,0,3400", "1400,3,3450"}
	write(table, head+strings.Join(rows, "\n"))
	e, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	if n := len(e.Resolved()["density_tables"].([]any)); n != 1 {
		t.Errorf("%d tables listed, want 1", n)
	}
	slices.Reverse(rows) // falling is as good as rising
	write(table, head+strings.Join(rows, "\n"))
	if _, err := Open(path); err != nil {
		t.Error(err)
	}
	rows = []string{"700,0,3450", "700,3,3500", "0,0,3500", "0,3,3550", "1400,0,3400", "1400,3,3450"}
	write(table, head+strings.Join(rows, "\n"))
	if _, err := Open(path); err == nil || !strings.HasPrefix(err.Error(), path+":7: layers[1] (root).density.product.table: d.csv:6: temperature is out of order; needs a grid whose temperatures") {
		t.Error(err)
	}
	rows = []string{"0,0,3500", "0,3,3550", "0,1,3500", "700,0,3450", "700,3,3500", "700,1,3500"}
	write(table, head+strings.Join(rows, "\n"))
	if _, err := Open(path); err == nil || !strings.Contains(err.Error(), "d.csv:4: pressure is out of order") {
		t.Error(err)
	}
}
