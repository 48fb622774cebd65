package heat_test

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

// TestAdiabat: rock that hardly conducts, thickened until its pressure has doubled, goes
// along Rock.Adiabat, here integrated apart; half of it melts on the way.
func TestAdiabat(t *testing.T) {
	for _, molten := range []bool{false, true} {
		a := granite("a", 100e3)
		a.Conductivity.Reference = 1e-6
		a.Density = column.EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
		if molten { // a curve that falls with pressure is crossed on compression
			a.Melt = &column.Melt{Solidus: &column.Curve{Surface: 1800, Slope: -1e-7}, Liquidus: &column.Curve{Surface: 2300, Slope: -1e-7}, LatentHeat: 4e5}
			a.Density = column.Molten{Solid: a.Density, Melt: a.Melt}
		}
		c := cooled(1500, 1500, a)
		isothermal(c, 1500)
		ev := begin(t, heat.Plan{Column: c, Tolerance: 0.01, Markers: []heat.Marker{{Name: "m", Depth: 50e3}},
			Events: []heat.Event{{Verb: "stretch", To: myr, Rate: -math.Ln2 / myr}}})
		advance(t, ev, myr)
		p := ev.Paths()[0]
		last := len(p.T) - 1
		T, n := p.T[0], 20000
		d := (p.P[last] - p.P[0]) / float64(n)
		for i := range n {
			P := p.P[0] + d*float64(i)
			mid := T + d/2*a.Adiabat(T, P, 0)
			T += d * a.Adiabat(mid, P+d/2, 0)
		}
		if !close(p.P[last], 2*p.P[0], 1e-4) || math.Abs(p.T[last]-T) > 0.05 {
			t.Errorf("melts %v: %g K at %g of the pressure, want %g K", molten, p.T[last], p.P[last]/p.P[0], T)
		}
		balanced(t, ev)
	}
}

// TestShearHeat: 30 mW/m² released on a contact between k = 2 and 4 W/m/K, ends at 300 K:
// steady T there is 300 + Q/(k₁/h₁ + k₂/h₂), and the flows out at the ends share Q so.
func TestShearHeat(t *testing.T) {
	a, b := granite("a", 20e3), granite("b", 50e3)
	a.Conductivity.Reference, b.Conductivity.Reference = 2, 4
	c := cooled(300, 300, a, b)
	ev := begin(t, heat.Plan{Column: c})
	if err := ev.Heat(heat.Source{BaseOf: "a", Power: 0.03}); err != nil {
		t.Fatal(err)
	}
	advance(t, ev, 3000*myr)
	_, p, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	g1, g2 := 2/20e3, 4/50e3
	if !close(p.SurfaceFlow, 0.03*g1/(g1+g2), 1e-2) {
		t.Errorf("surface flow %g, want %g", p.SurfaceFlow, 0.03*g1/(g1+g2))
	}
	if T, _, _ := p.Layers[0].At(15e3); !close(T-300, 0.75*0.03/(g1+g2), 1e-2) {
		t.Errorf("%g K at three quarters of the way, want %g", T-300, 0.75*0.03/(g1+g2))
	}
	balanced(t, ev)
}

// TestReplaced: what is removed is replaced along the adiabat from the column's foot.
func TestReplaced(t *testing.T) {
	rock := granite("", 1).Rock
	rock.Density = column.EquationOfState{Reference: 3300, Expansivity: 3e-5, ReferenceTemperature: 293.15}
	a, b := granite("a", 60e3), granite("b", 40e3)
	c := cooled(280, 1600, a, b)
	c.Base.Boundary, c.Base.Rock = column.HalfSpace, rock
	ev := begin(t, heat.Plan{Column: c})
	if err := ev.Remove("b", 1); err != nil {
		t.Fatal(err)
	}
	snap, p, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	T, P, _ := p.Layers[1].At(80e3)
	_, foot, _ := p.Layers[1].At(p.Layers[1].Bottom)
	want := 1600.0
	d := (P - foot) / 1000
	for i := range 1000 {
		want += d * rock.Adiabat(want, foot+d*float64(i), 0)
	}
	if snap.Layers[1].Name != "asthenosphere" || !close(snap.Depth(), 100e3, 1e-3) || math.Abs(T-want) > 0.3 {
		t.Errorf("%s, %g m, %g K at 80 km, want %g", snap.Layers[1].Name, snap.Depth(), T, want)
	}
	balanced(t, ev)
}

// TestSnapshotAgain: Given integrates the pressure of the snapshot's own column, through
// its densities, a second time.
func TestSnapshotAgain(t *testing.T) {
	p := speedPlan()
	reacting := column.Reaction{Protolith: column.Linear{Top: 2900, Bottom: 3000}, Product: column.EquationOfState{Reference: 3450, Expansivity: 3e-5, ReferenceTemperature: 293.15},
		Cap: 0.9, Field: &column.StabilityField{Above: 1.3e9, At: 900, Slope: 5e5}, Kinetics: &column.Kinetics{Prefactor: 10, ActivationEnergy: 250e3}}
	p.Column.Layers[2].Density = reacting
	p.Events = append(p.Events, heat.Event{Verb: "accumulate", Layer: "root", To: 3 * myr, Rate: 1e-11, Temperature: 1400}, heat.Event{Verb: "erode", To: 8 * myr, Rate: 1e-11})
	ev := begin(t, p)
	advance(t, ev, 10*myr)
	c, got, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	if x := ev.Root().Reacted; x < 0.05 || x > 0.85 {
		t.Errorf("reacted %g: this should be a mixed root", x)
	}
	again, err := heat.Given(c)
	if err != nil {
		t.Fatal(err)
	}
	for i := range got.Layers {
		l := &got.Layers[i]
		for x := 0.0; x <= 1; x += 0.125 {
			z := l.Top + x*(l.Bottom-l.Top)
			T, P, slope := l.At(z)
			T2, P2, _ := again.Layers[i].At(z)
			if math.Abs(T-T2) > 0.5 || !close(P, P2, 1e-4) && P > 1e6 || math.IsNaN(slope) {
				t.Errorf("%s at %g: %g and %g K, %g and %g Pa", c.Layers[i].Name, x, T, T2, P, P2)
			}
		}
	}
}

// TestOvershoot: a sheet 500 K hotter than its surroundings never leaves the two
// temperatures by more than the tolerance.
func TestOvershoot(t *testing.T) {
	c := cooled(900, 900, granite("a", 30e3), granite("b", 30e3))
	ev := begin(t, heat.Plan{Column: c, Tolerance: 0.1, Events: []heat.Event{{Verb: "intrude", Name: "s", Layer: "a", Thickness: 1000, Temperature: 1400, Rock: granite("", 1).Rock}}})
	for at := 1e7; at < 1e14; at *= 2 {
		advance(t, ev, at)
		_, p, err := ev.Snapshot()
		if err != nil {
			t.Fatal(err)
		}
		for _, l := range p.Layers {
			for _, n := range l.Nodes {
				if n.T < 899.9 || n.T > 1400.1 {
					t.Fatalf("%g K at %g m after %g s", n.T, n.Depth, at)
				}
			}
		}
	}
}
