package column_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"

	"pgregory.net/rapid"
)

func modes(t *testing.T, byWeight bool, list ...column.Mode) *column.Modes {
	t.Helper()
	m, err := column.NewModes(list, byWeight)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func TestModes(t *testing.T) {
	half := []column.Mode{{Mineral: "pyrope", Share: 0.5}, {Mineral: "Di", Share: 0.5}}
	grt, _ := column.FindMineral("pyrope")
	cpx, _ := column.FindMineral("diopside")
	a, b := grt.Density(298, 0), cpx.Density(298, 0)
	// Σφρ of volumes, and of weights 1/Σ(w/ρ), at the reference.
	if got := modes(t, false, half...).At(298, 0, 0.3); !close(got, (a+b)/2, 1e-15) {
		t.Errorf("by volume %g, want %g", got, (a+b)/2)
	}
	if got := modes(t, true, half...).At(298, 0, 0.3); !close(got, 2/(1/a+1/b), 1e-15) {
		t.Errorf("by weight %g, want %g", got, 2/(1/a+1/b))
	}
	// 0.995 in all is normalised; a share of 0 is no part of the rock.
	m := modes(t, false, column.Mode{Mineral: "diopside", Share: 0.995}, column.Mode{Mineral: "quartz"})
	if p := m.Parts(); len(p) != 1 || p[0].Mass != 1 || m.At(900, 1e9, 0) != cpx.Density(900, 1e9) {
		t.Errorf("%+v", p)
	}
	if m.Gradient(900, 1e9, 0.5) != 0 || !m.NeedsTemperature() || m.Validate() != nil || len(m.Cautions()) != 1 {
		t.Error("gradient, temperature, validity or cautions")
	}
	if c := strings.Join(modes(t, false, column.Mode{Mineral: "quartz", Share: 1}).Cautions(), "\n"); !strings.Contains(c, "quartz: its thermal expansion") {
		t.Error(c)
	}
	if (&column.Modes{}).Validate() == nil {
		t.Error("no modes are valid")
	}
}

func TestModesErrors(t *testing.T) {
	for want, list := range map[string][]column.Mode{
		"no mineral modes":      nil,
		"did you mean pyrope":   {{Mineral: "pyrpe", Share: 1}},
		"pyrope stands twice":   {{Mineral: "pyrope", Share: 0.5}, {Mineral: "Prp", Share: 0.5}},
		"sum to 0.98; need 1":   {{Mineral: "pyrope", Share: 0.98}},
		"pyrope: share -0.1":    {{Mineral: "pyrope", Share: -0.1}, {Mineral: "quartz", Share: 1.1}},
		"pyrope: share NaN":     {{Mineral: "pyrope", Share: math.NaN()}},
		"sum to 0; need 1 (wit": {{Mineral: "pyrope"}},
	} {
		if _, err := column.NewModes(list, false); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
}

// TestModesProperties: between the densities of its minerals, whatever the order of
// the modes; its derivative is that of At; denser under pressure.
func TestModesProperties(t *testing.T) {
	minerals := column.Minerals()
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 6).Draw(t, "n")
		first := rapid.IntRange(0, len(minerals)-1).Draw(t, "first")
		T := rapid.Float64Range(273, 1800).Draw(t, "T")
		P := rapid.Float64Range(0, 5e9).Draw(t, "P")
		list, back := make([]column.Mode, n), make([]column.Mode, n)
		lo, hi := math.Inf(1), 0.0
		for i := range list {
			m := minerals[(first+5*i)%len(minerals)]
			list[i] = column.Mode{Mineral: m.Name, Share: 1 / float64(n)}
			back[n-1-i] = list[i]
			lo, hi = min(lo, m.Density(T, P)), max(hi, m.Density(T, P))
		}
		by := rapid.Bool().Draw(t, "weight")
		m, err := column.NewModes(list, by)
		if err != nil {
			t.Fatal(err)
		}
		rho := m.At(T, P, 0)
		if rho < lo*(1-1e-14) || rho > hi*(1+1e-14) || !(m.At(T, P+1e6, 0) > rho) {
			t.Fatalf("density %g of %g to %g; %g under more pressure", rho, lo, hi, m.At(T, P+1e6, 0))
		}
		if other, _ := column.NewModes(back, by); !close(other.At(T, P, 0), rho, 1e-14) {
			t.Fatal("the order of the modes matters")
		}
		d := func(h float64) float64 { return (m.At(T+h, P, 0) - m.At(T-h, P, 0)) / (2 * h) }
		slope := (4*d(2) - d(4)) / 3
		// 1e-6 of the slope, and round-off of densities over 4 K.
		if got := m.PerKelvin(T, P, 0); math.Abs(got-slope) > 1e-6*math.Abs(slope)+1e-15*rho {
			t.Fatalf("∂ρ/∂T = %.10g, by differences %.10g", got, slope)
		}
	})
}

func rows(f func(T, P float64) float64) []column.TableRow {
	var out []column.TableRow
	for _, P := range []float64{3e9, 0, 1e9} { // in no order
		for _, T := range []float64{900, 300, 1600} {
			out = append(out, column.TableRow{T: T, P: P, Density: f(T, P)})
		}
	}
	return out
}

