package heat_test

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

// granite is a rock of κ = 1e-6 m²/s.
func granite(name string, thickness float64) column.Layer {
	l := layer(name, thickness, constant(3), column.HeatProduction{})
	l.HeatCapacity = 1000
	return l
}

// isothermal is a geotherm of one temperature, but for the base's own.
func isothermal(c *column.Column, T float64) {
	c.Geotherm = []column.Point{{Depth: 0, Temperature: T}, {Depth: c.Depth(), Temperature: T}}
}

func begin(t testing.TB, p heat.Plan) *heat.Evolution {
	t.Helper()
	ev, err := heat.Begin(p)
	if err != nil {
		t.Fatal(err)
	}
	return ev
}

func advance(t testing.TB, ev *heat.Evolution, to float64) {
	t.Helper()
	if err := ev.Advance(context.Background(), to); err != nil {
		t.Fatal(err)
	}
}

func balanced(t testing.TB, ev *heat.Evolution) {
	t.Helper()
	if e := ev.Energy(); !(math.Abs(e.Missing) <= 1e-10*e.Moved) {
		t.Errorf("energy: %g J/m² missing of %g moved: %+v", e.Missing, e.Moved, e)
	}
	if m := ev.Mass(); !(math.Abs(m.Missing) <= 1e-10*max(m.Moved, 1e5)) {
		t.Errorf("mass: %g kg/m² missing of %g moved: %+v", m.Missing, m.Moved, m)
	}
}

// TestCooling: T = T_s + ΔT erf(z/√(4κt)), Carslaw & Jaeger 1959.
func TestCooling(t *testing.T) {
	c := cooled(273.15, 1573.15, granite("a", 400e3))
	isothermal(c, 1573.15)
	ev := begin(t, heat.Plan{Column: c, Tolerance: 0.1})
	const at = 20 * myr
	advance(t, ev, at)
	_, p, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	var worst float64
	for z := 0.0; z < 300e3; z += 777 {
		T, _, _ := p.Layers[0].At(z)
		worst = max(worst, math.Abs(T-(273.15+1300*math.Erf(z/math.Sqrt(4e-6*at)))))
	}
	q := 3 * 1300 / math.Sqrt(math.Pi*1e-6*at)
	if worst > 0.3 || !close(p.SurfaceFlow, q, 1e-3) {
		t.Errorf("worst %g K; flow %g, want %g", worst, p.SurfaceFlow, q)
	}
	balanced(t, ev)
}

// speedPlan is a column of 300 points with five sheets.
func speedPlan() heat.Plan {
	k := column.Conductivity{Reference: 3, PerKelvin: 1e-3, PerPascal: 1e-11, At: 293.15}
	rock := func(name string, h, rho, H float64) column.Layer {
		l := layer(name, h, k, column.HeatProduction{Top: H})
		l.Density = column.EquationOfState{Reference: rho, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
		l.HeatCapacity = 1000
		return l
	}
	c := cooled(283.15, 1573.15, rock("upper", 20e3, 2750, 1.2e-6), rock("lower", 25e3, 2900, 0.3e-6), rock("root", 15e3, 3400, 0.1e-6), rock("mantle", 90e3, 3300, 0.02e-6))
	c.Layers[2].Root = true
	c.Base.Boundary, c.Base.Rock = column.HalfSpace, c.Layers[3].Rock
	return heat.Plan{Column: c, Events: []heat.Event{{Verb: "intrude", Name: "sheet", Layer: "upper", From: 1 * myr, Thickness: 1500, Temperature: 1463.15, Times: 5, Every: 0.5 * myr, Rock: c.Layers[1].Rock}}}
}

func BenchmarkSheets(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		ev := begin(b, speedPlan())
		advance(b, ev, 100*myr)
	}
}

// TestSheets: Run's lists belong together, its snapshots are at the times asked, the
// column is thicker by the sheets, and most of the heat they brought leaves in 97 Myr.
func TestSheets(t *testing.T) {
	p := speedPlan()
	p.Markers = []heat.Marker{{Name: "m", BaseOf: "upper"}}
	asked := []float64{100 * myr, 0, 3 * myr}
	h, err := heat.Run(context.Background(), p, 100*myr, asked)
	if err != nil {
		t.Fatal(err)
	}
	n := len(h.Time)
	for i := range h.Time {
		if i > 0 && !(h.Time[i] > h.Time[i-1]) {
			t.Fatalf("time %d is %g s after %g s", i, h.Time[i], h.Time[i-1])
		}
	}
	if len(h.SurfaceFlow) != n || len(h.RootBase) != n || len(h.RootThickness) != n || len(h.Depth) != n || len(h.MeltFraction) != n || len(h.Reacted) != n || h.Time[0] != 0 || h.Time[n-1] != 100*myr {
		t.Errorf("%d times from %g to %g s; other lists differ", n, h.Time[0], h.Time[n-1])
	}
	if len(h.Snapshots) != 3 || h.Snapshots[0].Time != 0 || h.Snapshots[1].Time != 3*myr || h.Snapshots[2].Time != 100*myr {
		t.Fatalf("%d snapshots", len(h.Snapshots))
	}
	if a, b := len(h.Snapshots[0].Column.Layers), len(h.Snapshots[1].Column.Layers); a != 4 || b != 9 {
		t.Errorf("%d layers, then %d", a, b)
	}
	// The sheets come in below the marker, which heat moves by less than 1 %.
	path := h.Paths[0]
	if d := path.Depth[len(path.Depth)-1]; math.Abs(d/path.Depth[0]-1) > 0.01 {
		t.Errorf("the base of the layer above the sheets went from %g to %g m", path.Depth[0], d)
	}
	if d := h.Depth[n-1] - h.Depth[0]; math.Abs(d/7.5e3-1) > 0.1 {
		t.Errorf("the column is thicker by %g m", d)
	}
	if !(path.Peak > path.T[0]+300) || !(math.Abs(h.RootThickness[n-1]/15e3-1) < 0.02) {
		t.Errorf("hottest %g K from %g K; root %g m", path.Peak, path.T[0], h.RootThickness[n-1])
	}
	still, err := heat.Steady(h.Snapshots[2].Column)
	if err != nil {
		t.Fatal(err)
	}
	// All five cool with τ = L²/(π²κ) = 80 Myr: exp(−97/80) of the excess is left at most.
	first, last := h.Snapshots[1].Profile.SurfaceFlow-still.SurfaceFlow, h.SurfaceFlow[n-1]-still.SurfaceFlow
	if !(first > 0 && math.Abs(last) < 0.3*first) {
		t.Errorf("surface flow above the steady one: %g at 3 Myr, %g at 100 Myr", first, last)
	}
	if !(math.Abs(h.Energy.Missing) <= 1e-10*h.Energy.Moved) {
		t.Errorf("energy %+v", h.Energy)
	}
}
