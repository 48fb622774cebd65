package column_test

import (
	"errors"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"keelfall/column"
)

// sampled tabulates f in n equal steps of pressure to most in Pa.
func sampled(t testing.TB, n int, most float64, f func(P float64) float64) *column.Curve {
	t.Helper()
	var rows []column.CurvePoint
	for i := range n + 1 {
		P := most * float64(i) / float64(n)
		rows = append(rows, column.CurvePoint{P: P, T: f(P)})
	}
	tab, err := column.NewCurveTable("t.csv", rows)
	if err != nil {
		t.Fatal(err)
	}
	return &column.Curve{Table: tab}
}

// TestTabulatedLine: a table of a line is the line, in all that melt does; 1e-12 is
// round-off of temperatures over a melting interval of a fifth of them.
func TestTabulatedLine(t *testing.T) {
	s, l := &column.Curve{Surface: 1300, Slope: 1e-7}, &column.Curve{Surface: 1500, Slope: 8e-8}
	line := &column.Melt{Solidus: s, Liquidus: l, LatentHeat: 4e5, Density: 2750}
	table := &column.Melt{Solidus: sampled(t, 17, 4e9, s.At), Liquidus: sampled(t, 9, 5e9, l.At), LatentHeat: 4e5, Density: 2750}
	if err := table.Validate(); err != nil {
		t.Fatal(err)
	}
	solid := column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
	rocks := []column.Rock{}
	for _, m := range []*column.Melt{line, table} {
		rocks = append(rocks, column.Rock{Density: column.Molten{Solid: solid, Melt: m}, Melt: m, HeatCapacity: 1000})
	}
	some := 0
	for _, P := range []float64{0, 1e8, 2.4e8, 1e9, 1.7e9, 3.99e9, 4e9} {
		for _, T := range []float64{900, s.At(P) + 1, s.At(P) + 77, l.At(P) - 1, 2500} {
			a, b := &rocks[0], &rocks[1]
			phi, _ := a.Melt.At(T, P)
			got, _ := b.Melt.At(T, P)
			if phi > 0 && phi < 1 {
				some++
			}
			for name, f := range map[string]func(r *column.Rock) float64{
				"density":       func(r *column.Rock) float64 { return r.Density.At(T, P, 0) },
				"PerKelvin":     func(r *column.Rock) float64 { return r.Density.PerKelvin(T, P, 0) },
				"PerPascal":     func(r *column.Rock) float64 { return r.Density.PerPascal(T, P, 0) },
				"heat capacity": func(r *column.Rock) float64 { return r.ApparentHeatCapacity(T, P) },
				"adiabat":       func(r *column.Rock) float64 { return r.Adiabat(T, P, 0) },
			} {
				if !close(f(b), f(a), 1e-12) {
					t.Errorf("%s at %g K, %g Pa: %.16g, of the line %.16g", name, T, P, f(b), f(a))
				}
			}
			if math.Abs(got-phi) > 1e-12 {
				t.Errorf("φ at %g K, %g Pa: %.16g, of the line %.16g", T, P, got, phi)
			}
		}
	}
	if some != 21 {
		t.Errorf("%d points are partly molten, want 21", some)
	}
	if n := len(table.Kinks()); n != 2 {
		t.Errorf("%d kinks, want solidus and liquidus: the rows lie on lines", n)
	}
}

