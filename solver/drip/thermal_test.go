package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// heavy is a root over mantle of numbers that expand with heat in a geotherm without
// sources, top and base temperatures in K; diffusivity in 3/3.3 mm²/s. Invented. Its heat
// capacity is so large that the adiabat is left out.
func heavy(top, base, diffusivity float64, below column.Boundary) *column.Column {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.EquationOfState{Reference: rho, Expansivity: 3e-5, ReferenceTemperature: 273.15},
			Viscosity:    column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1},
			Conductivity: column.Conductivity{Reference: 3e6 * diffusivity}, HeatCapacity: 1e9}
	}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free, Temperature: top},
		Layers: []column.Layer{
			{Name: "crust", Thickness: 35e3, Rock: rock(2850, 1e22)},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(3450, 2e20)},
			{Name: "mantle", Thickness: 60e3, Rock: rock(3330, 5e19)},
		},
		Base: column.Base{Boundary: below, HasTemperature: true, Temperature: base, Rock: rock(3330, 2e19)}}
}

func warmSolve(t *testing.T, c *column.Column, thermal string) *Result {
	t.Helper()
	s, err := state.New(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	set := common()
	set.Thermal = thermal
	r, err := Solve(ctx, s, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// T' that does not diffuse is frozen, and one that diffuses at once is none: the geotherm
// has no sources, so that it does not hang on conductivity.
func TestWarmLimits(t *testing.T) {
	for _, below := range []column.Boundary{column.HalfSpace, column.Inviscid, column.FreeSlip} {
		none, frozen := warmSolve(t, heavy(300, 1600, 1, below), "none"), warmSolve(t, heavy(300, 1600, 1, below), "frozen")
		slow, mid, fast := warmSolve(t, heavy(300, 1600, 1e-7, below), "diffusive"), warmSolve(t, heavy(300, 1600, 1, below), "diffusive"), warmSolve(t, heavy(300, 1600, 1e7, below), "diffusive")
		t.Logf("base %v: none %.6g, frozen %.6g; diffusivity × 1e-7 %.6g, × 1 %.6g, × 1e7 %.6g Myr at %.4g km", below, none.Time/myr, frozen.Time/myr, slow.Time/myr, mid.Time/myr, fast.Time/myr, mid.Wavelength/1e3)
		if off := slow.Time/frozen.Time - 1; math.Abs(off) > 1e-4 {
			t.Errorf("base %v: without diffusion off by %.2g of frozen", below, off)
		}
		if off := fast.Time/none.Time - 1; math.Abs(off) > 1e-4 {
			t.Errorf("base %v: at once off by %.2g of none", below, off)
		}
		if !(frozen.Time < mid.Time && mid.Time < none.Time) { // hot below: unstable
			t.Errorf("base %v: frozen %g, diffusive %g, none %g Myr", below, frozen.Time/myr, mid.Time/myr, none.Time/myr)
		}
		if mid.Thermal == nil || !mid.Thermal.Included || mid.Thermal.With != mid.Time || math.Abs(mid.Thermal.Without/none.Time-1) > 1e-9 {
			t.Errorf("base %v: %+v beside %g", below, mid.Thermal, none.Time)
		}
		if !(mid.TimeLow < mid.Time && mid.Time < mid.TimeHigh) {
			t.Errorf("base %v: band %g to %g about %g", below, mid.TimeLow, mid.TimeHigh, mid.Time)
		}
		last := len(mid.History.Base) - 1
		if a := mid.History.Base[last]; math.Abs(a/12e3-1) > 1e-6 {
			t.Errorf("base %v: %g m at the drip, want the root's thickness", below, a)
		}
	}
}

// A geotherm that falls with depth is stable, and slows the drip.
func TestWarmStable(t *testing.T) {
	none, stable := warmSolve(t, heavy(1000, 800, 1, column.HalfSpace), "none"), warmSolve(t, heavy(1000, 800, 1, column.HalfSpace), "diffusive")
	t.Logf("%.5g without, %.5g Myr with", none.Time/myr, stable.Time/myr)
	if !(stable.Time > 1.001*none.Time) {
		t.Errorf("%g without, %g Myr with a stable geotherm", none.Time/myr, stable.Time/myr)
	}
}

// timeAt is the drip time of one wavelength, s.
func timeAt(t *testing.T, c *column.Column, thermal string, wavelength float64) float64 {
	t.Helper()
	s, err := state.New(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	set := common()
	set.Thermal = thermal
	time, err := TimeAt(ctx, s, set, wavelength)
	if err != nil {
		t.Fatal(err)
	}
	return time
}

// Frozen T' in a linear geotherm is a composition that grades: the same column with its
// densities typed at each layer's top and base, and no temperature.
func TestWarmTyped(t *testing.T) {
	c := heavy(300, 1600, 1, column.Inviscid)
	hot := timeAt(t, c, "frozen", 90e3)
	typed := *c
	typed.Layers = nil
	typed.Base.HasTemperature, typed.Base.Temperature, typed.Surface.Temperature = false, 0, 0
	at := func(rho, z float64) float64 { return rho * (1 - 3e-5*(300+1300*z/107e3-273.15)) }
	var z float64
	for _, l := range c.Layers {
		rho := l.Density.(column.EquationOfState).Reference
		l.Density = column.Linear{Top: at(rho, z), Bottom: at(rho, z+l.Thickness)}
		z += l.Thickness
		typed.Layers = append(typed.Layers, l)
	}
	typed.Base.Density = column.Uniform(at(3330, z))
	cold := timeAt(t, &typed, "none", 90e3)
	if off := hot/cold - 1; math.Abs(off) > 1e-6 {
		t.Errorf("frozen %.8g, typed %.8g Myr: off by %.2g", hot/myr, cold/myr, off)
	}
}

// In the long run the undulation followed grows at the leading rate of package growth.
func TestWarmRate(t *testing.T) {
	for _, below := range []column.Boundary{column.HalfSpace, column.Inviscid, column.Rigid} {
		s, err := state.New(heavy(300, 1600, 1, below), 0)
		if err != nil {
			t.Fatal(err)
		}
		set := common()
		set.Thermal = "diffusive"
		p, err := newProblem(s, set, 1)
		if err != nil {
			t.Fatal(err)
		}
		solver, err := growth.NewSolver(Strained(s, Background{}, "diffusive"), 0)
		if err != nil {
			t.Fatal(err)
		}
		for _, wavelength := range []float64{60e3, 120e3} {
			q, err := newWarm(p, s, 20*myr)
			if err != nil {
				t.Fatal(err)
			}
			u, err := q.follow(wavelength)
			if err != nil {
				t.Fatal(err)
			}
			want, err := solver.Rate(wavelength)
			if err != nil {
				t.Fatal(err)
			}
			from, to := 200/want.Growth, 210/want.Growth
			got := math.Log(u.Base(to)/u.Base(from)) / (to - from)
			if off := got/want.Growth - 1; math.Abs(off) > 1e-5 {
				t.Errorf("base %v, %g m: %g, want %g 1/s: off by %.2g", below, wavelength, got, want.Growth, off)
			}
		}
	}
}
