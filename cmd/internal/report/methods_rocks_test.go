package report

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/configs"
	"keelfall/solver/race"
)

// molten is made up: a root that has reacted in part and melts, under a crust of quartz.
const molten = `title: Made up
surface: {boundary: free, temperature: 10 degC}
base: {temperature: 1300 degC}
layers:
  - name: crust
    thickness: 38 km
    density: {modes: {quartz: 0.3, albite: 0.7}}
    creep: {mix: geometric, of: [{fraction: 0.3, creep: wet quartzite Gleason 1995}, {fraction: 0.7, creep: wet anorthite dislocation Rybacki 2000}]}
  - name: root
    root: true
    thickness: 14 km
    density:
      protolith: {modes: {anorthite: 0.5, diopside: 0.5}}
      product: {modes: {diopside: 0.6, pyrope: 0.4}}
      extent: 0.75
    creep: dry eclogite Zhang 2007
    melt: {solidus: {surface: 500 degC, slope: 100 K/GPa}, liquidus: {surface: 1260 degC, slope: 80 K/GPa}, density: 2750 kg/m3, weakening: 30, latent-heat: 400 kJ/kg}
  - name: mantle
    thickness: 30 km
    density: 3300 kg/m3
    creep: [dry olivine dislocation Hirth 2003, dry olivine low-temperature plasticity Goetze 1979]
    melt: {fraction: 0.01}
`

func problem(t *testing.T, text string) *race.Problem {
	t.Helper()
	e, err := configs.Reader{}.Read("made-up.yaml", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	p, err := e.Problem()
	if err != nil {
		t.Fatal(err)
	}
	return &p
}

// TestMethodsOfRocks: what melts, mixes, reacts and yields at low temperature is there with
// its numbers, those of the experiment above.
func TestMethodsOfRocks(t *testing.T) {
	p := problem(t, molten)
	var b strings.Builder
	w := func(format string, a ...any) { fmt.Fprintf(&b, format+"\n", a...) }
	densities(w, p)
	creepMethods(w, p)
	for _, want := range []string{
		"Density of crust from its modes", "albite and ", "[holland1998, angel1997, mineral-choice]",
		"Density of the protolith of root from its modes, by mass 4", "Density of the product of root from its modes",
		"Melt in root: φ = (T − T_s)/(T_l − T_s) of the volume between the solidus T_s = 500 °C + 100 K/GPa × P and the liquidus T_l = 1260 °C + 80 K/GPa × P; ρ = (1 − φ) ρ_s + φ ρ_m with ρ_m = 2750 kg/m³; creep rates times exp(30 φ); latent heat 400 kJ/kg",
		"Melt in mantle: φ = 0.010 of the volume; the melt has no density and leaves the rock's as it is [melt].",
		"Crust is a mixture by volume, 0.3 of wet quartzite Gleason 1995 and 0.7 of wet anorthite dislocation Rybacki 2000: one strain rate with a geometric mean of stresses, ln τ = Σ φ_i ln τ_i(ε) [mixture-geometric].",
		"with τ_P = 4.907 GPa, p = 1, q = 2 [kocks1975]; its rate is multiplied by 1 − exp(−(τ_II/τ₀)^8) with τ₀ = 115.5 MPa, our own choice", // 8500 and 200 MPa over √3
	} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q is not in\n%s", want, b.String())
		}
	}
	l := law(t, "dry olivine low-temperature plasticity Mei 2010")
	if s := plasticMethods(&l); strings.Contains(s, "τ₀") || strings.Contains(s, "P/GPa") {
		t.Errorf("%s", s)
	}
	l.Peierls.PerPa = 0.09e-9
	if s := plasticMethods(&l); !strings.Contains(s, "GPa × (1 + 0.09 P/GPa), p = 0.5") {
		t.Errorf("%s", s)
	}
}

