package race_test

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/heat"
	"keelfall/solver/race"
)

// alone is a root under a rigid top over a fluid that has no viscosity: at K = kh =
// 2.119542017 it grows at q = 0.1606980019 Δρ g h/η, the fastest (Houseman & Molnar 1997,
// GJI 128, geometry; digits derived), and its base is the only state.
func alone(h float64) *race.Problem {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	p := problem(0)
	p.ArcWidth, p.ArcLength, p.Zones = 0, 0, nil
	p.Column = column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Thickness: h, Root: true, Rock: rock(3450, 2e20)}},
		Base:   column.Base{Boundary: column.Inviscid, Rock: rock(3270, 1e20)}}
	return p
}

func drippedIn(t *testing.T, p *race.Problem) (time, wavelength float64) {
	t.Helper()
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	d, err := race.Drip(context.Background(), p, s)
	if err != nil {
		t.Fatal(err)
	}
	return d.Time, d.InitialWavelength
}

// The critical thickness of that root solves ln(h/a) = 0.1606980019 Δρ g h W/η (derived),
// found from above and from below.
func TestCriticalThickness(t *testing.T) {
	const rate = 0.1606980019 * 180 * 9.81 / 2e20
	for _, factor := range []float64{0.5, 3} {
		const h = 14e3
		p := alone(h * factor)
		p.Drip.Window = math.Log(h/p.Drip.Amplitude) / (rate * h)
		time, near := drippedIn(t, p)
		if (time < p.Drip.Window) != (factor > 1) {
			t.Fatalf("× %g: drips at %g Myr, window %g", factor, time/myr, p.Drip.Window/myr)
		}
		c, err := race.CriticalThickness(context.Background(), p, time, near)
		if err != nil {
			t.Fatal(err)
		}
		// 1e-3 of the time is 1e-3/(1 − 1/ln(h/a)) of the thickness
		if math.Abs(c.Thickness/h-1) > 2e-3 || math.Abs(c.Factor*factor-c.Thickness/h) > 1e-12 || c.Always {
			t.Errorf("× %g: %g m, want %g", factor, c.Thickness, h)
		}
		if !math.IsNaN(c.Reached) {
			t.Errorf("a root that does not grow reaches it at %g s", c.Reached)
		}
	}
	p := alone(14e3)
	p.Drip.Window = 1000 * myr
	time, near := drippedIn(t, p)
	if c, err := race.CriticalThickness(context.Background(), p, time, near); err != nil || !c.Always || !math.IsNaN(c.Thickness) || c.From > 14e3/7 {
		t.Errorf("a long window: %+v, %v", c, err)
	}
	p.Drip.Window = 0.01 * myr
	if c, err := race.CriticalThickness(context.Background(), p, time, near); err != nil || c.Always || !math.IsNaN(c.Thickness) || c.To < 14e3*7 {
		t.Errorf("a short window: %+v, %v", c, err)
	}
	p.Column.Layers[0].Density = column.Uniform(3200) // lighter than what lies below
	if c, err := race.CriticalThickness(context.Background(), p, math.Inf(1), 0); err != nil || c.Always || !math.IsNaN(c.Thickness) {
		t.Errorf("buoyant: %+v, %v", c, err)
	}
}

// A root that an event feeds takes the missing thickness over the rate to get there.
func TestCriticalReached(t *testing.T) {
	p := problem(0)
	p.Zones = nil
	for i := range p.Column.Layers {
		p.Column.Layers[i].HeatCapacity, p.Column.Layers[i].Conductivity.Reference = 1000, 2.5
	}
	p.Column.Base.HeatCapacity, p.Column.Base.Conductivity.Reference = 1000, 2.5
	p.Column.Surface.Temperature, p.Column.Base.Temperature, p.Column.Base.HasTemperature = 273, 1300, true
	p.Drip.Window = 6 * myr
	const rate = 1e-5 / year // 0.01 mm/yr
	p.Events = []heat.Event{{Verb: "accumulate", Layer: "root", From: 0, To: 5 * myr, Rate: rate, Temperature: 1300}}
	time, near := drippedIn(t, p)
	c, err := race.CriticalThickness(context.Background(), p, time, near)
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%g Myr; %+v", time/myr, c)
	if !(c.Thickness > 12e3) || math.Abs(c.Reached*rate/(c.Thickness-12e3)-1) > 1e-12 || c.Rate != rate {
		t.Errorf("%+v", c)
	}
	// with that root it drips just as the window ends
	p.Column.Layers[1].Thickness = c.Thickness
	if got, _ := drippedIn(t, p); math.Abs(got/p.Drip.Window-1) > 2*1e-3 {
		t.Errorf("with the critical thickness it drips at %g Myr", got/myr)
	}
}

