package race_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/excision"
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

// Events with shear zones are never read and ignored: they are refused. Without zones
// the root drips, through time; cold rock on top (an erosion that cools) changes the time.
func TestEventsAndZones(t *testing.T) {
	p := warmProblem()
	p.Events = []heat.Event{{Verb: "erode", To: 1e13, Rate: 1e-11}}
	p.Zones = []excision.Zone{{Name: "zone", Dip: 0.5, Cuts: []string{"root"}, To: 1e15, SlipRate: 1e-12}}
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := race.Run(context.Background(), p); !errors.Is(err, race.ErrInput) || !strings.Contains(err.Error(), "events and shear zones together") {
		t.Errorf("%v", err)
	}
	// alone, the zones are followed through the events: 2e-11 sin(0.5) m/s takes 30 % of
	// the root's mass from below, of which an erosion from above takes nothing (derived)
	p.Zones[0].SlipRate, p.Zones[0].To = 2e-11, math.Inf(1)
	x, err := race.Excise(p, s)
	if err != nil {
		t.Fatal(err)
	}
	if want := 0.3 * 20e3 / (2e-11 * math.Sin(0.5)); math.Abs(x.LocalBeyond/want-1) > 1e-9 || x.Outcome != "excised" {
		t.Errorf("%s, a share of 0.3 at %g s, want %g", x.Outcome, x.LocalBeyond, want)
	}
	if _, err := race.Drip(context.Background(), p, s); err != nil {
		t.Errorf("a drip with events: %v", err)
	}
}

// A strained root drips: stretching by β carries its undulation away as it thins.
func TestStrainedDrip(t *testing.T) {
	still, stretched := problem(0), problem(0)
	stretched.Strain.ExtensionRate = 3e-15
	stretched.Strain.Wavevector = race.AlongStrike
	still.Strain.Wavevector = race.AlongStrike
	a, b := run(t, still), run(t, stretched)
	if a.Drip.Outcome != "drips" || b.Drip.Outcome != "drips" || len(b.Drip.Drips) == 0 || a.Drip.Time == b.Drip.Time {
		t.Fatalf("%s at %g Myr, stretched %s at %g Myr", a.Drip.Outcome, a.Drip.Time/myr, b.Drip.Outcome, b.Drip.Time/myr)
	}
	if b.Drip.Wavelength != b.Drip.InitialWavelength || b.Drip.Drips[0].Time != b.Drip.Time {
		t.Errorf("along strike λ %g to %g m; drips %+v", b.Drip.InitialWavelength, b.Drip.Wavelength, b.Drip.Drips[0])
	}
	stretched.Strain.Wavevector = race.AlongStretch
	c := run(t, stretched)
	if want := c.Drip.InitialWavelength * math.Exp(3e-15*c.Drip.Time); math.Abs(c.Drip.Wavelength/want-1) > 1e-9 {
		t.Errorf("along the stretch λ %g to %g m, want %g", c.Drip.InitialWavelength, c.Drip.Wavelength, want)
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
