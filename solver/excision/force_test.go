package excision_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
)

// hot is an arc of four layers that creep by catalogued laws.
func hot(t testing.TB, basal float64) *column.Column {
	t.Helper()
	friction := &rheology.Friction{Cohesion: 20e6, Angle: math.Atan(0.6), PoreFluid: 0.4}
	rock := func(density, k, production float64, fugacity float64, law string) column.Rock {
		l, err := rheology.Find(law)
		if err != nil {
			t.Fatal(err)
		}
		r := column.Rock{Density: column.EquationOfState{Reference: density, Expansivity: 3e-5, ReferenceTemperature: 293}, Conductivity: column.Conductivity{Reference: k},
			HeatCapacity: 1000, HeatProduction: column.HeatProduction{Top: production}, Viscosity: column.Viscosity{Creep: &rheology.Creep{Laws: []rheology.Law{l}}}, Friction: friction, GrainSize: 3e-3}
		if fugacity > 0 {
			r.Water, r.WaterMeasure = fugacity, rheology.WaterFugacity
		}
		return r
	}
	mantle := rock(3330, 3, 0, 300e6, "wet olivine dislocation Hirth 2003")
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283}, Limits: rheology.Limits{Highest: 1e26},
		Base: column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: basal, Rock: mantle},
		Layers: []column.Layer{
			{Name: "crust", Thickness: 25e3, Rock: rock(2750, 2.5, 1e-6, 100e6, "wet quartzite Hirth 2001")},
			{Name: "granulite", Thickness: 12e3, Rock: rock(3000, 2.5, 0.2e-6, 0, "mafic granulite Wilks 1990")},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(3350, 3, 0.05e-6, 0, "mafic granulite Wilks 1990")},
			{Name: "mantle", Thickness: 50e3, Rock: mantle},
		}}
}

// forced is that arc with two weak zones driven by a force from outside.
func forced(t testing.TB, basal, force float64) excision.Plan {
	weak := &rheology.Friction{Cohesion: 5e6, Angle: math.Atan(0.3), PoreFluid: 0.7}
	return excision.Plan{Heat: heat.Plan{Column: hot(t, basal)}, ArcWidth: 150e3, Zones: []excision.Zone{
		{Name: "root zone", Dip: math.Pi / 6, Cuts: []string{"root"}, From: 2 * myr, To: 50 * myr, Drive: excision.ForceBalance, FarField: force, Width: 1e3, Friction: weak, StrengthFactor: 0.5},
		{Name: "upper zone", Dip: math.Pi / 4, Cuts: []string{"granulite"}, From: 5 * myr, To: 50 * myr, Drive: excision.ForceBalance, FarField: force, Width: 500, Friction: weak, StrengthFactor: 0.5},
	}}
}

func strength(t *testing.T, ev *excision.Evolution, zone string, s float64) float64 {
	t.Helper()
	F, err := ev.StrengthOf(zone, s)
	if err != nil {
		t.Fatal(err)
	}
	return F
}

// even is a column of one temperature whose two layers have viscosities of given exponents.
func even(n1, n2 float64) *column.Column {
	rock := func(eta, n float64) column.Rock {
		return column.Rock{Density: column.Uniform(2900), Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000,
			Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: n}}
	}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 900},
		Base:   column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 900, Rock: rock(1e19, 1)},
		Layers: []column.Layer{{Name: "root", Thickness: 30e3, Root: true, Rock: rock(3e20, n1)}, {Name: "below", Thickness: 50e3, Rock: rock(1e21, n2)}}}
}

// TestCreepAlone: without friction and at one temperature F = (2/sin 2θ) 2η ε h + 4η_b e_b
// h_b, ε = s/2b, e_b = s cos θ/B, η = η₀ (ε/ε₀)^(1/n − 1) (derived); s that bears the force is
// the one that moves the zone, and the plate stretches at the e that bears it too.
func TestCreepAlone(t *testing.T) {
	const dip, b, B, ref, factor = 0.6, 800.0, 120e3, 1e-15, 0.7
	for _, n := range [][2]float64{{1, 1}, {3, 1}, {3.5, 4}} {
		z := excision.Zone{Name: "z", Dip: dip, LayeringDip: dip, Cuts: []string{"root"}, To: 30 * myr, Drive: excision.ForceBalance, FarField: 4e11, Width: b, StrengthFactor: factor}
		ev := begin(t, excision.Plan{Heat: heat.Plan{Column: even(n[0], n[1])}, Zones: []excision.Zone{z}, ArcWidth: B, Reference: ref})
		stress := func(eta, n, e float64) float64 { return 2 * eta * e * math.Pow(e/ref, 1/n-1) }
		want := func(s float64) float64 {
			return factor*2/math.Sin(2*dip)*stress(3e20, n[0], s/(2*b))*30e3 + 2*stress(1e21, n[1], s*math.Cos(dip)/B)*50e3
		}
		for _, s := range []float64{1e-25, 1e-12, 1e-9} {
			if got := strength(t, ev, "z", s); !near(got, want(s), 1e-12) {
				t.Errorf("n %v: %.15g N/m at %g m/s, want %.15g", n, got, s, want(s))
			}
		}
		if _, s := excision.SlipOf(ev, 0); !near(want(s), 4e11, 1e-10) {
			t.Errorf("n %v: it slips at %g m/s, which bears %.12g N/m", n, s, want(s))
		}
		e := ev.ExtensionRate()
		if got := 2*stress(3e20, n[0], e)*30e3 + 2*stress(1e21, n[1], e)*50e3; !near(got, 4e11, 1e-10) {
			t.Errorf("n %v: the plate stretches at %g 1/s, which bears %.12g N/m", n, e, got)
		}
	}
}

