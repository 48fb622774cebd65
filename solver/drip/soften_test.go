package drip_test

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

func creepRock(t testing.TB, density, heat, decay float64, laws ...string) column.Rock {
	t.Helper()
	var c rheology.Creep
	for _, name := range laws {
		l, err := rheology.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		c.Laws = append(c.Laws, l)
	}
	return column.Rock{
		Density:        column.EquationOfState{Reference: density, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15},
		Viscosity:      column.Viscosity{Creep: &c, Exponent: 1, Factor: 1},
		Conductivity:   column.Conductivity{Reference: 3},
		HeatProduction: column.HeatProduction{Top: heat, DecayLength: decay},
		HeatCapacity:   1000, GrainSize: 1e-3, Water: 3e8, WaterMeasure: rheology.WaterFugacity,
	}
}

// creeping is an invented arc of five layers of creep laws over wet olivine.
func creeping(t testing.TB, rate float64) *state.State {
	t.Helper()
	const wetOlivine = "wet olivine dislocation Hirth 2003"
	s, err := state.New(&column.Column{
		Gravity: 9.81,
		Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Layers: []column.Layer{
			{Name: "upper crust", Thickness: 15e3, Rock: creepRock(t, 2700, 1.5e-6, 10e3, "wet quartzite Hirth 2001")},
			{Name: "middle crust", Thickness: 15e3, Rock: creepRock(t, 2800, 0.5e-6, 0, "wet anorthite dislocation Rybacki 2006", "wet anorthite diffusion Rybacki 2006")},
			{Name: "lower crust", Thickness: 10e3, Rock: creepRock(t, 2950, 0.2e-6, 0, "mafic granulite Wilks 1990")},
			{Name: "root", Thickness: 12e3, Root: true, Rock: creepRock(t, 3500, 0.1e-6, 0, "dry eclogite Zhang 2007")},
			{Name: "mantle", Thickness: 25e3, Rock: creepRock(t, 3350, 0, 0, wetOlivine, "wet olivine diffusion Hirth 2003")},
		},
		Base: column.Base{Boundary: column.HalfSpace, Temperature: 1623.15, HasTemperature: true,
			Rock: creepRock(t, 3340, 0, 0, wetOlivine)},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24},
	}, rate)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// One interface over fluid without viscosity obeys dξ/dt = c ξ^n: t = (a^(1−n) −
// b^(1−n))/((n − 1)c), and ξ^(1−n) falls linearly to the time of blow-up (derived).
func TestBlowUp(t *testing.T) {
	const k, a, b = 2 / 10e3, 500.0, 10e3
	for _, n := range []float64{1, 2, 3, 4} {
		f := newSoft(t, hanging(t, n), drip.Background{})
		out := make([]float64, 2)
		if err := f.Rate(k, []float64{0, a}, out); err != nil {
			t.Fatal(err)
		}
		c := out[1] / math.Pow(a, n)
		after := func(x float64) float64 {
			if n == 1 {
				return math.Log(x/a) / c
			}
			return (math.Pow(a, 1-n) - math.Pow(x, 1-n)) / ((n - 1) * c)
		}
		d, err := f.Time(k, a, b, drip.Horizon)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(d.Time/after(b)-1) > 1e-4 || math.Abs(d.Exponent-n) > 1e-6 {
			t.Errorf("n = %g: %.8g Myr, want %.8g; exponent %g", n, d.Time/myr, after(b)/myr, d.Exponent)
		}
		for i := 1; i < len(d.At); i++ {
			if got := d.At[i] / after(d.Base[i]); math.Abs(got-1) > 1e-4 {
				t.Errorf("n = %g: ξ = %g m after %g of its time", n, d.Base[i], got)
			}
		}
		if want := d.Time * drip.Corrections(n, 2, 0).Centre; math.Abs(d.Best/want-1) > 1e-6 {
			t.Errorf("n = %g: best estimate %g s, want %g", n, d.Best, want)
		}
	}
}

// In Newtonian rock with a free surface the descent is the exact solution's.
func TestDescentOfNewtonianRock(t *testing.T) {
	s, err := state.New(arc(3450), 0)
	if err != nil {
		t.Fatal(err)
	}
	g, err := growth.NewSolver(drip.Model(s), 0)
	if err != nil {
		t.Fatal(err)
	}
	f := newSoft(t, s, drip.Background{})
	for _, wavelength := range []float64{10e3, 60e3, 400e3} {
		sys, err := g.System(wavelength)
		if err != nil {
			t.Fatal(err)
		}
		exact, err := drip.NewFrozen(sys, 2)
		if err != nil {
			t.Fatal(err)
		}
		d, err := f.Time(2*math.Pi/wavelength, 500, 12e3, drip.Horizon)
		if want := exact.Time(24, drip.Horizon); err != nil || math.Abs(d.Time/want-1) > 3e-5 {
			t.Errorf("%g m: %.8g s, want %.8g (%v)", wavelength, d.Time, want, err)
		}
	}
}

// What is dropped takes longer than it was given; nothing else changes; a buoyant root
// never descends.
func TestDescents(t *testing.T) {
	s := creeping(t, 1e-15)
	all := func(margin float64) []drip.Descent {
		ds, err := newSoft(t, s, drip.Background{}).Descents(context.Background(), spread(10e3, 400e3, 12), 500, 12e3, drip.Horizon, margin)
		if err != nil {
			t.Fatal(err)
		}
		return ds
	}
	full, short := all(math.Inf(1)), all(2)
	best, dropped := math.Inf(1), 0
	for _, d := range full {
		best = math.Min(best, d.Time)
	}
	for i, d := range short {
		if d.Dropped {
			dropped++
			if full[i].Time < 2*best {
				t.Errorf("%g m was dropped; it takes %g, the best %g", d.Wavelength, full[i].Time, best)
			}
		} else if math.Abs(d.Time/full[i].Time-1) > 1e-4 {
			t.Errorf("%g m: %g, without dropping %g", d.Wavelength, d.Time, full[i].Time)
		}
	}
	if dropped == 0 {
		t.Error("nothing was dropped")
	}
	buoyant, err := state.New(arc(3200), 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	if d, err := newSoft(t, buoyant, drip.Background{}).Time(1e-4, 500, 12e3, drip.Horizon); err != nil || !math.IsInf(d.Time, 1) || !math.IsInf(d.Best, 1) {
		t.Errorf("buoyant root: %g s, %v", d.Time, err)
	}
}

func BenchmarkSoft(b *testing.B) {
	s := creeping(b, 1e-15)
	for b.Loop() {
		f, err := drip.NewSoft(s, drip.Background{})
		if err != nil {
			b.Fatal(err)
		}
		if _, err := f.Descents(context.Background(), spread(10e3, 640e3, 64), 500, 12e3, drip.Horizon, 2); err != nil {
			b.Fatal(err)
		}
	}
}

// spread returns n wavelengths, equal steps of ln λ.
func spread(from, to float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = from * math.Pow(to/from, float64(i)/float64(n-1))
	}
	return out
}
