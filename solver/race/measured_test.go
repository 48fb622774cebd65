package race_test

import (
	"strings"
	"testing"

	"keelfall/column"
	"keelfall/solver/race"
)

// TestMeasured: a measured pressure and temperature far from the column's are said, near
// ones are not. Two layers of 3000 kg/m³: the lower one's middle is at 45 km, 1.324 GPa
// and 900 K by hand.
func TestMeasured(t *testing.T) {
	r := column.Rock{Density: column.Uniform(3000), Viscosity: column.Viscosity{Top: 1e21, Bottom: 1e21, Exponent: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	p := race.Problem{Column: column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: 300},
		Layers: []column.Layer{{Name: "crust", Thickness: 30e3, Rock: r}, {Name: "granulite", Thickness: 30e3, Rock: r}},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: 1100, HasTemperature: true, Rock: r}}}
	p.Strain.ReferenceRate = 1e-15
	for _, c := range []struct {
		T, P float64
		want string
	}{
		{890, 1.3e9, ""},
		{1001, 1.3e9, "granulite of s.csv: 728 degC measured and 627 degC in the column, each at the middle"},
		{1001, 1.1e9, "granulite of s.csv: 1.10 GPa measured and 1.32 GPa in the column, 728 degC measured and 627 degC in the column, each at the middle"},
	} {
		p.Measured = []race.Measured{{Layer: "granulite", File: "s.csv", Rows: 2, HasTemperature: true, Temperature: c.T, HasPressure: true, Pressure: c.P}}
		s, err := race.Prepare(&p)
		if err != nil {
			t.Fatal(err)
		}
		if got := strings.Join(race.Warnings(&p, s), "; "); got != c.want {
			t.Errorf("%g K, %g Pa: %q, want %q", c.T, c.P, got, c.want)
		}
	}
}