// TestStrengthRises: F rises with s, whatever is weaker where, and its slope with ln s at
// most as fast as s itself.
func TestStrengthRises(t *testing.T) {
	ev := begin(t, forced(t, 1500, 2e12))
	for _, zone := range []string{"root zone", "upper zone"} {
		before := 0.0
		for x := -30.0; x < -7; x += 0.25 {
			F := strength(t, ev, zone, math.Pow(10, x))
			if !(F > before) || before > 0 && F > before*math.Pow(10, 0.25)*(1+1e-9) {
				t.Fatalf("%s: %g N/m at 1e%g m/s after %g", zone, F, x, before)
			}
			before = F
		}
		// of order 1e12 N/m to 1e13 N/m for a plausible lithosphere (common practice)
		if F := strength(t, ev, zone, excision.StandardSlip); F < 5e11 || F > 2e13 {
			t.Errorf("%s bears %g N/m", zone, F)
		}
	}
}

// TestPlaneSource: a zone of constant power q along the layering warms itself by
// (q/k) √(κt/π), the plane source of Carslaw & Jaeger 1959 in an infinite solid.
func TestPlaneSource(t *testing.T) {
	z := excision.Zone{Name: "z", Dip: 0.6, LayeringDip: 0.6, Cuts: []string{"root"}, To: 30 * myr, Drive: excision.ForceBalance, FarField: 6e11, Width: 20, StrengthFactor: 2e-8}
	c := even(1, 1)
	c.Layers[0].Viscosity.Top, c.Layers[0].Viscosity.Bottom = 1e25, 1e25 // the plate stays
	c.Layers[1].Viscosity.Top, c.Layers[1].Viscosity.Bottom = 1e19, 1e19 // and what flows below is soft
	ev := begin(t, excision.Plan{Heat: heat.Plan{Column: c, Tolerance: 0.02}, Zones: []excision.Zone{z}, ArcWidth: 1e8})
	_, s := excision.SlipOf(ev, 0)
	q := excision.StressOn(ev, 0) * s / math.Cos(0.6)
	for _, at := range []float64{0.05, 0.2, 0.8} {
		advance(t, ev, at*myr)
		if _, now := excision.SlipOf(ev, 0); !near(now, s, 1e-3) {
			t.Fatalf("slips at %g m/s, not %g", now, s)
		}
		_, p, err := ev.Snapshot()
		if err != nil {
			t.Fatal(err)
		}
		T, _, _ := p.Layers[0].At(p.Layers[0].Bottom)
		const k, kappa = 3.0, 3.0 / 2900 / 1000
		want := q / k * math.Sqrt(kappa*at*myr/math.Pi)
		if want < 1 || !near(T-900, want, 0.01) {
			t.Errorf("at %g Myr it has warmed by %.4f K, want %.4f", at, T-900, want)
		}
	}
}

// TestStepsOfSoftening: a zone that softens by its own heat runs away; half the steps' length
// halves the error of the time at least.
func TestStepsOfSoftening(t *testing.T) {
	p := forced(t, 1450, 6.2e12)
	p.Zones = p.Zones[:1]
	p.Zones[0].From = 0
	p.Zones[0].Friction = nil
	p.Zones[0].Width = 200
	var times []float64
	p.Heat.Tolerance = 0.01
	for _, stride := range []float64{1, 0.5, 0.1} {
		ev := begin(t, p)
		excision.SetStride(ev, stride)
		advance(t, ev, 10*myr)
		times = append(times, excision.Runaway(ev, 0)/myr)
	}
	usual, fine := times[0]/times[2]-1, times[1]/times[2]-1
	if !(times[2] > 1 && times[2] < 10) || math.Abs(usual) > 2e-3 || math.Abs(fine) > 0.5*math.Abs(usual) {
		t.Errorf("runs away at %v Myr; off by %.2g at the usual steps and %.2g at half of them", times, usual, fine)
	}
}

// TestHolds: a zone in cold rock does not slip, and says what it bears against what drives it.
func TestHolds(t *testing.T) {
	p := forced(t, 900, 1e11)
	r := follow(t, p, 10)
	for i := range r.Zones {
		if z := &r.Zones[i]; math.IsInf(z.Holds, 1) || z.Slip[len(z.Slip)-1] != 0 {
			t.Errorf("%s holds from %g s on and slips by %g m", z.Name, z.Holds, z.Slip[len(z.Slip)-1])
		}
	}
	if s := strings.Join(r.Warnings, "; "); !strings.Contains(s, "zone root zone does not slip: at 3 m in 1000 Myr it would bear") {
		t.Errorf("warnings: %s", s)
	}
}

func BenchmarkTwoForces(b *testing.B) {
	p := forced(b, 1550, 2e12)
	for b.Loop() {
		follow(b, p, 50)
	}
}
