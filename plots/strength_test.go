package plots

import (
	"slices"
	"strings"
	"testing"
)

// TestStrengthData asserts that the curve is twice the state's stress, on a log axis over
// more than two decades, and that what decides is named.
func TestStrengthData(t *testing.T) {
	st := madeUpState(fiveRocks)
	yields(st, 0, 12)
	st.Layers[1].Points[0].Capped, st.Layers[1].Points[1].Capped = true, true
	f, err := Strength(st, 0)
	if err != nil {
		t.Fatal(err)
	}
	s := checkFigure(t, f)
	c := s.named(t, "differential stress")
	i := 0
	for _, l := range st.Layers {
		for _, p := range l.Points {
			if !near(c.x[i], 2*p.Stress/1e6) || !near(c.y[i], p.Depth/1e3) {
				t.Errorf("point %d: %g MPa at %g km", i, c.x[i], c.y[i])
			}
			i++
		}
	}
	// ∫ (ρ − 3270) g dz over 12 km of 3450 to 3410 kg/m³: 160 × 9.81 × 12e3 Pa.
	w := s.named(t, "weight of the root")
	if !near(w.x[0], 160*9.81*12e3/1e6) || w.y[0] != 58 || w.y[1] != 70 {
		t.Errorf("weight of the root: %v MPa from %v km", w.x, w.y)
	}
	for _, l := range []string{"friction", "root's weight\n19 MPa", "10^{2}"} {
		if !s.has(l) {
			t.Errorf("no %q", l)
		}
	}
	if !s.says("limit") {
		t.Error("the upper limit is not named")
	}
	for _, want := range []string{"differential stress 2 τ_II", "strain rate of 3×10^-16 1/s", "friction decides", "viscosity limit"} {
		if !strings.Contains(f.Caption, want) {
			t.Errorf("caption %q lacks %q", f.Caption, want)
		}
	}
}

// TestStrengthScale asserts a linear axis from nothing over less than two decades.
func TestStrengthScale(t *testing.T) {
	st := madeUpState([]rock{{"a", 10, 3000, 21, 21, false}, {"b", 10, 2900, 22, 22, false}})
	f, err := Strength(st, 0)
	if err != nil {
		t.Fatal(err)
	}
	if s := checkFigure(t, f); !s.has("0") || s.says("10^{") {
		t.Error("the axis is not linear from 0")
	}
}

// TestColumns asserts one figure of four panels on a page, two in a column, and no
// stress without a strain rate.
func TestColumns(t *testing.T) {
	st := madeUpState(fiveRocks)
	page, err := Columns(st, PageWidth)
	if err != nil || len(page) != 1 {
		t.Fatalf("%d figures on a page, %v", len(page), err)
	}
	s := checkFigure(t, page[0])
	if !s.has("(d)") || !slices.Contains(s.axes, "Differential\nstress (MPa)") || !strings.Contains(page[0].Caption, "and differential stress 2 τ_II (d)") {
		t.Errorf("axes %q, caption %q", s.axes, page[0].Caption)
	}
	if two, err := Columns(st, 0); err != nil || len(two) != 2 || two[1].Name != "strength" {
		t.Errorf("%d figures in a column, %v", len(two), err)
	}
	st.StrainRate = 0
	if one, err := Columns(st, 0); err != nil || len(one) != 1 {
		t.Errorf("%d figures without a strain rate, %v", len(one), err)
	}
	if _, err := Strength(st, 0); err == nil {
		t.Error("a strength without a strain rate is drawn")
	}
}
