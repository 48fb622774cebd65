package race_test

import (
	"context"
	"errors"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

func warmProblem() *race.Problem {
	rock := column.Rock{Density: column.Uniform(3300), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1, Factor: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	p := &race.Problem{Column: column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 283}, Layers: []column.Layer{{Name: "root", Root: true, Thickness: 20e3, Rock: rock}},
		Base: column.Base{Boundary: column.HalfSpace, HasTemperature: true, Temperature: 900, Rock: rock}}}
	p.Drip.Amplitude, p.Drip.Criterion, p.Drip.Window, p.Drip.Removes, p.Drip.Spectrum, p.Drip.Softening = 500, 1, 1e15, 0.3, "white", "none"
	return p
}

// Events are never read and ignored: what keeps the column as it is refuses them.
func TestEventsRefused(t *testing.T) {
	p := warmProblem()
	p.Events = []heat.Event{{Verb: "erode", To: 1e13, Rate: 1e-11}}
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	_, run := race.Run(context.Background(), p)
	_, dripped := race.Drip(context.Background(), p, s)
	_, excised := race.Excise(p, s)
	for _, err := range []error{run, dripped, excised} {
		if !errors.Is(err, race.ErrInput) || !strings.Contains(err.Error(), "events: run, drip and excise keep the column as it is at the start; keelfall history follows it") {
			t.Errorf("%v", err)
		}
	}
	p.Events = nil
	if _, err := race.Drip(context.Background(), p, s); err != nil {
		t.Errorf("without events: %v", err)
	}
}

func TestMoving(t *testing.T) {
	reaction := column.Reaction{Protolith: column.Uniform(3000), Product: column.Uniform(3400), Cap: 1, Kinetics: &column.Kinetics{Prefactor: 1, ActivationEnergy: 1e5}}
	for name, c := range map[string]struct {
		change func(p *race.Problem)
		want   bool
	}{
		"nothing":    {func(*race.Problem) {}, false},
		"an event":   {func(p *race.Problem) { p.Events = []heat.Event{{Verb: "erode"}} }, true},
		"a strain":   {func(p *race.Problem) { p.Strain.ExtensionRate = -1e-16 }, true},
		"a reaction": {func(p *race.Problem) { p.Column.Layers[0].Density = reaction }, true},
		"in a melt": {func(p *race.Problem) {
			p.Column.Layers[0].Density = column.Molten{Solid: reaction, Melt: &column.Melt{}}
		}, true},
		"by depth": {func(p *race.Problem) {
			p.Column.Layers[0].Density = column.Varying{Of: reaction, Depth: []float64{0, 1}, Place: []float64{0, 1}, Extent: []float64{0.4, 1}}
		}, true},
		"by depth, all of it": {func(p *race.Problem) {
			p.Column.Layers[0].Density = column.Varying{Of: reaction, Depth: []float64{0, 1}, Place: []float64{0, 1}, Extent: []float64{1, 1}}
		}, false},
		"moved, no reaction": {func(p *race.Problem) {
			p.Column.Layers[0].Density = column.Varying{Of: column.Linear{Top: 3200, Bottom: 3300}, Depth: []float64{0, 1}, Place: []float64{0.3, 1}}
		}, false},
		"one that has": {func(p *race.Problem) { p.Column.Layers[0].Density = reaction.WithExtent(1) }, false},
		"without rate": {func(p *race.Problem) {
			r := reaction
			r.Kinetics = nil
			p.Column.Layers[0].Density = r
		}, false},
	} {
		p := warmProblem()
		c.change(p)
		if got := p.Moving(); got != c.want {
			t.Errorf("%s: %v", name, got)
		}
	}
}

func TestHeatPlan(t *testing.T) {
	p := warmProblem()
	p.Strain.ExtensionRate = 2e-16
	p.Events = []heat.Event{{Verb: "erode", To: 1e13, Rate: 1e-11}, {Verb: "bury", To: 1e13}, {Verb: "stretch", From: 1e13, To: 2e13}, {Verb: "remove", Layer: "root", Share: 1}}
	p.Markers = []heat.Marker{{Name: "a", Depth: 1e4}}
	h, err := race.HeatPlan(p)
	if err != nil || h.Column == &p.Column || h.Column.Layers[0].Name != "root" || h.ExtensionRate != 2e-16 || len(h.Events) != 3 || h.Events[1].Verb != "stretch" || len(p.Events) != 4 || len(h.Markers) != 1 {
		t.Errorf("%+v, %v", h, err)
	}
	p.Column.Base.HasTemperature = false
	if _, err := race.HeatPlan(p); !errors.Is(err, race.ErrInput) || !strings.Contains(err.Error(), "needs a temperature") {
		t.Errorf("%v", err)
	}
}