// TestTabulatedParabola: against T = 1300 + 150 p − 12 p² K, p in GPa, the straight pieces
// err by h²/8 × 24 K/GPa² in a piece's middle (derived: the chord of a parabola), so four
// times less for half the step; slopes are exact there.
func TestTabulatedParabola(t *testing.T) {
	f := func(P float64) float64 { p := P / 1e9; return 1300 + 150*p - 12*p*p }
	checked := 0
	for _, n := range []int{4, 8, 16, 32, 64} {
		c := sampled(t, n, 4e9, f)
		h := 4e9 / float64(n)
		for i := range n {
			mid := h * (float64(i) + 0.5)
			if got, want := f(mid)-c.At(mid), h*h/8*24e-18; !close(got, want, 1e-9) { // of 1e-3 K and more beside 1300 K
				t.Errorf("%d rows: off by %g K at %g Pa, want %g", n, got, mid, want)
			}
			if got, want := c.PerPascal(mid), (150-24*mid/1e9)*1e-9; !close(got, want, 1e-10) {
				t.Errorf("%d rows: slope %g, want %g", n, got, want)
			}
			checked++
		}
		if c.At(2e9) != f(2e9) || !close(c.PerPascal(2e9), c.PerPascal(2e9+h/2), 1e-15) {
			t.Error("at a row the curve is the row's and the slope that of the deeper side")
		}
		m := &column.Melt{Solidus: c, Liquidus: &column.Curve{Surface: 2500}}
		if got := len(m.Kinks()); got != 2+n-1 {
			t.Errorf("%d rows: %d kinks, want every inner row", n, got)
		}
		for _, k := range m.Kinks()[2:] {
			if k(1500, 0) >= 0 || k(1500, 4e9) <= 0 {
				t.Error("a kink of a row is no function of pressure that changes sign")
			}
		}
	}
	if checked != 124 {
		t.Fatalf("%d pieces checked", checked)
	}
}

// TestCurveCovers: nothing is extrapolated, and the errors say what was asked and what is
// covered; a search may pass through.
func TestCurveCovers(t *testing.T) {
	tab := func(p ...column.CurvePoint) *column.Curve {
		c, err := column.NewCurveTable("wet.csv", p)
		if err != nil {
			t.Fatal(err)
		}
		return &column.Curve{Table: c}
	}
	solidus := tab(column.CurvePoint{P: 0.5e9, T: 1000}, column.CurvePoint{P: 1e9, T: 950}, column.CurvePoint{P: 3e9, T: 1100})
	m := &column.Melt{Solidus: solidus, Liquidus: &column.Curve{Surface: 1500}}
	if err := m.Validate(); err != nil {
		t.Fatal(err)
	}
	for P, want := range map[float64]string{
		0.4e9:     "melt: the solidus at P = 0.4 GPa lies outside the table wet.csv, which covers 0.5 to 3 GPa; nothing is extrapolated",
		3.1e9:     "melt: the solidus at P = 3.1 GPa lies outside the table wet.csv, which covers 0.5 to 3 GPa; nothing is extrapolated",
		0.5e9:     "",
		3e9 + 1e0: "", // round-off of a pressure: 1e-9 of what is covered
	} {
		err := m.Covers(P)
		var outside *column.OutsideError
		if want == "" && err != nil || want != "" && (err == nil || err.Error() != want || !errors.As(err, &outside)) {
			t.Errorf("%g Pa: %v, want %q", P, err, want)
		}
		if d := (column.Molten{Solid: column.Uniform(3300), Melt: m}); (column.Covered(d, 1000, P) != nil) != (want != "") {
			t.Errorf("%g Pa: the molten density is covered otherwise", P)
		}
	}
	if solidus.At(0) != 1000 || solidus.At(5e9) != 1100 || solidus.PerPascal(0) != 0 || solidus.PerPascal(5e9) != 0 {
		t.Error("beyond the table it is that of its end")
	}
	other := &column.Melt{Solidus: &column.Curve{Surface: 900}, Liquidus: solidus}
	if err := other.Covers(0); err == nil || !strings.HasPrefix(err.Error(), "melt: the liquidus at P = 0 GPa lies outside") {
		t.Error(err)
	}
	if got := m.Solidus.Between(0, 2e9, 3); !reflect.DeepEqual(got, []float64{0.5e9, 1e9, 1.25e9, 2e9}) {
		t.Errorf("to be drawn at %v", got)
	}
	if got := m.Liquidus.Between(0, 2e9, 3); !reflect.DeepEqual(got, []float64{0, 1e9, 2e9}) || m.Solidus.Between(4e9, 5e9, 3) != nil {
		t.Errorf("to be drawn at %v", got)
	}
}

