package configs

import (
	"math"
	"reflect"
	"strings"
	"sync"
	"testing"

	"keelfall/column"
	"keelfall/solver/race"
)

func TestSet(t *testing.T) {
	const zone = "excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr}]}\n"
	for _, c := range []struct {
		set  string
		got  func(race.Problem) any
		want any
	}{
		{"layers.root.thickness=14km", func(p race.Problem) any { return p.Column.Layers[1].Thickness }, 14e3},
		{"layers.1.thickness=14 km", func(p race.Problem) any { return p.Column.Layers[1].Thickness }, 14e3},
		{"excision.zones.z.dip=90 deg", func(p race.Problem) any { return p.Zones[0].Dip }, math.Pi / 2},
		{"drip.amplitude=1 km", func(p race.Problem) any { return p.Drip.Amplitude }, 1e3},
		{"title=A new title", func(p race.Problem) any { return p.Title }, "A new title"},
		{"layers.crust.density={top: 2700 kg/m3, bottom: 2900 kg/m3}", func(p race.Problem) any { return p.Column.Layers[0].Density }, column.Linear{Top: 2700, Bottom: 2900}},
		{"layers.crust=", func(p race.Problem) any { return len(p.Column.Layers) }, 2},
		{"layers.root.root=", func(p race.Problem) any { return p.Column.Layers[1].Root }, false},
		{"layers.root.creep=[dry eclogite Zhang 2007, mafic granulite Wilks 1990]", func(p race.Problem) any { return len(p.Column.Layers[1].Viscosity.Creep.Laws) }, 2},
		{"base.density=3300 kg/m3", func(p race.Problem) any { return p.Column.Base.Density }, column.Uniform(3300)},
	} {
		e := mustRead(t, "s.yaml", small+zone)
		before := mustProblem(t, e)
		changed, err := e.Set(c.set)
		if err != nil {
			t.Errorf("%s: %v", c.set, err)
			continue
		}
		if got := c.got(mustProblem(t, changed)); got != c.want {
			t.Errorf("%s: %v, want %v", c.set, got, c.want)
		}
		if !reflect.DeepEqual(mustProblem(t, e), before) {
			t.Errorf("%s changed the experiment it was applied to", c.set)
		}
		if direct := mustRead(t, "s.yaml", small+zone, c.set); !reflect.DeepEqual(direct.Resolved(), changed.Resolved()) {
			t.Errorf("%s: before and after reading differ", c.set)
		}
	}
	// An edit may mend the file.
	mustRead(t, "s.yaml", swap("thickness: 12 km", "thickness: 12"), "layers.root.thickness=12 km")
}

func TestSetMistakes(t *testing.T) {
	for _, c := range []struct{ set, want string }{
		{"layers.root.thickness=12", "layers[1] (root).thickness: 12 has no unit; needs a length, for example 12 km"},
		{"drip.amplitud=1 km", "drip.amplitud: unknown key; did you mean amplitude?"},
		{"layers.rot.thickness=12 km", "layers: rot is not an entry; did you mean root?"},
		{"layers.7.thickness=12 km", "layers: there is no entry 7; entries are counted from 0 and there are 3"},
		{"layers.root.density.top=3400 kg/m3", "layers.root.density is 3450 kg/m3 and has no top; set the whole of it"},
		{"drip.amplitude=", "drip.amplitude is not in the experiment, so it cannot be removed"},
		{"tittle=", "tittle is not in the experiment, so it cannot be removed; did you mean title?"},
		{"layers.root.thickness=", "layers[1] (root).thickness: is missing; needs a length, for example 12 km"},
		{"nonsense", "needs a path, an equals sign and a value, for example drip.amplitude=1km"},
		{"=5", "needs a path, an equals sign and a value, for example drip.amplitude=1km"},
		{"drip.removes=.nan", ".nan is not a number that can be computed with; needs a finite one"},
		{"drip.removes=null", "has no value (null); give one or leave the key out"},
		{"drip={removes: 0.3, removes: 0.4}", "removes stands here and in line 1; a key may stand once"},
		{"budget={evolved-crust: 22 km, residue-share: 0.3}", "budget: not in this version of keelfall"},
		{"events=[{erode: {from: -1 Myr, to: 1 Myr, rate: 1 mm/yr}}]", "events[0].erode.from: -1 Myr lies before the start, 0 Myr; put what happened earlier into the column"},
	} {
		_, err := Read("s.yaml", strings.NewReader(small), c.set)
		want := "--set " + shorten(c.set) + ": " + c.want
		if c.set == "layers.root.thickness=" { // the mistake is the file's now
			want = "s.yaml:7: " + c.want
		}
		if err == nil || err.Error() != want {
			t.Errorf("got %v\nwant %s", err, want)
		}
	}
}

