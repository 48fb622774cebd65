package race_test

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/race"
)

// Two root layers pull by the sum of their own excess weights (by hand), and a root on
// a wall by nothing that is known.
func TestBuoyancy(t *testing.T) {
	p := problem(1)
	lower := p.Column.Layers[1]
	lower.Name, lower.Thickness, lower.Density = "lower root", 4e3, column.Uniform(3300)
	p.Column.Layers = append(p.Column.Layers, lower)
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	contrast, stress, ok := race.Buoyancy(s)
	want := 9.81 * (180*12e3 + 30*4e3)
	if !ok || math.Abs(contrast-30) > 1e-9 || math.Abs(stress/want-1) > 1e-12 {
		t.Errorf("contrast %g kg/m³, stress %g Pa, want 30 and %g", contrast, stress, want)
	}
	p.Column.Base.Boundary = column.Rigid
	if s, err = race.Prepare(p); err != nil {
		t.Fatal(err)
	}
	if _, _, ok := race.Buoyancy(s); ok {
		t.Error("a root on a wall has a contrast")
	}
}
