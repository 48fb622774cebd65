package heat_test

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"

	"pgregory.net/rapid"
)

// anyRock is a rock of any kind the solver knows.
func anyRock(t *rapid.T) column.Rock {
	f := func(name string, a, b float64) float64 { return rapid.Float64Range(a, b).Draw(t, name) }
	r := column.Rock{HeatCapacity: f("c", 800, 1300), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1},
		Conductivity:   column.Conductivity{Reference: f("k", 1.5, 4), PerKelvin: f("b", 0, 1e-3), PerPascal: f("p", 0, 5e-11), At: 293.15},
		HeatProduction: column.HeatProduction{Top: f("H", 0, 2e-6)}}
	if rapid.Bool().Draw(t, "decays") {
		r.HeatProduction.DecayLength = f("D", 5e3, 30e3)
	}
	eos := func(rho float64) column.Density {
		return column.EquationOfState{Reference: rho, Expansivity: f("α", 0, 4e-5), Compressibility: f("β", 0, 2e-11), ReferenceTemperature: 293.15}
	}
	switch rapid.IntRange(0, 3).Draw(t, "density") {
	case 0:
		r.Density = column.Uniform(f("ρ", 2600, 3400))
	case 1:
		r.Density = column.Linear{Top: f("ρ", 2600, 3400), Bottom: f("ρ", 2600, 3400)}
	case 2:
		r.Density = eos(f("ρ", 2600, 3400))
	default:
		r.Density = column.Reaction{Protolith: eos(2950), Product: eos(3400), Extent: 0.1, Cap: f("cap", 0.2, 1),
			Field: &column.StabilityField{Above: 5e8, At: 900, Slope: 1e6}, Kinetics: &column.Kinetics{Prefactor: 1e-3, ActivationEnergy: 250e3}}
	}
	if rapid.Bool().Draw(t, "melts") {
		r.Melt = &column.Melt{Solidus: &column.Curve{Surface: f("solidus", 1150, 1300), Slope: 1e-7}, Liquidus: &column.Curve{Surface: 1500, Slope: 1.2e-7}, LatentHeat: f("L", 0, 5e5), Density: 2700}
		r.Density = column.Molten{Solid: r.Density, Melt: r.Melt}
	}
	return r
}

// anyPlan is any column with any events that are possible together.
func anyPlan(t *rapid.T) (heat.Plan, float64) {
	f := func(name string, a, b float64) float64 { return rapid.Float64Range(a, b).Draw(t, name) }
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 280}, Base: column.Base{Rock: anyRock(t)}}
	for i := range rapid.IntRange(1, 4).Draw(t, "layers") {
		c.Layers = append(c.Layers, column.Layer{Name: fmt.Sprint("layer ", i+1), Thickness: f("thickness", 3e3, 40e3), Rock: anyRock(t)})
	}
	c.Base.Boundary = column.Boundary(rapid.IntRange(int(column.FreeSlip), int(column.Inviscid)).Draw(t, "base"))
	if rapid.Bool().Draw(t, "heat flow") {
		c.Base.HasHeatFlow, c.Base.HeatFlow = true, f("q", 0.01, 0.03)
	} else {
		c.Base.HasTemperature, c.Base.Temperature = true, f("basal T", 800, 1500)
	}
	last := c.Layers[len(c.Layers)-1].Name
	const m = myr
	all := []heat.Event{
		{Verb: "stretch", From: 1 * m, To: 6 * m, Rate: f("rate", -2e-15, 4e-15)},
		{Verb: "erode", From: 2 * m, To: 4 * m, Rate: f("erosion", 1e-13, 2e-11)},
		{Verb: "bury", Name: "new", From: 5 * m, To: 7 * m, Rate: f("burial", 1e-13, 2e-11), Rock: anyRock(t)},
		{Verb: "accumulate", Layer: last, From: 0, To: 3 * m, Rate: f("growth", 1e-13, 2e-11), Temperature: f("T", 1000, 1500)},
		{Verb: "intrude", Name: "sheet", Layer: c.Layers[0].Name, From: 1.5 * m, Thickness: f("sheet", 100, 3e3), Temperature: 1450, Rock: anyRock(t), Times: 3, Every: 0.3 * m},
		{Verb: "change-base", From: 4 * m, Temperature: f("changed T", 900, 1500)},
		{Verb: "remove", From: 6.5 * m, Layer: last, Share: f("share", 0.1, 0.9)},
	}
	p := heat.Plan{Column: c, ExtensionRate: f("background", -1e-15, 1e-15), Points: 100, Tolerance: 0.5,
		Markers: []heat.Marker{{Name: "deep", Depth: f("marker", 0, c.Depth())}, {Name: "base", BaseOf: last}}}
	for _, e := range all {
		if rapid.Bool().Draw(t, e.Verb) {
			p.Events = append(p.Events, e)
		}
	}
	return p, 9 * m
}

