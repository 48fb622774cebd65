package heat_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"

	"pgregory.net/rapid"
)

// TestAnyStart: whatever the temperatures at the start, the column comes to Steady's.
func TestAnyStart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := granite("a", 30e3), granite("b", 50e3)
		a.Conductivity = column.Conductivity{Reference: rapid.Float64Range(2, 4).Draw(t, "k"), PerKelvin: 8e-4, At: 293.15}
		a.HeatProduction = column.HeatProduction{Top: rapid.Float64Range(0, 3e-6).Draw(t, "H"), DecayLength: 12e3}
		c := cooled(280, rapid.Float64Range(900, 1600).Draw(t, "base"), a, b)
		want, err := heat.Steady(c)
		if err != nil {
			t.Fatal(err)
		}
		start := *c
		start.Geotherm = []column.Point{{Depth: 0, Temperature: 280}, {Depth: 25e3, Temperature: rapid.Float64Range(300, 1800).Draw(t, "T")}, {Depth: 80e3, Temperature: 1200}}
		h, err := heat.Run(context.Background(), heat.Plan{Column: &start}, 2000*myr, []float64{2000 * myr})
		if err != nil {
			t.Fatal(err)
		}
		got := h.Snapshots[0].Profile
		for z := 1e3; z < 80e3; z += 3.7e3 {
			i := 0
			if z > 30e3 {
				i = 1
			}
			A, _, _ := got.Layers[i].At(z)
			B, _, _ := want.Layers[i].At(z)
			if math.Abs(A-B) > 0.1 {
				t.Fatalf("%g K at %g m, steady %g", A, z, B)
			}
		}
		if !close(got.SurfaceFlow, want.SurfaceFlow, 1e-3) {
			t.Fatalf("surface flow %g, steady %g", got.SurfaceFlow, want.SurfaceFlow)
		}
	})
}

// TestScale: lengths times s, times s², rates of rock 1/s, of stretching 1/s², and
// temperatures are the same at fixed κ. Pressure is kept out of it: g falls as 1/s.
func TestScale(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := rapid.Float64Range(5e3, 30e3).Draw(t, "thickness")
		sheet := rapid.Float64Range(0.05, 0.3).Draw(t, "sheet")
		at := rapid.Float64Range(0.2, 2).Draw(t, "time") * myr
		v := rapid.Float64Range(-1e-11, 1e-11).Draw(t, "rate")
		run := func(s float64) *heat.Profile {
			c := cooled(280, 1500, granite("a", s*h), granite("b", s*20e3))
			c.Gravity /= s
			ev, err := heat.Begin(heat.Plan{Column: c, ExtensionRate: 2e-15 / (s * s),
				Events: []heat.Event{{Verb: "intrude", Name: "s", Layer: "a", From: 0.1 * at * s * s, Thickness: s * sheet * h, Temperature: 1400, Rock: granite("", 1).Rock}}})
			if err != nil {
				t.Fatal(err)
			}
			if err := ev.Flux(heat.Flux{Layer: "b", Rate: v / s, Temperature: 1300}); err != nil {
				t.Fatal(err)
			}
			if err := ev.Advance(context.Background(), at*s*s); err != nil {
				t.Fatal(err)
			}
			_, p, err := ev.Snapshot()
			if err != nil {
				t.Fatal(err)
			}
			return p
		}
		const s = 4 // a power of 2: the arithmetic is the same but for a few constants
		a, b := run(1), run(s)
		for i := range a.Layers {
			for x := 0.0; x <= 1; x += 0.1 {
				A, _, _ := a.Layers[i].At(a.Layers[i].Top + x*(a.Layers[i].Bottom-a.Layers[i].Top))
				B, _, _ := b.Layers[i].At(b.Layers[i].Top + x*(b.Layers[i].Bottom-b.Layers[i].Top))
				if math.Abs(A-B) > 0.3 {
					t.Fatalf("layer %d at %g: %g K and %g K", i, x, A, B)
				}
			}
		}
	})
}