// The exponents of a drip between two half-spaces are η_i/(η₁ + η₂) (from q, Chandrasekhar
// 1961); Newtonian ones add up to 1 in any column, still or moving.
func TestExponents(t *testing.T) {
	p := alone(200e3)
	p.Column.Base.Boundary = column.HalfSpace
	p.Drip.Criterion = 0.05
	sum := func(p *race.Problem, wavelength float64) (e []float64, total float64) {
		t.Helper()
		e, err := race.Exponents(context.Background(), p, wavelength)
		if err != nil {
			t.Fatal(err)
		}
		for _, v := range e {
			total += v
		}
		return e, total
	}
	e, total := sum(p, 10e3)
	if math.Abs(e[0]-2.0/3) > 1e-3 || math.Abs(e[1]-1.0/3) > 1e-3 || math.Abs(total-1) > 1e-3 {
		t.Errorf("half-spaces: %g, sum %g", e, total)
	}
	q := problem(0)
	_, near := drippedIn(t, q)
	if e, total := sum(q, near); math.Abs(total-1) > 1e-3 || e[1] < 0.1 || e[0] < 0 || e[2] < 0 {
		t.Errorf("an arc: %g, sum %g", e, total)
	}
	// at the quickest wavelength they are those of the drip time itself
	var ts [2]float64
	for i, f := range []float64{math.Exp(0.05), math.Exp(-0.05)} {
		q := problem(0)
		q.Column.Layers[1].Viscosity.Factor = f
		ts[i], _ = drippedIn(t, q)
	}
	e, _ = sum(q, near)
	if free := math.Log(ts[0]/ts[1]) / 0.1; math.Abs(e[1]/free-1) > 3e-3 {
		t.Errorf("of the root %g, with the wavelength free %g", e[1], free)
	}
	q.Strain.ExtensionRate = 1e-17 // it moves, hardly
	if _, total := sum(q, near); math.Abs(total-1) > 2e-3 {
		t.Errorf("in motion: sum %g", total)
	}
}

// Rock of one n that only the drip softens: t ∝ ηⁿ, so that the exponents add up to n.
func TestExponentsSelf(t *testing.T) {
	for _, n := range []float64{2, 3} {
		p := problem(0)
		p.Zones, p.Drip.Softening, p.Drip.Amplitude = nil, "self", 1500
		for i := range p.Column.Layers {
			p.Column.Layers[i].Viscosity.Exponent = n
		}
		p.Column.Base.Viscosity.Exponent = n
		e, err := race.Exponents(context.Background(), p, 80e3)
		if err != nil {
			t.Fatal(err)
		}
		var total float64
		for _, v := range e {
			total += v
		}
		if math.Abs(total/n-1) > 1e-2 {
			t.Errorf("n = %g: %g, sum %g", n, e, total)
		}
	}
}

// The drip time falls as the undulation grows, by ln of it over the growth rate where one
// mode grows alone.
func TestTimeAgainstAmplitude(t *testing.T) {
	p := alone(14e3)
	time, first := drippedIn(t, p)
	s, err := race.Prepare(p)
	if err != nil {
		t.Fatal(err)
	}
	list, err := race.TimeAgainstAmplitude(context.Background(), p, s, first)
	if err != nil || len(list) < 10 || list[0].Amplitude != 50 {
		t.Fatalf("%v, %v", list, err)
	}
	for _, u := range list {
		if want := time * math.Log(14e3/u.Amplitude) / math.Log(14e3/500); math.Abs(u.Time/want-1) > 1e-4 {
			t.Errorf("%g m: %g s, want %g", u.Amplitude, u.Time, want)
		}
	}
	p.Drip.Amplitude, p.Drip.Rough = 0, drip.Roughness{Wavelength: []float64{20e3, 60e3}, Amplitude: []float64{500, 500}}
	table, err := race.TimeAgainstAmplitude(context.Background(), p, s, first)
	if err != nil || len(table) != len(list) {
		t.Fatalf("%v, %v", table, err)
	}
	for i, u := range table {
		if math.Abs(u.Time/list[i].Time-1) > 1e-4 {
			t.Errorf("a table of one amplitude, %g m: %g s, white %g", u.Amplitude, u.Time, list[i].Time)
		}
	}
}
