package race_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/race"
	"keelfall/solver/state"
)

// arcReference stands so high that the columns beside it are dry.
func arcReference() *race.Reference {
	return &race.Reference{Elevation: 2000, Layers: []race.ReferenceLayer{{Thickness: 35e3, Density: 2800}}}
}

func floats(t *testing.T, p *race.Problem) *race.Floats {
	t.Helper()
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	f, err := race.Isostasy(p, s)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestIsostasy: the arc of the other tests by hand (derived): E = Σh(1 − ρ/ρ_a) less that
// of the reference; the root moves the surface by −12 km (1 − 3450/3270).
func TestIsostasy(t *testing.T) {
	p := problem(0)
	p.Reference = arcReference()
	f := floats(t, p)
	const a = 3270.0
	bare := 2000 + 40e3*(1-2850/a) - 35e3*(1-2800/a)
	if want := bare + 12e3*(1-3450/a); !f.HasRoot || math.Abs(f.Elevation/want-1) > 1e-11 {
		t.Errorf("elevation %.12g m, want %.12g", f.Elevation, want)
	}
	if math.Abs(f.WithoutRoot.Elevation/bare-1) > 1e-11 {
		t.Errorf("without the root %.12g m, want %.12g", f.WithoutRoot.Elevation, bare)
	}
	if f.WithoutRoot.Force <= f.Force {
		t.Errorf("a root that pulls lowers the force: %g with it, %g without", f.Force, f.WithoutRoot.Force)
	}
	// The asthenosphere as given: the same numbers in place of the base's.
	p.Reference.Asthenosphere = 3300
	if got, want := floats(t, p).WithoutRoot.Elevation, 40e3*(1-2850/3300.0)-35e3*(1-2800/3300.0)+2000; math.Abs(got/want-1) > 1e-11 {
		t.Errorf("on 3300 kg/m³ %.12g m, want %.12g", got, want)
	}
	p.Reference = nil
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := race.Isostasy(p, s); !errors.Is(err, race.ErrInput) {
		t.Errorf("no reference: %v", err)
	}
}

// squeezed is a column of one rock that is squeezed and warms, to a depth.
func squeezed(depth float64) *race.Problem {
	r := column.Rock{Density: column.EquationOfState{Reference: 3350, Expansivity: 3e-5, Compressibility: 8e-12, ReferenceTemperature: 293.15}, HeatCapacity: 1000,
		Conductivity: column.Conductivity{Reference: 3}, Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1, Factor: 1}}
	p := problem(0)
	p.Zones, p.Reference = nil, arcReference()
	p.Reference.Elevation = 9000 // water would not be in the pressures of the column's own rock
	p.Column.Surface.Temperature = 283.15
	p.Column.Layers = []column.Layer{{Name: "rock", Thickness: depth, Rock: r}}
	p.Column.Base = column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 1600, Rock: r}
	return p
}

// TestIsostasyLevel: a column drawn deeper into its own asthenosphere, along its adiabat,
// stands as high and pushes as hard.
func TestIsostasyLevel(t *testing.T) {
	p := squeezed(100e3)
	f := floats(t, p)
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	q := squeezed(180e3)
	for i := range 101 {
		z := 1e3 * float64(i)
		T, _ := s.TemperatureAt(0, z)
		q.Column.Geotherm = append(q.Column.Geotherm, column.Point{Depth: z, Temperature: T})
	}
	T, P := s.Base.T, s.Base.P
	rock := &q.Column.Base.Rock
	for z := 100e3; z < 180e3; {
		for range 100 {
			mid := P + 5*rock.Density.At(T, P, 0)*p.Column.Gravity
			T += 10 * rock.Density.At(T, P, 0) * p.Column.Gravity * rock.Adiabat(T, mid, 0)
			P += 10 * rock.Density.At(T, mid, 0) * p.Column.Gravity
		}
		z += 1e3
		q.Column.Geotherm = append(q.Column.Geotherm, column.Point{Depth: z, Temperature: T})
	}
	q.Column.Base.Temperature = T
	g := floats(t, q)
	// The geotherm of the deeper one is straight between its points: 1e-6 of what expands.
	if math.Abs(g.Elevation-f.Elevation) > 0.1 || math.Abs(g.Force/f.Force-1) > 1e-4 || g.Level < f.Level+70e3 {
		t.Errorf("elevation %.9g m, force %.9g N/m, level %.6g m; drawn deeper %.9g, %.9g, %.6g", f.Elevation, f.Force, f.Level, g.Elevation, g.Force, g.Level)
	}
}

// TestIsostasyThrough: erosion lowers the surface by Δh (1 − ρ/ρ_a), what goes from a
// root's base by −Δh (1 − ρ/ρ_a), and the history begins at the state's own elevation.
func TestIsostasyThrough(t *testing.T) {
	p := problem(0)
	p.Reference = arcReference()
	p.Zones = nil
	c := &p.Column
	c.Surface.Temperature, c.Base.HasTemperature, c.Base.Temperature = 283.15, true, 1500
	for i := range c.Layers {
		c.Layers[i].HeatCapacity, c.Layers[i].Conductivity.Reference = 1000, 2.5
	}
	c.Base.HeatCapacity, c.Base.Conductivity.Reference = 1000, 2.5
	p.Events = []heat.Event{{Verb: "erode", From: 1 * myr, To: 3 * myr, Rate: 1e-3 / year}, {Verb: "remove", From: 5 * myr, Layer: "root", Share: 0.5}}
	s, f, weights := through(t, p, 6*myr)
	e, err := race.IsostasyThrough(p, s, weights)
	if err != nil {
		t.Fatal(err)
	}
	last := e[len(e)-1]
	want := f.Elevation - 2e3*(1-2850/3270.0) - 6e3*(1-3450/3270.0)
	if math.Abs(e[0].Elevation-f.Elevation) > 1e-6 || math.Abs(e[0].Force/f.Force-1) > 1e-9 || math.Abs(last.Elevation-want) > 1e-5 {
		t.Errorf("elevation from %.9g to %.9g m, want %.9g to %.9g; force %.9g, want %.9g", e[0].Elevation, last.Elevation, f.Elevation, want, e[0].Force, f.Force)
	}

	// Thinned to half, the crust lies under water: d = (E_ref − E)/(1 − ρ_w/ρ_a).
	p.Events = []heat.Event{{Verb: "stretch", From: 0, To: 2 * myr, Rate: math.Ln2 / (2 * myr)}}
	s, _, weights = through(t, p, 2*myr)
	if e, err = race.IsostasyThrough(p, s, weights); err != nil {
		t.Fatal(err)
	}
	want = (2000 + 20e3*(1-2850/3270.0) + 6e3*(1-3450/3270.0) - 35e3*(1-2800/3270.0)) / (1 - column.SeaWater/3270)
	if got := e[len(e)-1]; want > 0 || math.Abs(got.Elevation/want-1) > 1e-5 || got.Force > 0 {
		t.Errorf("stretched: %.9g m and %g N/m, want %.9g m", got.Elevation, got.Force, want)
	}
}

// through runs p's history.
func through(t *testing.T, p *race.Problem, until float64) (*state.State, *race.Floats, []column.Weight) {
	t.Helper()
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	plan, err := race.HeatPlan(p)
	if err != nil {
		t.Fatal(err)
	}
	h, err := heat.Run(context.Background(), plan, until, nil)
	if err != nil {
		t.Fatal(err)
	}
	if len(h.Weight) != len(h.Time) {
		t.Fatalf("%d weights at %d times", len(h.Weight), len(h.Time))
	}
	return s, floats(t, p), h.Weight
}