func TestCurveErrors(t *testing.T) {
	at := func(p ...float64) (rows []column.CurvePoint) {
		for i := 0; i < len(p); i += 2 {
			rows = append(rows, column.CurvePoint{P: p[i], T: p[i+1]})
		}
		return rows
	}
	for _, c := range []struct {
		rows []column.CurvePoint
		row  int
		want string
	}{
		{nil, -1, "rows: 0; needs two at least"},
		{at(0, 1000), -1, "rows: 1; needs two at least"},
		{at(0, 1000, 0, 1010), 1, "pressure 0 GPa does not lie above that of the row before it, 0 GPa; pressures increase from row to row"},
		{at(0, 1000, 2e9, 1010, 1e9, 1005), 2, "pressure 1 GPa does not lie above that of the row before it, 2 GPa"},
		{at(-1, 1000, 2e9, 1010), 0, "pressure -1e-09 GPa; needs 0 or more"},
		{at(0, 1000, math.NaN(), 1010), 1, "pressure NaN GPa; needs 0 or more"},
		{at(0, 1000, math.Inf(1), 1010), 1, "pressure +Inf GPa; needs 0 or more"},
		{at(0, 0, 1e9, 1010), 0, "temperature 0 K; needs more than 0 K"},
		{at(0, 1000, 1e9, math.NaN()), 1, "temperature NaN K; needs more than 0 K"},
	} {
		var wrong *column.TableError
		if _, err := column.NewCurveTable("x", c.rows); !errors.As(err, &wrong) || wrong.Row != c.row || !strings.HasPrefix(wrong.What, c.want) {
			t.Errorf("%v: %v, want %q in row %d", c.rows, err, c.want, c.row)
		}
	}
	curve := func(p ...float64) *column.Curve {
		c, err := column.NewCurveTable("x", at(p...))
		if err != nil {
			t.Fatal(err)
		}
		return &column.Curve{Table: c}
	}
	flat := &column.Curve{Surface: 1200}
	for want, m := range map[string]*column.Melt{
		"melt: the solidus, 976.85 degC, is not below the liquidus, 926.85 degC, at P = 2 GPa":        {Solidus: curve(0, 1000, 2e9, 1250, 3e9, 1100), Liquidus: flat},
		"melt: the solidus, 926.85 degC, is not below the liquidus, 876.85 degC, at P = 1 GPa":        {Solidus: flat, Liquidus: curve(0, 1300, 1e9, 1150, 3e9, 1400)},
		"melt: the tables share no pressures: the solidus covers 0 to 1 GPa, the liquidus 2 to 3 GPa": {Solidus: curve(0, 1000, 1e9, 1010), Liquidus: curve(2e9, 1500, 3e9, 1600)},
		"melt: the solidus is an empty table":                                                         {Solidus: &column.Curve{Table: &column.CurveTable{}}, Liquidus: flat},
		"melt: the liquidus is a table and a line, 1 K + 0 K/Pa; needs one of":                        {Solidus: flat, Liquidus: &column.Curve{Surface: 1, Table: curve(0, 1300, 1e9, 1310).Table}},
	} {
		if err := m.Validate(); err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
	// Where one table covers what the other does not, its rows there do not count.
	m := &column.Melt{Solidus: curve(0, 1000, 1e9, 1010, 4e9, 3000), Liquidus: curve(0.5e9, 1500, 2e9, 2600)}
	all, err := m.Common()
	if err != nil || !slices.Equal(all, []float64{0.5e9, 1e9, 2e9}) || m.Validate() != nil {
		t.Errorf("%v, %v, %v", all, err, m.Validate())
	}
}
