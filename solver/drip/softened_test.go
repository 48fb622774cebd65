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

// Rock of n = 1 has nothing to soften: the answer is the linear one, to the bit. One layer
// of n a little above 1 is the closure's, whose time is the linear one almost and whose best
// estimate is that times the ratio of finite amplitude of two-dimensional runs (0.933 to
// 0.892 for n = 1; derived).
func TestSoftenedNewtonian(t *testing.T) {
	c := arc(3500)
	set := settings()
	var linear, soft [2]*drip.Result
	for i := range linear {
		if i == 1 {
			c.Layers[0].Viscosity.Exponent = 1 + 1e-9
		}
		s, err := state.New(c, 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		for softening, r := range map[string]*[2]*drip.Result{"none": &linear, "self": &soft} {
			set.Softening = softening
			if r[i], err = drip.Solve(context.Background(), s, set, drip.Options{}); err != nil {
				t.Fatal(err)
			}
		}
	}
	if soft[0].Soft != nil || soft[0].Time != linear[0].Time || soft[0].Wavelength != linear[0].Wavelength || soft[0].TimeHigh != linear[0].TimeHigh {
		t.Errorf("%g and %g s", soft[0].Time, linear[0].Time)
	}
	// both are at their minimum over wavelengths, which 1 % of a wavelength leaves flat
	r := soft[1]
	if f := r.Soft.Slow / linear[1].Time; math.Abs(f-1) > 3e-4 || math.Abs(r.Wavelength/linear[1].Wavelength-1) > 0.03 {
		t.Errorf("%g of the linear time, at %g and %g m", f, r.Wavelength, linear[1].Wavelength)
	}
	if f := r.Soft.Best / r.Soft.Slow; f < 0.892-1e-9 || f > 0.933+1e-9 || r.Time != r.Soft.Best || r.Outcome != linear[1].Outcome {
		t.Errorf("finite amplitude %g, time %g, %s", f, r.Time, r.Outcome)
	}
	if n := len(r.History.Time); n == 0 || math.Abs(r.History.Time[n-1]/r.Time-1) > 1e-9 || !slices.IsSorted(r.History.Time) {
		t.Error("the history does not end at the drip")
	}
}

// TestSoftenedSearch: creep laws drip the sooner, by far more than in proportion, the
// larger the undulation, and a search around a wavelength finds the whole range's answer.
func TestSoftenedSearch(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
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
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	light := arc(3000)
	light.Layers[1].Viscosity.Exponent = 2
	s, err := state.New(light, 1e-15)
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
	graded.Layers[1].Viscosity.Exponent = 2
	graded.Layers[0].Density = column.Linear{Top: 2700, Bottom: 2900}
	if s, err = state.New(graded, 1e-15); err != nil {
		t.Fatal(err)
	}
	plain := arc(3500)
	plain.Layers[1].Viscosity.Exponent = 2
	plain.Layers[0].Density = column.Uniform(2900)
	u, err := state.New(plain, 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	g, err := drip.Solve(context.Background(), s, set, drip.Options{})
	if err != nil {
		t.Fatal(err)
	}
	a, err := drip.Solve(context.Background(), u, set, drip.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if g.Outcome != "drips" || !(g.Time > 0 && g.Time < math.Inf(1)) || g.Time == a.Time || len(g.Curve.Time) != len(a.Curve.Time) || math.Abs(math.Log(g.Time/a.Time)) > 0.3 {
		t.Errorf("a crust that grades: %s at %g s, one of a density %g s", g.Outcome, g.Time, a.Time)
	}
}