// TestMarkers: rock rises as what is above it erodes, at the rate of erosion, and its path
// ends where it reaches the surface; stretching by β thins what is above by β; burial and
// a sheet push down; what is removed is gone.
func TestMarkers(t *testing.T) {
	c := cooled(280, 1500, granite("a", 30e3), granite("b", 30e3))
	c.Base.Boundary, c.Base.Rock = column.HalfSpace, c.Layers[0].Rock
	const mm = 1e-3 / (1e-6 * myr)
	ev := begin(t, heat.Plan{Column: c, Markers: []heat.Marker{{Name: "shallow", Depth: 3e3}, {Name: "deep", Depth: 20e3}, {Name: "foot", BaseOf: "b"}, {Name: "upper b", Depth: 40e3}},
		Events: []heat.Event{
			{Verb: "erode", From: 0, To: 5 * myr, Rate: 1 * mm},
			{Verb: "stretch", From: 5 * myr, To: 10 * myr, Rate: math.Log(2) / (5 * myr)},
			{Verb: "bury", Name: "sand", From: 10 * myr, To: 12 * myr, Rate: 0.5 * mm, Rock: granite("", 1).Rock},
			{Verb: "intrude", Name: "sheet", Layer: "a", From: 12 * myr, Thickness: 700, Temperature: 1400, Rock: granite("", 1).Rock},
			{Verb: "remove", Layer: "b", From: 13 * myr, Share: 0.5},
		}})
	at := func(when float64) []heat.Path {
		advance(t, ev, when)
		return ev.Paths()
	}
	depth := func(p heat.Path) float64 { return p.Depth[len(p.Depth)-1] }
	p := at(5 * myr)
	if !p[0].Ended || p[0].Reason != "eroded" || math.Abs(p[0].Time[len(p[0].Time)-1]-3*myr) > 0.2*myr {
		t.Errorf("shallow: %v %q at %g Myr", p[0].Ended, p[0].Reason, p[0].Time[len(p[0].Time)-1]/myr)
	}
	if !close(depth(p[1]), 15e3, 1e-6) || p[1].Layer != "a" {
		t.Errorf("deep: %g m", depth(p[1]))
	}
	if !close(p[1].P[len(p[1].P)-1], 3000*9.81*15e3, 1e-6) {
		t.Errorf("deep: %g Pa", p[1].P[len(p[1].P)-1])
	}
	p = at(10 * myr)
	if !close(depth(p[1]), 7.5e3, 1e-5) || !close(depth(p[2]), 27.5e3, 1e-5) {
		t.Errorf("after stretching by 2: %g and %g m", depth(p[1]), depth(p[2]))
	}
	p = at(12 * myr)
	if !close(depth(p[1]), 8.5e3, 1e-5) || !close(depth(p[2]), 29.2e3, 1e-5) {
		t.Errorf("after burial and the sheet: %g and %g m", depth(p[1]), depth(p[2]))
	}
	snap, _, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, l := range snap.Layers {
		names = append(names, l.Name)
	}
	if got := strings.Join(names, ","); got != "sand,a,sheet,b,asthenosphere" || !close(snap.Depth(), 60e3, 1e-5) {
		t.Errorf("layers %s, %g m", got, snap.Depth())
	}
	p = at(14 * myr)
	if !p[2].Ended || p[2].Reason != "removed with its part of b" || p[3].Ended {
		t.Errorf("foot: %v %q; upper b %v %q", p[2].Ended, p[2].Reason, p[3].Ended, p[3].Reason)
	}
	balanced(t, ev)
}

