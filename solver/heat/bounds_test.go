package heat_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
)

const mmPerYear = 1e-3 * 1e6 / myr

// open is two layers over a half-space of their own rock, κ = 1e-6 m²/s.
func open() *column.Column {
	c := cooled(273.15, 1573.15, granite("a", 40e3), granite("b", 60e3))
	c.Base.Boundary, c.Base.Rock = column.HalfSpace, c.Layers[0].Rock
	return c
}

// TestStretchedToNothing: rock of the base rises at e z through a column of fixed depth L. Long
// after, −e z dT/dz = κ T” gives T = T_s + ΔT erf(z √(e/2κ))/erf(L √(e/2κ)), and at the
// surface k ΔT √(2e/πκ)/erf(L √(e/2κ)). The layers of the start leave on the way.
func TestStretchedToNothing(t *testing.T) {
	for _, e := range []float64{1e-13, 3e-13} {
		p := heat.Plan{Column: open(), Markers: []heat.Marker{{Name: "m", Depth: 20e3}},
			Events: []heat.Event{{Verb: "stretch", To: 10 * myr, Rate: e}}}
		h, err := heat.Run(context.Background(), p, 10*myr, []float64{10 * myr})
		if err != nil {
			t.Fatal(err)
		}
		want := 3 * 1300 * math.Sqrt(2*e/(math.Pi*1e-6)) / math.Erf(100e3*math.Sqrt(e/2e-6))
		if got := h.SurfaceFlow[len(h.SurfaceFlow)-1]; !close(got, want, 1e-3) {
			t.Errorf("at %g 1/s %g W/m², want %g", e, got, want)
		}
		if !(math.Abs(h.Energy.Missing) <= 1e-10*h.Energy.Moved) {
			t.Errorf("at %g 1/s: %+v", e, h.Energy)
		}
		path := h.Paths[0]
		if e == 3e-13 && (!path.Ended || path.Reason != "stretched to nothing" || len(h.Snapshots[0].Column.Layers) != 1) {
			t.Errorf("marker %v %q, %d layers", path.Ended, path.Reason, len(h.Snapshots[0].Column.Layers))
		}
	}
}

// TestBounds: columns that would become too thin, too deep or be renewed too often are
// refused before time passes, with the event; and a background rate on its way.
func TestBounds(t *testing.T) {
	rock := granite("", 1).Rock
	closed := func() *column.Column { return cooled(273.15, 1573.15, granite("a", 40e3), granite("b", 60e3)) }
	stretch := func(rate float64) heat.Event { return heat.Event{Verb: "stretch", To: 10 * myr, Rate: rate} }
	quiet := heat.Event{Verb: "change-base", From: 1 * myr, Temperature: 1500}
	for _, c := range []struct {
		column *column.Column
		event  heat.Event
		want   string
	}{
		{closed(), stretch(1e-13), "thinner than 1 m"},
		{closed(), stretch(-1e-13), "by 10 Myr the column is deeper than 3000 km"},
		{open(), stretch(-1e-10), "deeper than 3000 km"},
		{open(), stretch(1e-10), "times as thick as the column has come or gone"},
		{open(), heat.Event{Verb: "accumulate", Layer: "b", To: 10 * myr, Rate: 1e3 * mmPerYear}, "deeper than 3000 km"},
		{open(), heat.Event{Verb: "bury", Name: "n", To: 10 * myr, Rate: 1e3 * mmPerYear, Rock: rock}, "deeper than 3000 km"},
		{open(), heat.Event{Verb: "intrude", Name: "n", Layer: "a", From: myr, Thickness: 2.95e6, Temperature: 1000, Rock: rock}, "deeper than 3000 km"},
		{closed(), heat.Event{Verb: "erode", To: 10 * myr, Rate: 10 * mmPerYear}, "by 10 Myr the whole column is eroded away"},
	} {
		_, err := heat.Begin(heat.Plan{Column: c.column, Events: []heat.Event{quiet, c.event}})
		var e *heat.EventError
		if !errors.As(err, &e) || e.Index != 1 || !strings.Contains(e.Err.Error(), c.want) {
			t.Errorf("%s %g: %v, want %q of event 1", c.event.Verb, c.event.Rate, err, c.want)
		}
	}
	_, err := heat.Run(context.Background(), heat.Plan{Column: closed(), ExtensionRate: -1e-13}, 10*myr, nil)
	var e *heat.EventError
	if !errors.As(err, &e) || e.Index != -1 || !strings.Contains(err.Error(), "at the extension rate -1e-13 1/s") {
		t.Errorf("%v", err)
	}
	for _, rate := range []float64{1e-13, -1e-13} {
		ev := begin(t, heat.Plan{Column: closed(), ExtensionRate: rate})
		if err := ev.Advance(context.Background(), 10*myr); err == nil || !strings.Contains(err.Error(), "can be followed") {
			t.Errorf("%g 1/s: %v", rate, err)
		}
	}
}

