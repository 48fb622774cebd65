package heat_test

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

// twoLayers is a column of one temperature, in which only rock moves.
func twoLayers() *column.Column {
	r := column.Rock{Density: column.Uniform(3000), Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000, Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 800}, Base: column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 800, Rock: r},
		Layers: []column.Layer{{Name: "a", Thickness: 30e3, Rock: r}, {Name: "b", Thickness: 20e3, Root: true, Rock: r}}}
}

// TestStretch: the column stretches at own × the rate in force + extra, through events too;
// what a flux takes is booked per area of the start (derived: dh/dt = −e h − c).
func TestStretch(t *testing.T) {
	const E, extra, c = 2e-15, 1e-16, 1e-11
	ev, err := heat.Begin(heat.Plan{Column: twoLayers(), Events: []heat.Event{{Verb: "stretch", From: 2 * myr, To: 6 * myr, Rate: E}}})
	if err != nil {
		t.Fatal(err)
	}
	if err := ev.Stretch(0.25, extra); err != nil {
		t.Fatal(err)
	}
	if err := ev.Flux(heat.Flux{Layer: "b", Rate: -c}); err != nil {
		t.Fatal(err)
	}
	var spread, h float64 = 0, 20e3
	for _, s := range []struct{ to, arc float64 }{{2, 0}, {6, E}, {10, 0}} {
		dt := s.to*myr - ev.Time()
		e := 0.25*s.arc + extra
		if got := ev.ExtensionRate(); ev.Time() > 0 && math.Abs(got/e-1) > 1e-12 {
			t.Errorf("stretches at %g, want %g", got, e)
		}
		if err := ev.Advance(context.Background(), s.to*myr); err != nil {
			t.Fatal(err)
		}
		spread += e * dt
		h = (h+c/e)*math.Exp(-e*dt) - c/e
	}
	b, ok := ev.Layer("b")
	if !ok || math.Abs(b.Thickness/h-1) > 1e-6 || math.Abs(ev.Spread()/spread-1) > 1e-12 || ev.ArcRate() != 0 {
		t.Errorf("b is %.9g m thick, want %.9g; spread %g, want %g; arc rate %g", b.Thickness, h, ev.Spread(), spread, ev.ArcRate())
	}
	if left := b.Mass*math.Exp(ev.Spread()) - ev.Flown("b"); math.Abs(left/(20e3*3000)-1) > 1e-12 {
		t.Errorf("what is left and what was taken make %.15g kg/m², not %g", left, 20e3*3000.0)
	}
	if a, _ := ev.Layer("a"); math.Abs(b.Top/a.Thickness-1) > 1e-12 || math.Abs(b.BaseP/(9.81*(a.Mass+b.Mass))-1) > 1e-12 || math.Abs(b.BaseT/800-1) > 1e-9 {
		t.Errorf("%+v below %+v", b, a)
	}
	if d, m := ev.BaseMass("b", 3e6); math.Abs(d/1000-1) > 1e-9 || math.Abs(m/3e6-1) > 1e-12 {
		t.Errorf("the lowest 3e6 kg/m² are %g m, %g kg/m²", d, m)
	}
	if ev.Stretch(math.NaN(), 0) == nil {
		t.Error("NaN accepted")
	}
}

// TestHeight: heat spread evenly over a height warms all of it alike, before conduction
// tells: q t/(ρ c height).
func TestHeight(t *testing.T) {
	c := twoLayers()
	for i := range c.Layers {
		c.Layers[i].Conductivity.Reference = 1e-3
	}
	ev, err := heat.Begin(heat.Plan{Column: c})
	if err != nil {
		t.Fatal(err)
	}
	if err := ev.Heat(heat.Source{BaseOf: "a", Power: 0.1, Height: 20e3}); err != nil {
		t.Fatal(err)
	}
	if err := ev.Advance(context.Background(), 5*myr); err != nil {
		t.Fatal(err)
	}
	_, p, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	want := 800 + 0.1*5*myr/(3000*1000*20e3)
	for i, z := range []float64{22e3, 29e3, 31e3, 38e3, 15e3, 45e3} {
		T, _, _ := p.Layers[int(z/30e3)].At(z)
		if i > 3 {
			want = 800
		}
		if math.Abs(T-want) > 1e-3*(want-800)+1e-6 {
			t.Errorf("%g K at %g km, want %g", T, z/1e3, want)
		}
	}
	if e := ev.Energy(); math.Abs(e.Given/(0.1*5*myr)-1) > 1e-12 {
		t.Errorf("%g J/m² given", e.Given)
	}
	if ev.Heat(heat.Source{Power: 1, Height: -1}) == nil {
		t.Error("a negative height accepted")
	}
}
