package growth_test

import (
	"context"
	"math"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// twoInversions has two dense layers far apart: a thin one whose mode is fastest at
// short wavelengths and a thick one whose mode is fastest at long ones, so that the
// branches cross.
func twoInversions() *growth.Column {
	return checks.Layered(growth.Rigid, growth.Rigid,
		[]float64{3e3, 60e3, 25e3, 60e3}, []float64{2950, 2900, 3100, 3000}, []float64{1e20, 2e20, 1e21, 5e20}, 0, 0, 9.81)
}

// Branches cross without swapping: each keeps its own contact as driver while their
// order in growth rate changes.
func TestBranchesCross(t *testing.T) {
	var lambda []float64
	for i := range 60 {
		lambda = append(lambda, 6e3*math.Pow(60, float64(i)/59))
	}
	c := twoInversions()
	all, err := growth.Branches(context.Background(), c, lambda, growth.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(all) != 2 {
		t.Fatalf("%d branches, want 2", len(all))
	}
	for i, b := range all {
		if len(b.Modes) != len(lambda) {
			t.Fatalf("branch %d has %d of %d wavelengths", i, len(b.Modes), len(lambda))
		}
		label := b.Modes[0].Label(-1, c.Depths())
		for _, m := range b.Modes {
			if got := m.Label(-1, c.Depths()); got != label {
				t.Errorf("branch %d: %q at %g km, %q at the start", i, got, m.Wavelength/1e3, label)
			}
		}
	}
	last := len(lambda) - 1
	if (all[0].Modes[0].Growth > all[1].Modes[0].Growth) == (all[0].Modes[last].Growth > all[1].Modes[last].Growth) {
		t.Error("the branches do not cross: the test shows nothing")
	}
}

// The label says what moves.
func TestLabels(t *testing.T) {
	arc := checks.Layered(growth.Free, growth.HalfSpace, []float64{40e3, 12e3, 30e3}, []float64{2850, 3450, 3270}, []float64{1e22, 1e21, 1e21}, 3270, 3e20, 9.81)
	// over a buoyant layer that rises faster by itself, the root sinks against it
	counter := checks.Layered(growth.Rigid, growth.Rigid, []float64{20e3, 20e3, 20e3}, []float64{3080, 3000, 2900}, []float64{1e21, 1e21, 1e21}, 0, 0, 9.81)
	lid := checks.Layered(growth.Free, growth.HalfSpace, []float64{20e3}, []float64{2850}, []float64{1e24}, 3270, 1e20, 9.81)
	lid.Layers[0].Viscosity = checks.PowerLaw(1e24, 10)
	lid.ShearRate, lid.VerticalStrain = 1e-13, -1e-13
	fold := *lid
	fold.ShearRate, fold.VerticalStrain = -1e-13, 1e-13
	hot := checks.ReferenceHeated()
	hot.Jumps = make([]float64, len(hot.Jumps)) // nothing but heat
	for name, v := range map[string]struct {
		c    *growth.Column
		root int
		at   float64
		mode int
	}{
		"root drips":  {arc, 2, 80e3, 0},
		"counterflow": {counter, 1, 60e3, 1},
		"lid necks":   {lid, -1, 90e3, 0},
		"lid folds":   {&fold, -1, 90e3, 0},
		"thermal":     {hot, -1, 200e3, 0},
	} {
		s, err := growth.NewSolver(v.c, 0)
		if err != nil {
			t.Fatal(err)
		}
		modes, err := s.Modes(v.at)
		if err != nil {
			t.Fatal(err)
		}
		if got := modes[v.mode].Label(v.root, v.c.Depths()); got != name {
			t.Errorf("%q, want %q (growth %g, work %v, strain %v)", got, name, modes[0].Growth, modes[0].WorkShare, modes[0].StrainShare)
		}
	}
}

// One composition, however compressed, grows nothing: only the free surface relaxes
// (physics of a displaced parcel; derived).
func TestOneCompositionGrowsNothing(t *testing.T) {
	c := checks.Layered(growth.Free, growth.HalfSpace, []float64{50e3, 50e3}, []float64{3300, 3300}, []float64{1e22, 1e21}, 3300, 1e20, 9.81)
	sp, err := growth.Compute(context.Background(), c, growth.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if sp.Fastest.Growth >= 0 {
		t.Errorf("a column of one composition grows at %g 1/s", sp.Fastest.Growth)
	}
}