// TestPossible: histories in which what is taken and what comes make up for each other.
func TestPossible(t *testing.T) {
	grow := heat.Event{Verb: "accumulate", Layer: "b", To: 5 * myr, Rate: 1 * mmPerYear}
	for name, events := range map[string][]heat.Event{
		"removed as it grows":     {grow, {Verb: "remove", Layer: "b", From: 3 * myr, Share: 1}},
		"eroded as it grows":      {{Verb: "erode", To: 15 * myr, Rate: 10 * mmPerYear}, {Verb: "accumulate", Layer: "b", To: 15 * myr, Rate: 10 * mmPerYear}},
		"eroded as it thickens":   {{Verb: "stretch", To: 10 * myr, Rate: -3.17e-15}, {Verb: "erode", To: 10 * myr, Rate: 11 * mmPerYear}},
		"share of nothing":        {{Verb: "remove", Layer: "b", From: myr, Share: 1e-15}},
		"rates of nothing":        {{Verb: "erode", To: 2 * myr}, {Verb: "erode", From: myr, To: 3 * myr}, {Verb: "bury", Name: "n", To: myr, Rock: granite("", 1).Rock}},
		"more eroded than it had": {{Verb: "erode", To: 11 * myr, Rate: 10 * mmPerYear}},
	} {
		for _, boundary := range []column.Boundary{column.HalfSpace, column.Rigid} {
			if boundary == column.Rigid && name == "more eroded than it had" {
				continue
			}
			c := open()
			c.Base.Boundary = boundary
			ev, err := heat.Begin(heat.Plan{Column: c, Events: events})
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			advance(t, ev, 16*myr)
			balanced(t, ev)
			if name == "eroded as it thickens" && boundary == column.Rigid {
				// d exp(x) − r Δt (exp(x) − 1)/x, and heating changes nothing here
				x := 3.17e-15 * 10 * myr
				want := 100e3*math.Exp(x) - 110e3*math.Expm1(x)/x
				if got := ev.Root().Own; !close(got, want, 1e-6) {
					t.Errorf("%s: %g m, want %g", name, got, want)
				}
			}
		}
	}
}

// TestNamedAsTheBase: a layer of the user's called asthenosphere and rock of the base
// that comes in do not collide, whichever is first.
func TestNamedAsTheBase(t *testing.T) {
	rock := granite("", 1).Rock
	for _, event := range []heat.Event{
		{Verb: "intrude", Name: "asthenosphere", Layer: "a", From: 3 * myr, Thickness: 1e3, Temperature: 1300, Rock: rock},
		{Verb: "bury", Name: "asthenosphere", From: 3 * myr, To: 4 * myr, Rate: mmPerYear, Rock: rock},
	} {
		h, err := heat.Run(context.Background(), heat.Plan{Column: open(), Events: []heat.Event{{Verb: "remove", Layer: "b", From: myr, Share: 0.5}, event}}, 5*myr, []float64{2 * myr, 5 * myr})
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range h.Snapshots {
			if l := s.Column.Layers; l[len(l)-1].Name != "asthenosphere 2" {
				t.Errorf("%s: the lowest layer is %s", event.Verb, l[len(l)-1].Name)
			}
		}
	}
}

// TestGoneOnTheWay: what only the run shows is an error of the event too.
func TestGoneOnTheWay(t *testing.T) {
	ev := begin(t, heat.Plan{Column: open(), Events: []heat.Event{{Verb: "erode", To: 5 * myr, Rate: 10 * mmPerYear}, {Verb: "remove", Layer: "a", From: 4.5 * myr, Share: 0.5}}})
	err := ev.Advance(context.Background(), 5*myr)
	var e *heat.EventError
	if !errors.As(err, &e) || e.Index != 1 || err.Error() != "heat: events[1] (remove a): at 4.5 Myr: the layer is not there" {
		t.Errorf("%v", err)
	}
}

// TestHairThin: erosion for a second leaves no foot of a millimetre behind whose flow
// costs the balance, nor does one eroded so slowly; a steady column stays steady.
func TestHairThin(t *testing.T) {
	for _, e := range []heat.Event{{Verb: "erode", To: 1, Rate: mmPerYear}, {Verb: "erode", To: 10 * myr, Rate: 1e-20 * mmPerYear}, {Verb: "erode", To: 1e4, Rate: 1e3 * mmPerYear * 100}} {
		ev := begin(t, heat.Plan{Column: open(), Events: []heat.Event{e}})
		advance(t, ev, 20*myr)
		balanced(t, ev)
	}
}

// TestBurialBegins: the surface heat flow does not jump where sediment begins to settle.
func TestBurialBegins(t *testing.T) {
	p := heat.Plan{Column: open(), Events: []heat.Event{{Verb: "bury", Name: "n", From: myr, To: 2 * myr, Rate: 0.1 * mmPerYear, Rock: granite("", 1).Rock}}}
	h, err := heat.Run(context.Background(), p, 2*myr, nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, q := range h.SurfaceFlow {
		if math.Abs(q/0.039-1) > 0.1 {
			t.Errorf("%g W/m² at %g Myr", q, h.Time[i]/myr)
		}
	}
}

// TestSteadyClock: on a path that changes by less than a history's error nothing cools.
func TestSteadyClock(t *testing.T) {
	c := heat.Clock{Name: "c", Marker: "m", ActivationEnergy: 268e3, Diffusivity: 2.4e-6, Radius: 80e-6, Geometry: "cylinder"}
	got, err := c.Close([]float64{0, 10 * myr, 20 * myr}, []float64{950, 949.995, 949.98})
	if err != nil || got.Found || !strings.Contains(got.Reason, "at 677 °C and not cooling") || strings.Contains(got.Reason, "K/Myr") {
		t.Errorf("%+v, %v", got, err)
	}
}
