package race_test

import (
	"context"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// TestModeOfOtherLayers: a sheet makes one layer more; the mode at the drip is then not
// one of the column's own layers and is left out. Where only the undulation counts, and
// no rock comes in, it stays.
func TestModeOfOtherLayers(t *testing.T) {
	const myr = 1e6 * 365.25 * 86400
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	}
	p := race.Problem{Column: column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 300},
		Layers: []column.Layer{{Name: "crust", Thickness: 30e3, Rock: rock(2900, 1e22)}, {Name: "root", Root: true, Thickness: 10e3, Rock: rock(3500, 1e20)}, {Name: "mantle", Thickness: 30e3, Rock: rock(3300, 1e20)}},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: 1500, HasTemperature: true, Rock: rock(3300, 1e20)}},
		Drip: drip.Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 0.3, Softening: "none"}, ThermalBuoyancy: "none"}
	p.Strain.ReferenceRate = 1e-15
	sheet := heat.Event{Verb: "intrude", Name: "sheet", Layer: "crust", From: 0.1 * myr, To: 0.1 * myr, Thickness: 1e3, Temperature: 1400, Times: 1, Rock: rock(2950, 1e22)}
	for _, c := range []struct {
		events []heat.Event
		mode   bool
	}{{nil, true}, {[]heat.Event{sheet}, false}} {
		p.Events = c.events
		s, err := race.Prepare(&p)
		if err != nil {
			t.Fatal(err)
		}
		r, err := race.Drip(context.Background(), &p, s)
		if err != nil || r.Outcome != "drips" || (r.Mode != nil) != c.mode {
			t.Errorf("%d events: %+v, %v", len(c.events), r, err)
		}
	}
}
