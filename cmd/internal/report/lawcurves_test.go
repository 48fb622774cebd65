package report

import (
	"math"
	"slices"
	"strings"
	"testing"

	"keelfall/plots"
	"keelfall/rheology"
)

func law(t *testing.T, name string) rheology.Law {
	t.Helper()
	l, err := rheology.Find(name)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

var ordinary = LawConditions{Rate: 1e-15, Pressure: 1e9, GrainSize: 2e-3, Fugacity: 200e6, Content: 1000, From: 773.15, To: 1473.15}

// TestLawCurve asserts the closed form η = A^(−1/n) ε^(1/n − 1) exp[(E + PV)/nRT]/2, and
// where the experiments of Zhang 2007 (1027 to 1427 °C, the catalogue's) were.
func TestLawCurve(t *testing.T) {
	l := law(t, "dry eclogite Zhang 2007")
	curves, words, err := LawCurves([]rheology.Law{l}, ordinary)
	if err != nil {
		t.Fatal(err)
	}
	c := curves[0]
	if len(c.T) != curveSteps+1 || c.T[0] != ordinary.From || c.T[curveSteps] != ordinary.To {
		t.Fatalf("temperatures %g to %g K", c.T[0], c.T[len(c.T)-1])
	}
	for i, T := range c.T {
		want := (-math.Log10(l.A)+math.Log10(ordinary.Rate)*(1-l.N))/l.N - math.Log10(2) + (l.E+ordinary.Pressure*l.V)/(l.N*rheology.GasConstant*T)/math.Ln10
		if math.Abs(c.Log[i]-want) > 1e-10 {
			t.Errorf("%g K: %g, want %g", T, c.Log[i], want)
		}
		if c.Cover[i] != plots.CoverOutside {
			t.Errorf("%g K, 1 GPa: cover %d", T, c.Cover[i])
		}
	}
	if words != "a strain rate of 1e-15 1/s and a pressure of 1 GPa" {
		t.Errorf("conditions: %s", words)
	}
	if !c.OffPressure {
		t.Error("1 GPa is not among its pressures, 2.5 to 3.5 GPa")
	}
}

// TestLawError: an error of E alone, about the temperature T₀ of the experiments, moves
// ln η by δE/(nR) (1/T − 1/T₀), derived; without experiments by δE/(nRT).
func TestLawError(t *testing.T) {
	l := law(t, "dry eclogite Zhang 2007")
	l.Errors = rheology.Errors{E: 30e3}
	for _, known := range []bool{true, false} {
		pivot := math.Inf(1)
		if p, _ := l.Tested.Pivot(); known {
			pivot = p.T
		} else {
			l.Tested = rheology.Tested{}
		}
		curves, _, err := LawCurves([]rheology.Law{l}, ordinary)
		if err != nil {
			t.Fatal(err)
		}
		for i, T := range curves[0].T {
			want := math.Abs(30e3 / (l.N * rheology.GasConstant * math.Ln10) * (1/T - 1/pivot))
			if got := curves[0].Error[i]; math.Abs(got-want) > 1e-9 {
				t.Errorf("experiments known %v, %g K: error %g, want %g", known, T, got, want)
			}
		}
	}
	l.Errors = rheology.Errors{}
	if curves, _, _ := LawCurves([]rheology.Law{l}, ordinary); curves[0].Error != nil {
		t.Error("an error where none is published")
	}
}

// TestLawCurvesOfAll: every law of the catalogue can be drawn at ordinary conditions,
// those that count grain size and water too.
func TestLawCurvesOfAll(t *testing.T) {
	curves, words, err := LawCurves(rheology.Laws(), ordinary)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range curves {
		for i := range c.T {
			if math.IsNaN(c.Log[i]) || i > 0 && !(c.Log[i] < c.Log[i-1]) {
				t.Errorf("%s: 10^%g Pa s at %g K", c.Name, c.Log[i], c.T[i])
			}
		}
	}
	for _, w := range []string{"grain size of 2 mm", "fugacity of 200 MPa", "content of 1000 H/10^6 Si"} {
		if !strings.Contains(words, w) {
			t.Errorf("%q is not in %q", w, words)
		}
	}
	if table := LawCurvesTable(curves, rheology.Laws(), ordinary); len(table.Rows) != curveSteps+1 || len(table.Rows[0]) != 6+3*len(curves) || table.Rows[9][1] != "1e-15" || table.Rows[9][3] != "2" || len(table.Header) != len(table.Rows[0]) {
		t.Errorf("%d rows, %d columns", len(table.Rows), len(table.Header))
	}
}

// TestLawFilter: criteria narrow together; what no law meets is named.
func TestLawFilter(t *testing.T) {
	all := rheology.Laws()
	for _, f := range []LawFilter{{Material: "OLIVINE"}, {Mechanism: "diffusion"}, {Water: "dry"}, {Search: "hirth 2003"}, {Material: "olivine", Mechanism: "diffusion", Water: "wet"}} {
		got, err := f.Choose(all)
		if err != nil || len(got) == 0 || len(got) >= len(all) {
			t.Errorf("%+v: %d of %d laws, %v", f, len(got), len(all), err)
		}
		for _, l := range got {
			for _, a := range f.asked() {
				if !a.match(&l) {
					t.Errorf("%+v leaves %s", f, l.Name)
				}
			}
		}
	}
	if got, err := (LawFilter{}).Choose(all); err != nil || len(got) != len(all) {
		t.Errorf("no filter: %d laws, %v", len(got), err)
	}
	wet, err := LawFilter{Water: "wet"}.Choose(all)
	if err != nil || slices.ContainsFunc(wet, func(l rheology.Law) bool { return !strings.HasPrefix(l.WaterState, "wet") }) {
		t.Errorf("wet: %v", err)
	}
	if _, err := (LawFilter{Material: "quartz", Named: true}).Choose([]rheology.Law{law(t, "dry eclogite Zhang 2007")}); err != nil {
		t.Errorf("quartz eclogite is of quartz: %v", err)
	}
	if _, err := (LawFilter{Material: "olivine", Named: true}).Choose([]rheology.Law{law(t, "dry eclogite Zhang 2007")}); err == nil || err.Error() != `none of the laws named has --material "olivine"` {
		t.Errorf("named: %v", err)
	}
	if _, err := (LawFilter{Material: "olivin", Mechanism: "glide"}).Choose(all); err == nil || !strings.Contains(err.Error(), `--mechanism "glide"`) {
		t.Errorf("%v", err)
	}
}