func TestCompile(t *testing.T) {
	e := mustRead(t, "s.yaml", small+"excision: {zones: [{name: z, dip: 30 deg, cuts: [root], slip-rate: 1 mm/yr}]}\n")
	keys := []string{"base.temperature", "layers.root.viscosity-factor", "drip.amplitude", "excision.zones.z.to", "layers.mantle.density", "time-zero"}
	f, err := e.Compile(keys)
	if err != nil {
		t.Fatal(err)
	}
	x := []float64{1300.25, 0.1, 123.4, 1e14, 3210, 3e15}
	p, err := f(x)
	if err != nil {
		t.Fatal(err)
	}
	got := []float64{p.Column.Base.Temperature, p.Column.Layers[1].Viscosity.Factor, p.Drip.Amplitude, p.Zones[0].To, p.Column.Layers[2].Density.At(0, 0, 0), p.TimeZero}
	for i := range keys {
		if math.Abs(got[i]-x[i]) > 1e-15*x[i] {
			t.Errorf("%s: %v, want %v", keys[i], got[i], x[i])
		}
	}
	if rho := p.Column.Base.Density.At(0, 0, 0); rho != 3210 {
		t.Errorf("the base took %v from the last layer, want 3210", rho)
	}
	for _, d := range p.Defaults {
		if d.Key == "drip.amplitude" || d.Key == "excision.zones.z.to" {
			t.Errorf("%s counts as a default", d.Key)
		}
	}
	for i, bad := range []float64{-1, -1, math.NaN(), math.Inf(1), 0, -1} {
		y := append([]float64(nil), x...)
		y[i] = bad
		if _, err := f(y); err == nil || !strings.Contains(err.Error(), keys[i]) {
			t.Errorf("%s = %v: %v", keys[i], bad, err)
		}
	}
	// The base's inherited rock keeps its other keys when one of them is varied.
	inherit := mustRead(t, "s.yaml", swap("density: 3300 kg/m3", "density: {reference: 3300 kg/m3, expansivity: 3e-5 1/K}"))
	g, err := inherit.Compile([]string{"base.density.reference"})
	if err != nil {
		t.Fatal(err)
	}
	if p, err = g([]float64{3400}); err != nil || p.Column.Base.Density != (column.EquationOfState{Reference: 3400, Expansivity: 3e-5, ReferenceTemperature: 293.15}) {
		t.Errorf("%+v, %v", p.Column.Base.Density, err)
	}
	for key, want := range map[string]string{
		"layers.rot.thickness":          "did you mean root?",
		"layers.root.thicknes":          "did you mean thickness?",
		"layers.root.density.cap":       "layers.root.density is 3450 kg/m3 and has no cap",
		"title":                         "not a number that can be varied",
		"layers":                        "not a number that can be varied",
		"layers.root.creep.prefactor":   "has no prefactor",
		"geotherm.0.depth":              "has no 0",
		"":                              "not a key of an experiment",
		"layers.root.thickness.of.them": "no keys of its own",
	} {
		if _, err := e.Compile([]string{key}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v; want %s", key, err, want)
		}
	}
}

// TestCompileConcurrently: the race detector has something to find here, were there anything.
func TestCompileConcurrently(t *testing.T) {
	text, _ := Example("tarnvik")
	f, err := mustRead(t, "t.yaml", text).Compile([]string{"layers.root.thickness"})
	if err != nil {
		t.Fatal(err)
	}
	got := make([]float64, 8)
	var wg sync.WaitGroup
	for i := range got {
		wg.Go(func() {
			if p, err := f([]float64{float64(10000 + i)}); err == nil {
				got[i] = p.Column.Layers[3].Thickness
			}
		})
	}
	wg.Wait()
	for i, h := range got {
		if h != float64(10000+i) {
			t.Errorf("%d: %v", i, h)
		}
	}
}

func BenchmarkCompiled(b *testing.B) {
	text, _ := Example("tarnvik")
	e, err := Read("t.yaml", strings.NewReader(text))
	if err != nil {
		b.Fatal(err)
	}
	f, err := e.Compile([]string{"layers.root.thickness", "base.temperature"})
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := f([]float64{12e3, 1400}); err != nil {
			b.Fatal(err)
		}
	}
}