// TestMineralSources: the compression of quartz is Angel's, its expansion ours; every key
// that the methods cite is a source.
func TestMineralSources(t *testing.T) {
	p := problem(t, molten)
	byID := map[string]SourceJSON{}
	for _, s := range Sources(p) {
		byID[s.ID] = s
	}
	for id, want := range map[string]string{"holland1998": "from memory", "angel1997": "published", "mineral-choice": "choice"} {
		if s := byID[id]; s.Status != want {
			t.Errorf("%s: %+v", id, s)
		}
	}
	if s := byID["holland1998"].Text; !strings.Contains(s, "the volume alone of quartz") || strings.Contains(s, "bulk moduli of quartz") {
		t.Errorf("%s", s)
	}
	m := mineralsOf(p)
	for i := range m {
		want := "from memory"
		if m[i].Name == "quartz" {
			want = "from memory, published, choice"
		}
		if got := mineralStatus(&m[i]); got != want {
			t.Errorf("%s: %s", m[i].Name, got)
		}
	}
	if !slices.Contains([]string{"albite", "quartz"}, m[0].Name) {
		t.Errorf("the crust comes first, not %s", m[0].Name)
	}
	bib := Bibliography(Sources(p))
	if !strings.Contains(bib, "author = {Angel and others},\n  year = {1997}") || !strings.Contains(bib, "note = {choice}") {
		t.Errorf("%s", bib)
	}
	without := problem(t, strings.Replace(molten, "{quartz: 0.3, albite: 0.7}", "{albite: 1}", 1))
	for _, s := range Sources(without) {
		if s.ID == "angel1997" || s.ID == "mineral-choice" {
			t.Errorf("without quartz: %+v", s)
		}
	}
}

// TestMethodsOfTable: a tabulated solidus is named with what it covers.
func TestMethodsOfTable(t *testing.T) {
	tab, err := column.NewCurveTable("wet.csv", []column.CurvePoint{{P: 0, T: 1100}, {P: 0.5e9, T: 950}, {P: 3.2e9, T: 1000}})
	if err != nil {
		t.Fatal(err)
	}
	var got string
	meltMethods(func(f string, a ...any) { got = fmt.Sprintf(f, a...) }, "root", &column.Melt{Solidus: &column.Curve{Table: tab}, Liquidus: &column.Curve{Surface: 1573.15}, Density: 2700})
	const want = "between the solidus T_s of the table wet.csv (3 rows, 0 to 3.2 GPa, straight between them, nothing beyond) and the liquidus T_l = 1300 °C; ρ ="
	if !strings.Contains(got, want) {
		t.Errorf("no %q in %s", want, got)
	}
}

// TestMeltCounts: the table of weights says where a number counts the melt that forms.
func TestMeltCounts(t *testing.T) {
	const said = "modulus of the root count the melt that forms"
	for solidus, want := range map[string]bool{"500 degC": true, "1200 degC": false} { // the root's middle has some 720 °C
		p := problem(t, strings.Replace(molten, "500 degC", solidus, 1))
		s, err := race.Prepare(p)
		if err != nil {
			t.Fatal(err)
		}
		if got := strings.Join(strings.Fields(ColumnPage(p, s, nil)), " "); strings.Contains(got, said) != want {
			t.Errorf("solidus %s:\n%s", solidus, got)
		}
	}
}

// TestReactedByDepth: a rock whose reacted share varies in its layer is told by its range,
// and by what makes its parts.
func TestReactedByDepth(t *testing.T) {
	p := problem(t, molten)
	root := &p.Column.Layers[1]
	r, ok := reaction(root)
	if !ok {
		t.Fatalf("%s does not react", root.Name)
	}
	m := root.Density.(column.Molten)
	m.Solid = column.Varying{Of: r, Depth: []float64{0, 1}, Place: []float64{0, 1}, Extent: []float64{0.125, 0.5}}
	root.Density = m
	var b strings.Builder
	densities(func(format string, a ...any) { fmt.Fprintf(&b, format+"\n", a...) }, p)
	for _, want := range []string{"Root has reacted to X = 0.12 to 0.50 of its mass", "Density of the protolith of root from its modes"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("%q is not in\n%s", want, b.String())
		}
	}
	m.Solid = column.Varying{Of: r, Depth: []float64{0, 1}, Place: []float64{0.1, 1}, Extent: []float64{0.5, 0.5}}
	root.Density = m
	if got := extent(root); got != "0.50" {
		t.Errorf("one share: %s", got)
	}
	r.Kinetics = &column.Kinetics{Prefactor: 1}
	if !strings.Contains(stays(&r), "history, the drip and excise follow it") {
		t.Error(stays(&r))
	}
}
