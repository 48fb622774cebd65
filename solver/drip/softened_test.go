package drip_test

import (
	"context"
	"math"
	"slices"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// TestSoftenedNewtonian: rock of n = 1 has nothing to soften. The closure's time is the
// linear one at its wavelength, and the best estimate that times the ratio of finite
// amplitude that closure.md's two-dimensional runs gave (0.933 to 0.892 for n = 1;
// derived).
func TestSoftenedNewtonian(t *testing.T) {
	s, err := state.New(arc(3500), 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	set := settings()
	linear, err := drip.Solve(context.Background(), s, set, drip.Options{})
	if err != nil {
		t.Fatal(err)
	}
	set.Softening = "self"
	soft, err := drip.Solve(context.Background(), s, set, drip.Options{})
	if err != nil {
		t.Fatal(err)
	}
	// both are at their minimum over wavelengths, which 1 % of a wavelength leaves flat
	if r := soft.Soft.Slow / linear.Time; math.Abs(r-1) > 3e-4 || math.Abs(soft.Wavelength/linear.Wavelength-1) > 0.03 {
		t.Errorf("%g of the linear time, at %g and %g m", r, soft.Wavelength, linear.Wavelength)
	}
	if f := soft.Soft.Best / soft.Soft.Slow; f < 0.892-1e-9 || f > 0.933+1e-9 || soft.Time != soft.Soft.Best || soft.Outcome != linear.Outcome {
		t.Errorf("finite amplitude %g, time %g, %s", f, soft.Time, soft.Outcome)
	}
	if n := len(soft.History.Time); n == 0 || math.Abs(soft.History.Time[n-1]/soft.Time-1) > 1e-9 || !slices.IsSorted(soft.History.Time) {
		t.Error("the history does not end at the drip")
	}
}

// TestSoftenedSearch: creep laws drip the sooner, by far more than in proportion, the
// larger the undulation, and a search around a wavelength finds the whole range's answer.
func TestSoftenedSearch(t *testing.T) {
	s := creeping(t, 1e-15)
	set := drip.Settings{Amplitude: 1500, Criterion: 1, Window: 30e6 * 365.25 * 86400, Removes: 0.3, Softening: "self"}
	r, err := drip.Solve(context.Background(), s, set, drip.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !(r.Soft.BestLow < r.Soft.Best && r.Soft.Best < r.Soft.BestHigh) || !(r.Soft.Exponent > 2) || r.TimeHigh < 9*r.TimeLow || math.IsInf(r.Time, 1) {
		t.Errorf("%+v, %g to %g s", r.Soft, r.TimeLow, r.TimeHigh)
	}
	for _, near := range []float64{0, 1.2 * r.Wavelength} {
		got, err := drip.SoftenedTime(context.Background(), s, set, drip.Options{Near: near})
		if err != nil || math.Abs(got/r.Time-1) > 2e-3 {
			t.Errorf("near %g m: %g of the time, %v", near, got/r.Time, err)
		}
	}
}

// TestSoftenedBuoyant: a root lighter than what lies below it is said to be so.
func TestSoftenedBuoyant(t *testing.T) {
	s, err := state.New(arc(3000), 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	set := settings()
	set.Softening = "self"
	r, err := drip.Solve(context.Background(), s, set, drip.Options{})
	if err != nil || r.Outcome != "buoyant" || !math.IsInf(r.Time, 1) {
		t.Errorf("%+v, %v", r, err)
	}
	graded := arc(3500)
	graded.Layers[0].Density = column.Linear{Top: 2700, Bottom: 2900}
	if s, err = state.New(graded, 1e-15); err != nil {
		t.Fatal(err)
	}
	if _, err := drip.Solve(context.Background(), s, set, drip.Options{}); err == nil {
		t.Error("a compositional gradient is taken")
	}
}
