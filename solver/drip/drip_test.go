package drip_test

import (
	"context"
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

const myr = 1e6 * 365.25 * 86400 // s

// arc is a crust over a root over a half-space, numbers all the way; invented.
func arc(rootDensity float64) *column.Column {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free},
		Layers: []column.Layer{
			{Name: "crust", Thickness: 40e3, Rock: rock(2850, 1e22)},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(rootDensity, 2e20)},
		},
		Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3270, 1e20)}}
}

func settings() drip.Settings {
	return drip.Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 0.3, Spectrum: "white", Softening: "none"}
}

func solve(t *testing.T, c *column.Column, set drip.Settings, o drip.Options) *drip.Result {
	t.Helper()
	s, err := state.New(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := drip.Solve(context.Background(), s, set, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestSolve(t *testing.T) {
	r := solve(t, arc(3450), settings(), drip.Options{})
	if r.Outcome != "drips" || !(r.TimeLow < r.Time && r.Time < r.TimeHigh) {
		t.Fatalf("%s at %g Myr, band %g to %g", r.Outcome, r.Time/myr, r.TimeLow/myr, r.TimeHigh/myr)
	}
	if !(r.SpacingFrom < r.Wavelength && r.Wavelength < r.SpacingTo) {
		t.Errorf("spacing %g m, range %g to %g", r.Wavelength, r.SpacingFrom, r.SpacingTo)
	}
	last := len(r.History.Base) - 1
	if a := r.History.Base[last]; math.Abs(a/12e3-1) > 1e-6 {
		t.Errorf("amplitude at the drip %g m, want the root's thickness", a)
	}
	// no wavelength of the curve drips earlier
	for i, x := range r.Curve.Time {
		if x < r.Time*(1-1e-9) {
			t.Errorf("%g m drips at %g s, before the answer's %g", r.Curve.Wavelength[i], x, r.Time)
		}
	}
	// the quick search agrees with the full one
	s, err := state.New(arc(3450), 0)
	if err != nil {
		t.Fatal(err)
	}
	for _, near := range []float64{0, r.Wavelength} {
		got, err := drip.Time(context.Background(), s, settings(), drip.Options{Near: near})
		if err != nil || math.Abs(got/r.Time-1) > 1e-5 {
			t.Errorf("Time near %g m: %g s (%v), Solve %g", near, got, err, r.Time)
		}
	}
}

func TestOutcomes(t *testing.T) {
	buoyant := solve(t, arc(3200), settings(), drip.Options{})
	if buoyant.Outcome != "buoyant" || !math.IsInf(buoyant.Time, 1) || !strings.Contains(buoyant.Reason, "70 kg/m³ lighter") {
		t.Errorf("light root: %s, %g, %q", buoyant.Outcome, buoyant.Time, buoyant.Reason)
	}
	neutral := solve(t, arc(3270), settings(), drip.Options{})
	if neutral.Outcome != "buoyant" || !strings.Contains(neutral.Reason, "as dense as") {
		t.Errorf("root of the density below: %s, %q", neutral.Outcome, neutral.Reason)
	}
	short := settings()
	short.Window = 0.1 * myr
	if r := solve(t, arc(3450), short, drip.Options{}); r.Outcome != "window" || math.IsInf(r.Time, 1) {
		t.Errorf("short window: %s at %g", r.Outcome, r.Time)
	}
}

// A limit below the best wavelength makes the limit the answer, and says what it cost.
func TestLimit(t *testing.T) {
	free := solve(t, arc(3450), settings(), drip.Options{})
	limit := free.Wavelength / 2
	r := solve(t, arc(3450), settings(), drip.Options{Limit: limit, LimitIs: "the arc's width"})
	if math.Abs(r.Wavelength/limit-1) > 1e-4 || r.Time <= free.Time || r.Excluded == "" {
		t.Errorf("limit %g m: %g m at %g s (free %g s), %q", limit, r.Wavelength, r.Time, free.Time, r.Excluded)
	}
	if math.Abs(r.Unrestricted.Time/free.Time-1) > 1e-9 {
		t.Errorf("without the limit %g s, want %g", r.Unrestricted.Time, free.Time)
	}
}

func TestWorkers(t *testing.T) {
	one := solve(t, arc(3450), settings(), drip.Options{Workers: 1})
	three := solve(t, arc(3450), settings(), drip.Options{Workers: 3})
	if !reflect.DeepEqual(one, three) {
		t.Error("three workers give another result than one")
	}
}

func TestRefused(t *testing.T) {
	noRoot := arc(3450)
	noRoot.Layers[1].Root = false
	s, err := state.New(noRoot, 0)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := drip.Solve(context.Background(), s, settings(), drip.Options{}); !errors.Is(err, drip.ErrNoRoot) {
		t.Errorf("no root: %v", err)
	}
	if s, err = state.New(arc(3450), 0); err != nil {
		t.Fatal(err)
	}
	for name, spoil := range map[string]func(*drip.Settings){
		"amplitude 0":         func(s *drip.Settings) { s.Amplitude = 0 },
		"amplitude NaN":       func(s *drip.Settings) { s.Amplitude = math.NaN() },
		"amplitude of a root": func(s *drip.Settings) { s.Amplitude = 12e3 },
		"criterion 0":         func(s *drip.Settings) { s.Criterion = 0 },
		"window 0":            func(s *drip.Settings) { s.Window = 0 },
	} {
		set := settings()
		spoil(&set)
		if _, err := drip.Solve(context.Background(), s, set, drip.Options{}); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}

// stiff multiplies every viscosity of a column, and with it every time.
func stiff(c *column.Column, factor float64) *column.Column {
	for i := range c.Layers {
		c.Layers[i].Viscosity.Factor = factor
	}
	c.Base.Viscosity.Factor = factor
	return c
}

// How far ahead a drip is looked for does not depend on the window, and a dense root
// is not called buoyant because it is slow. With every viscosity n times higher the
// same drip takes n times as long (derived: Stokes flow has no other time).
func TestSlowIsNotBuoyant(t *testing.T) {
	first := solve(t, arc(3450), settings(), drip.Options{})
	short := settings()
	short.Window = 1 * myr
	slow := solve(t, stiff(arc(3450), 1000), short, drip.Options{})
	if slow.Outcome != "window" || math.Abs(slow.Time/first.Time/1000-1) > 1e-6 {
		t.Errorf("1000 times as stiff: %s at %g Myr, want window at %g", slow.Outcome, slow.Time/myr, 1000*first.Time/myr)
	}
	frozen := solve(t, stiff(arc(3450), 1e8), short, drip.Options{})
	if frozen.Outcome != "window" || !math.IsInf(frozen.Time, 1) || !strings.Contains(frozen.Reason, "180 kg/m³ denser") {
		t.Errorf("1e8 times as stiff: %s at %g Myr, %q", frozen.Outcome, frozen.Time/myr, frozen.Reason)
	}
	// short wavelengths do not feel the root's whole thickness: none within 1 km drips in time
	narrow := solve(t, stiff(arc(3450), 2000), short, drip.Options{Limit: 200, LimitIs: "the arc's width, 0.2 km"})
	if narrow.Outcome != "window" || !math.IsInf(narrow.Time, 1) || !strings.Contains(narrow.Reason, "0.2 km") {
		t.Errorf("narrow arc: %s at %g Myr, %q", narrow.Outcome, narrow.Time/myr, narrow.Reason)
	}
}

// Rock that is not Newtonian is warned about where the drip's own strain rate is not
// the one its viscosity is for; Newtonian rock is not.
func TestStrainRateWarning(t *testing.T) {
	for exponent, want := range map[float64]int{1: 0, 3: 1} {
		c := arc(3450)
		c.Layers[1].Viscosity.Exponent = exponent
		s, err := state.New(c, 1e-17)
		if err != nil {
			t.Fatal(err)
		}
		r, err := drip.Solve(context.Background(), s, settings(), drip.Options{})
		if err != nil || len(r.Warnings) != want {
			t.Errorf("n = %g: %q, %v", exponent, r.Warnings, err)
		}
	}
}
