package report

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/race"
)

// floating is a crust and a root over 3270 kg/m³ beside a reference at 2 km; without
// temperatures the numbers are a matter of long division (derived).
func floating(rootDensity float64) *race.Problem {
	rock := func(rho float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1, Factor: 1}}
	}
	return &race.Problem{Strain: race.Strain{ReferenceRate: 1e-15},
		Reference: &race.Reference{Elevation: 2000, Layers: []race.ReferenceLayer{{Thickness: 35e3, Density: 2800}}},
		Column: column.Column{Gravity: 9.81, Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3270)},
			Layers: []column.Layer{{Name: "crust", Thickness: 40e3, Rock: rock(2850)}, {Name: "root", Thickness: 12e3, Root: true, Rock: rock(rootDensity)}}}}
}

// TestIsostasyShown: page, JSON and CSV say the numbers, with and without the root, and
// what they rest on.
func TestIsostasyShown(t *testing.T) {
	p := floating(3450)
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	bare := 2000 + 40e3*(1-2850/3270.0) - 35e3*(1-2800/3270.0) // 2107.03 m
	whole := bare + 12e3*(1-3450/3270.0)                       // 1446.48 m
	page := ColumnPage(p, s, nil)
	flat := strings.Join(strings.Fields(page), " ")
	for _, want := range []string{"Elevation +1.45 km, ", "; +2.11 km and ", "without the root. Isostatic only", "Against a column at +2.00 km: 35 km of 2800 kg/m3, then asthenosphere.", "3270 kg/m3 there: rock of the base."} {
		if !strings.Contains(flat, want) {
			t.Errorf("page without %q:\n%s", want, page)
		}
	}
	if strings.Contains(flat, "km*") {
		t.Errorf("a reference that is given is starred:\n%s", page)
	}
	j := Column(p, s)
	if math.Abs(float64(j.Elevation)/whole-1) > 1e-11 || math.Abs(float64(j.WithoutRoot.Elevation)/bare-1) > 1e-11 || j.Reference.Elevation != 2000 || j.Asthenosphere != 3270 {
		t.Errorf("JSON: %+v without the root %+v, reference %+v", j.standingJSON, j.WithoutRoot, j.Reference)
	}
	b, err := Encode(j)
	if err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{"elevation_m", "potential_energy_N_m", "extensional_force_N_m", "compensation_depth_m", "asthenosphere_kg_m3", "without_root", "reference", "thickness_m", "density_kg_m3"} {
		if !strings.Contains(string(b), `"`+key+`": `) {
			t.Errorf("JSON without %s", key)
		}
	}
	rows := IsostasyTable(p, s).Rows
	if len(rows) != 2 || rows[1][1] != cell(bare/km) || rows[0][3] != cell(float64(j.Force)) {
		t.Errorf("table %q", rows)
	}
	p.Defaults = []race.Default{{Key: "reference"}}
	if page := ColumnPage(p, s, nil); !strings.Contains(page, "Elevation +1.45 km*, ") || !strings.Contains(page, "a mid-ocean ridge*") {
		t.Errorf("the default is not starred:\n%s", page)
	}
}

// TestForceWords: the two signs, and a root that changes them.
func TestForceWords(t *testing.T) {
	for f, want := range map[float64]string{1.14e12: "extensional force 1.1e12 N/m", -5e11: "compressional force 5e11 N/m"} {
		if got := forceWords(f); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
	if got := heightWords(-1234, "*"); got != "-1.23 km*, under water" {
		t.Errorf("%q", got)
	}
}

// TestIsostasyUnknown: an asthenosphere beyond the user's table is said, with what helps,
// and the rest of the column is there all the same.
func TestIsostasyUnknown(t *testing.T) {
	p := floating(3450)
	table, err := column.NewTable([]column.TableRow{{T: 200, P: 1e9, Density: 3270}, {T: 2000, P: 1e9, Density: 3200}, {T: 200, P: 3e9, Density: 3300}, {T: 2000, P: 3e9, Density: 3250}})
	if err != nil {
		t.Fatal(err)
	}
	p.Column.Base.Density, p.Column.Base.HasTemperature, p.Column.Base.Temperature, p.Column.Surface.Temperature = table, true, 1300, 283
	for i := range p.Column.Layers {
		p.Column.Layers[i].Conductivity.Reference, p.Column.Layers[i].HeatCapacity = 2.5, 1000
	}
	p.Column.Base.Conductivity.Reference, p.Column.Base.HeatCapacity = 2.5, 1000
	p.Reference.Layers[0].Thickness = 10e3
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	page := strings.Join(strings.Fields(ColumnPage(p, s, nil)), " ")
	if !strings.Contains(page, "Elevation is not known: the asthenosphere that the columns float on is outside the table of densities") || !strings.Contains(page, "reference.asthenosphere gives it one density") {
		t.Errorf("page: %s", page)
	}
	j := Column(p, s)
	if !math.IsNaN(float64(j.Elevation)) || j.WithoutRoot != nil || !strings.Contains(strings.Join(j.Warnings, "\n"), "the elevation is not known") {
		t.Errorf("JSON: %+v, warnings %q", j.standingJSON, j.Warnings)
	}
	if _, err := Encode(j); err != nil {
		t.Error(err)
	}
	p.Reference.Asthenosphere = 3280
	if j := Column(p, s); math.IsNaN(float64(j.Elevation)) {
		t.Errorf("with its density given: %q", j.Warnings)
	}
}

// TestHistoryHeights: a history shows elevation and force at its own times.
func TestHistoryHeights(t *testing.T) {
	p := pastOf()
	p.Problem.Reference = floating(3450).Reference
	for i := range p.History.Time {
		p.Isostasy = append(p.Isostasy, column.Isostasy{Elevation: 1500 - 300*float64(i), Force: 1e12 - 2e11*float64(i), PotentialEnergy: 1e14})
	}
	page, j, rows := HistoryPage(p), History(p), HistoryTable(p).Rows
	if !strings.Contains(page, "     10    40.0      -1.50         -1.00") || !strings.Contains(page, "ELEVATION") {
		t.Errorf("page:\n%s", page)
	}
	if last := rows[len(rows)-1]; j.Elevation[10] != -1500 || j.Force[5] != 0 || j.Potential[0] != 1e14 || last[8] != "-1.5" || last[9] != "-1e+12" {
		t.Errorf("elevation %g, force %g, last row %q", float64(j.Elevation[10]), float64(j.Force[5]), last)
	}
	p.Isostasy, p.Unknown = nil, "no table"
	if page, j := HistoryPage(p), History(p); !strings.Contains(page, "Not known: no table.") || !math.IsNaN(float64(j.Elevation[0])) || len(j.Elevation) != 11 {
		t.Errorf("unknown: %g\n%s", float64(j.Elevation[0]), page)
	}
}