// TestMistakes: the plan is refused before anything runs, with number and name.
func TestMistakes(t *testing.T) {
	rock := granite("", 1).Rock
	for _, c := range []struct {
		events []heat.Event
		want   string
	}{
		{[]heat.Event{{Verb: "stretch", To: 2, Rate: 1e-15}, {Verb: "stretch", From: 1, To: 3, Rate: 1e-15}}, "events[1] (stretch): with events[0] (stretch): two extension rates"},
		{[]heat.Event{{Verb: "erode", To: 2, Rate: 1e-15}, {Verb: "bury", Name: "n", From: 1, To: 3, Rate: 1e-15, Rock: rock}}, "two rates at the surface"},
		{[]heat.Event{{Verb: "accumulate", Layer: "a", To: 2, Rate: 1e-15}, {Verb: "accumulate", Layer: "a", From: 1, To: 3, Rate: 1e-15}}, "both add to one layer"},
		{[]heat.Event{{Verb: "intrude", Name: "s", Layer: "nowhere", Thickness: 1, Temperature: 1000, Rock: rock}}, `events[0] (intrude s): there is no layer "nowhere"`},
		{[]heat.Event{{Verb: "intrude", Name: "a", Layer: "a", Thickness: 1, Temperature: 1000, Rock: rock}}, `there is a layer "a" already`},
		{[]heat.Event{{Verb: "erode", From: 3 * myr, To: 2 * myr, Rate: 1}}, "it ends at 2 Myr, not after it begins at 3 Myr"},
		{[]heat.Event{{Verb: "erode", From: 0, To: myr, Rate: 1e-8}}, "by 1 Myr the whole column is eroded away"},
		{[]heat.Event{{Verb: "remove", Layer: "a", Share: 1.5}}, "share 1.5"},
		{[]heat.Event{{Verb: "remove", Layer: "a", Share: 1}, {Verb: "accumulate", Layer: "a", From: myr, To: 2 * myr, Rate: 1e-12}}, `there is no layer "a" at 1 Myr`},
		{[]heat.Event{{Verb: "sing"}}, "no such verb"},
		{[]heat.Event{{Verb: "stretch", From: -1, To: 2}}, "before the start"},
		{[]heat.Event{{Verb: "change-base"}}, "temperature or a heat flow"},
	} {
		_, err := heat.Begin(heat.Plan{Column: cooled(280, 1500, granite("a", 30e3), granite("b", 30e3)), Events: c.events})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%+v: %v, want %q", c.events, err, c.want)
		}
	}
	for _, m := range []heat.Marker{{Name: "m", Depth: 61e3}, {Name: "m", Depth: -1}, {Name: "m", BaseOf: "c"}} {
		if _, err := heat.Begin(heat.Plan{Column: cooled(280, 1500, granite("a", 30e3), granite("b", 30e3)), Markers: []heat.Marker{m}}); err == nil {
			t.Errorf("%+v was taken", m)
		}
	}
	cold := cooled(280, 1500, granite("a", 30e3))
	cold.Base = column.Base{Boundary: column.Rigid}
	if _, err := heat.Begin(heat.Plan{Column: cold}); err == nil {
		t.Error("a column without a temperature was taken")
	}
}

// TestCancelled: a cancelled context stops at once.
func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	ev := begin(t, speedPlan())
	if err := ev.Advance(ctx, 100*myr); !errors.Is(err, context.Canceled) || ev.Time() > 0 {
		t.Errorf("%v at %g", err, ev.Time())
	}
}

// TestRateReplaced: a stretch event replaces the background rate for its time, and Next
// names the times of all changes.
func TestRateReplaced(t *testing.T) {
	ev := begin(t, heat.Plan{Column: cooled(280, 1500, granite("a", 60e3)), ExtensionRate: 1e-16, Events: []heat.Event{{Verb: "stretch", From: 1 * myr, To: 2 * myr, Rate: -3e-16}}})
	for _, want := range []struct{ next, rate float64 }{{1 * myr, 1e-16}, {2 * myr, -3e-16}, {math.Inf(1), 1e-16}} {
		if ev.Next() != want.next || ev.ExtensionRate() != want.rate {
			t.Errorf("at %g: next %g, rate %g; want %+v", ev.Time(), ev.Next(), ev.ExtensionRate(), want)
		}
		if !math.IsInf(want.next, 1) {
			advance(t, ev, want.next)
		}
	}
}

// TestReaction: at one temperature X = cap (1 − exp(−kt)), k = r₀ exp(−E/RT); the layer
// becomes thinner by the ratio of densities at the same mass, 1/ρ = (1 − X)/ρ_A + X/ρ_B.
func TestReaction(t *testing.T) {
	a := granite("a", 20e3)
	const T, E, cap = 1000.0, 200e3, 0.8
	k := 1e-3 * math.Exp(-E/(8.31446261815324*T))
	a.Density = column.Reaction{Protolith: column.Uniform(2900), Product: column.Uniform(3400), Cap: cap, Kinetics: &column.Kinetics{Prefactor: 1e-3, ActivationEnergy: E}}
	c := cooled(T, T, a)
	isothermal(c, T)
	ev := begin(t, heat.Plan{Column: c})
	at := 1.5 / k
	advance(t, ev, at)
	X := cap * -math.Expm1(-1.5)
	got := ev.Root().Reacted
	if !close(got, X, 1e-9) {
		t.Errorf("X = %.12g, want %.12g", got, X)
	}
	snap, _, err := ev.Snapshot()
	if err != nil {
		t.Fatal(err)
	}
	if want := 20e3 * 2900 * ((1-X)/2900 + X/3400); !close(snap.Depth(), want, 1e-9) {
		t.Errorf("%g m, want %g", snap.Depth(), want)
	}
}