func TestTable(t *testing.T) {
	f := func(T, P float64) float64 { return 3300 - 0.1*T + 2e-8*P + 2e-12*T*P }
	tab, err := column.NewTable(rows(f))
	if err != nil {
		t.Fatal(err)
	}
	rapid.Check(t, func(t *rapid.T) {
		T := rapid.Float64Range(300, 1600).Draw(t, "T")
		P := rapid.Float64Range(0, 3e9).Draw(t, "P")
		if got := tab.At(T, P, 0); !close(got, f(T, P), 1e-14) || tab.Covers(T, P) != nil || column.Covered(tab, T, P) != nil {
			t.Fatalf("ρ = %.15g, want %.15g; %v", got, f(T, P), tab.Covers(T, P))
		}
		// a difference of two densities over 600 K: 1e-12 of it
		if got := tab.PerKelvin(T, P, 0); math.Abs(got+0.1-2e-12*P) > 1e-13 {
			t.Fatalf("∂ρ/∂T = %g", got)
		}
	})
	if tab.Gradient(900, 1e9, 0) != 0 || !tab.NeedsTemperature() || tab.Validate() != nil || (&column.Table{}).Validate() == nil {
		t.Error("gradient, temperature or validity")
	}
	for _, c := range []struct{ T, P float64 }{{299, 1e9}, {1601, 1e9}, {900, 3.1e9}, {900, -1e3}, {math.NaN(), 0}} {
		if column.Covered(tab, c.T, c.P) == nil {
			t.Errorf("%g K, %g Pa is covered", c.T, c.P)
		}
	}
	const want = "outside the table of densities: T = 1400 degC, P = 2 GPa; it covers 26.85 to 1326.85 degC and 0 to 3 GPa"
	if err := tab.Covers(1673.15, 2e9); err == nil || err.Error() != want {
		t.Errorf("%v\nwant %s", err, want)
	}
	if got := tab.At(2000, 5e9, 0); got != f(1600, 3e9) || tab.PerKelvin(2000, 1e9, 0) != 0 {
		t.Errorf("beyond the edge %g, %g", got, tab.PerKelvin(2000, 1e9, 0))
	}
	if column.Covered(column.Uniform(3300), 1e9, 1e99) != nil {
		t.Error("a number has no range")
	}
}

func TestTableErrors(t *testing.T) {
	full := rows(func(_, _ float64) float64 { return 3300 })
	changed := func(i int, r column.TableRow) []column.TableRow {
		out := append([]column.TableRow(nil), full...)
		out[i] = r
		return out
	}
	for _, c := range []struct {
		rows []column.TableRow
		row  int
		want string
	}{
		{nil, -1, "0 temperatures and 0 pressures"},
		{full[:3], -1, "3 temperatures and 1 pressures"},
		{full[:8], -1, "there is no density for T = 1326.85 degC, P = 1 GPa"},
		{append(append([]column.TableRow(nil), full...), full[4]), 9, "T = 26.85 degC, P = 0 GPa stands in an earlier row"},
		{[]column.TableRow{{T: 1, P: 1, Density: 1}, {T: 2, P: 2, Density: 1}, {T: 3, P: 3, Density: 1}, {T: 4, P: 4, Density: 1}, {T: 5, P: 5, Density: 1}}, -1, "which need 25 rows; it has 5"},
		{changed(2, column.TableRow{T: 0, P: 1, Density: 1}), 2, "temperature 0 K"},
		{changed(3, column.TableRow{T: 300, P: -1e9, Density: 1}), 3, "pressure -1 GPa"},
		{changed(4, column.TableRow{T: 300, P: 0, Density: math.NaN()}), 4, "density NaN"},
	} {
		var e *column.TableError
		if _, err := column.NewTable(c.rows); !errors.As(err, &e) || e.Row != c.row || !strings.Contains(e.What, c.want) {
			t.Errorf("%v, want row %d: %q", err, c.row, c.want)
		}
	}
}

// FuzzTable: whatever the rows, an error or a table that gives them back.
func FuzzTable(f *testing.F) {
	f.Add(300.0, 900.0, 0.0, 1e9, 3300.0, 3200.0)
	f.Add(300.0, math.Nextafter(300, 400), 0.0, 5e-324, 3300.0, 1e308)
	f.Fuzz(func(t *testing.T, t0, t1, p0, p1, a, b float64) {
		rows := []column.TableRow{{t0, p0, a}, {t0, p1, b}, {t1, p0, b}, {t1, p1, a}}
		tab, err := column.NewTable(rows)
		if err != nil {
			return
		}
		for _, r := range rows {
			if got := tab.At(r.T, r.P, 0); got != r.Density || tab.Covers(r.T, r.P) != nil {
				t.Fatalf("%v gives %g, %v", r, got, tab.Covers(r.T, r.P))
			}
		}
		if got := tab.At(t0/2+t1/2, p0/2+p1/2, 0); !(got >= min(a, b)*(1-1e-12) && got <= max(a, b)*(1+1e-12)) {
			t.Fatalf("in the middle %g of %g and %g", got, a, b)
		}
	})
}