// TestAnyHistory: energy and mass balance whatever happens, the profile is continuous,
// pressures rise, the thermal base stays, and a second run is the same to the last digit.
func TestAnyHistory(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, until := anyPlan(t)
		flux := heat.Flux{Layer: p.Column.Layers[rapid.IntRange(0, len(p.Column.Layers)-1).Draw(t, "of")].Name, AtTop: rapid.Bool().Draw(t, "at top"),
			Rate: rapid.Float64Range(-2e-11, 2e-11).Draw(t, "flux"), Temperature: rapid.SampledFrom([]float64{0, 1200}).Draw(t, "its T")}
		share := rapid.SampledFrom([]float64{0, 0.3, 1}).Draw(t, "removed by the caller")
		var last float64
		for range 2 {
			ev, err := heat.Begin(p)
			if err != nil {
				t.Skip(err) // steady start beyond the melt's or conductivity's range
			}
			q := p.Column.Layers[0].Name
			if err := ev.Flux(heat.Flux{Layer: q, Rate: -2e-12}, flux); err != nil {
				t.Fatal(err)
			}
			if err := ev.Heat(heat.Source{BaseOf: q, Power: 0.02}, heat.Source{Depth: 5e3, Power: 0.01}); err != nil {
				t.Fatal(err)
			}
			if err := ev.Advance(context.Background(), until/3); err != nil {
				t.Fatal(err)
			}
			if share > 0 && len(p.Column.Layers) > 1 {
				if err := ev.Remove(p.Column.Layers[1].Name, share); err != nil {
					t.Logf("not removed: %v", err) // used up already
				}
			}
			if err := ev.Advance(context.Background(), until); err != nil {
				if strings.Contains(err.Error(), "the layer is not there") || strings.Contains(err.Error(), "the layer is gone") || strings.Contains(err.Error(), "the whole column is gone") || strings.Contains(err.Error(), "nothing thinner than 1 m can be followed") {
					return
				}
				t.Fatal(err)
			}
			e, m := ev.Energy(), ev.Mass()
			if !(math.Abs(e.Missing) <= 1e-10*e.Moved) {
				t.Fatalf("%g J/m² missing of %g: %+v", e.Missing, e.Moved, e)
			}
			if !(math.Abs(m.Missing) <= 1e-10*m.Moved) {
				t.Fatalf("%g kg/m² missing of %g: %+v", m.Missing, m.Moved, m)
			}
			c, prof, err := ev.Snapshot()
			if err != nil {
				if strings.Contains(err.Error(), "nothing is left") {
					return
				}
				t.Fatal(err)
			}
			whole(t, c, prof)
			own, to := 0.0, 0.0 // the foot of the last layer that is not rock of the base
			for i := range c.Layers {
				if to += c.Layers[i].Thickness; c.Layers[i].Name[0] != 'a' {
					own = to
				}
			}
			if d := c.Depth(); c.Base.Boundary == column.HalfSpace && math.Abs(d/max(p.Column.Depth(), own)-1) > 0.01 {
				// What a step's heating, melting and reaction do to the thickness is made
				// good in the steps that follow: here steps are long and tolerances wide.
				t.Fatalf("the foot is at %g m, the thermal base at %g, own rock to %g", d, p.Column.Depth(), own)
			}
			if last != 0 && e.Stored != last {
				t.Fatalf("two runs differ: %g and %g", last, e.Stored)
			}
			last = e.Stored
			for _, path := range ev.Paths() {
				for i := range path.Time {
					if i > 0 && path.Time[i] <= path.Time[i-1] || !(path.T[i] > 0) || !(path.Depth[i] >= 0) || math.IsNaN(path.P[i]) {
						t.Fatalf("path %s at %d: %g s, %g m, %g K, %g Pa", path.Name, i, path.Time[i], path.Depth[i], path.T[i], path.P[i])
					}
				}
			}
		}
	})
}

// whole checks that a profile has no gaps.
func whole(t interface {
	Helper()
	Fatalf(string, ...any)
}, c *column.Column, p *heat.Profile) {
	t.Helper()
	var z, T, P float64
	for i := range p.Layers {
		l := &p.Layers[i]
		first, last := l.Nodes[0], l.Nodes[len(l.Nodes)-1]
		if l.Top != z || i > 0 && (!close(first.T, T, 1e-12) || !close(first.P, P, 1e-12)) || !close(l.Bottom-l.Top, c.Layers[i].Thickness, 1e-9) {
			t.Fatalf("layer %s: from %g m %g K %g Pa, above it %g m %g K %g Pa", c.Layers[i].Name, l.Top, first.T, first.P, z, T, P)
		}
		for j := 1; j < len(l.Nodes); j++ {
			if l.Nodes[j].Depth <= l.Nodes[j-1].Depth || l.Nodes[j].P <= l.Nodes[j-1].P {
				t.Fatalf("layer %s: node %d does not lie below", c.Layers[i].Name, j)
			}
		}
		z, T, P = l.Bottom, last.T, last.P
	}
}
