package drip

import (
	"context"
	"math"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

const myr = 1e6 * year

var ctx = context.Background()

// stiff is a crust with a free surface over a root over a half-space, numbers all the
// way; invented. Its surface relaxes 1e3 to 1e5 times faster than the root drips.
func stiff() *column.Column {
	rock := func(rho, eta float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free},
		Layers: []column.Layer{
			{Name: "upper", Thickness: 10e3, Rock: rock(2700, 1e18)},
			{Name: "crust", Thickness: 30e3, Rock: rock(2850, 1e21)},
			{Name: "root", Thickness: 12e3, Root: true, Rock: rock(3450, 2e20)},
		},
		Base: column.Base{Boundary: column.HalfSpace, Rock: rock(3270, 1e20)}}
}

func common() Settings {
	return Settings{Amplitude: 500, Criterion: 1, Window: 30 * myr, Removes: 0.3, Spectrum: "white", Softening: "none"}
}

func cold(c *column.Column, e float64) Plan {
	return Plan{Begin: func() (Motion, error) { return NewCold(c, e), nil }, Reference: 1e-15}
}

// A column in which nothing changes is the frozen one, whose solution is exact.
func TestThroughFrozen(t *testing.T) {
	s, err := state.New(stiff(), 0)
	if err != nil {
		t.Fatal(err)
	}
	set := common()
	set.Window = 200 * myr
	want, err := Solve(ctx, s, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	d, err := newThrough(ctx, cold(stiff(), 0), set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := Through(ctx, d.plan, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%.9g against %.9g Myr, %d drips", got.Time/myr, want.Time/myr, len(got.Drips))
	for _, v := range [][2]float64{{got.Time, want.Time}, {got.TimeLow, want.TimeLow}, {got.TimeHigh, want.TimeHigh}} {
		if math.Abs(v[0]/v[1]-1) > 2e-6 {
			t.Errorf("%g s, exact %g", v[0], v[1])
		}
	}
	if math.Abs(got.SpacingFrom/want.SpacingFrom-1) > 1e-2 || math.Abs(got.SpacingTo/want.SpacingTo-1) > 1e-2 {
		t.Errorf("spacing %g to %g, want %g to %g", got.SpacingFrom, got.SpacingTo, want.SpacingFrom, want.SpacingTo)
	}
	p, err := newProblem(s, set, 1)
	if err != nil {
		t.Fatal(err)
	}
	for i, w := range got.Curve.Wavelength {
		f, err := p.frozen(p.solver, w)
		if err != nil {
			t.Fatal(err)
		}
		// 1e-4 of ln amplitude is 1e-4/(q t) of the time
		exact := f.Time(24, set.Window)
		if a, b := got.Curve.Time[i], exact; math.IsInf(a, 1) != math.IsInf(b, 1) || !math.IsInf(a, 1) && math.Abs(a-b)*f.Fastest() > 1e-4 {
			t.Errorf("λ %g: %g s, exact %g", w, a, b)
		}
	}
}

// stretching returns the time at which an undulation between two half-spaces of one
// viscosity has grown by the derived factor of 2 Myr.
func stretching(t *testing.T) (whole, halved float64) {
	const q0, e, lambda, drho, thick = 2e-14, 3e-15, 10e3, 100.0, 2000e3
	eta := drho * 9.81 / (4 * q0 * 2 * math.Pi / lambda)
	rock := func(rho float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Root: true, Thickness: thick, Rock: rock(3300 + drho)}},
		Base:   column.Base{Boundary: column.HalfSpace, Rock: rock(3300)}}
	set := common()
	set.Window = 3 * myr
	set.Criterion = set.Amplitude * math.Exp(1.2003778905880707) / (thick * math.Exp(-e*2*myr))
	plan := cold(c, e)
	d := followed(t, plan, set, []float64{lambda}, nil)
	return d.grid.list[0].times[1], followed(t, plan, set, []float64{lambda}, d.course).grid.list[0].times[1]
}

// followed follows wavelengths to the window's end; with a course, over each of its
// pairs cut in two.
func followed(t testing.TB, p Plan, set Settings, list []float64, halve *course) *through {
	t.Helper()
	d, err := newThrough(ctx, p, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if halve != nil {
		for _, l := range halve.legs {
			if l.mid != nil {
				d.course.ends = append(d.course.ends, l.mid.t, l.end.t)
			}
		}
	}
	if d.grid, err = newGroup(d.course, set, list, 0); err != nil {
		t.Fatal(err)
	}
	if err := d.to(ctx, d.set.Window); err != nil {
		t.Fatal(err)
	}
	return d
}

func octaves(from, to float64, n int) []float64 {
	var list []float64
	for i := range n {
		list = append(list, from*math.Pow(to/from, float64(i)/float64(n-1)))
	}
	return list
}

// ln(ξ/ξ₀) = (q₀/e)(e^{et} − 1) − et = 1.2003778905880707 at 2 Myr (derived).
func TestStretching(t *testing.T) {
	one, half := stretching(t)
	// the logarithm grows by q₀e^{et} = 2.4e-14 1/s at that time
	a, b := (one-2*myr)*2.4e-14, (half-2*myr)*2.4e-14
	t.Logf("off by %g, with steps halved %g, of ln amplitude", a, b)
	if math.Abs(a) > 1e-6 || math.Abs(b) > 1e-6 {
		t.Errorf("ln amplitude off by %g, with steps halved by %g", a, b)
	}
}

// creeping is five layers of Newtonian creep or numbers that cool from below; invented.
func creeping(base float64) *column.Column {
	creep := func(name string) *rheology.Creep {
		l, err := rheology.Find(name)
		if err != nil {
			panic(err)
		}
		return &rheology.Creep{Laws: []rheology.Law{l}}
	}
	rock := func(rho, eta, heat float64, name string) column.Rock {
		r := column.Rock{
			Density:        column.EquationOfState{Reference: rho, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15},
			Viscosity:      column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1},
			Conductivity:   column.Conductivity{Reference: 3},
			HeatProduction: column.HeatProduction{Top: heat}, HeatCapacity: 1000, GrainSize: 1e-3, Water: 3e8, WaterMeasure: rheology.WaterFugacity,
		}
		if name != "" {
			r.Viscosity = column.Viscosity{Creep: creep(name), Exponent: 1, Factor: 1}
		}
		return r
	}
	const anorthite, olivine = "wet anorthite diffusion Rybacki 2006", "wet olivine diffusion Hirth 2003"
	weak := rock(3500, 0, 0, anorthite)
	weak.Viscosity.Factor = 1e-4
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Layers: []column.Layer{
			{Name: "upper crust", Thickness: 15e3, Rock: rock(2700, 1e22, 1e-6, "")},
			{Name: "middle crust", Thickness: 15e3, Rock: rock(2800, 0, 5e-7, anorthite)},
			{Name: "lower crust", Thickness: 10e3, Rock: rock(2950, 0, 2e-7, anorthite)},
			{Name: "root", Root: true, Thickness: 12e3, Rock: weak},
			{Name: "mantle", Thickness: 50e3, Rock: rock(3340, 0, 0, olivine)},
		},
		Base:   column.Base{Boundary: column.HalfSpace, Temperature: base, HasTemperature: true, Rock: rock(3340, 0, 0, olivine)},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24}}
}

// cooling starts hot and gets a colder base.
// hot is the first basal temperature in K.
const hot = 1800.0

func cooling(tol, e float64, events ...heat.Event) Plan {
	return Plan{Reference: 1e-15, Begin: func() (Motion, error) {
		ev, err := heat.Begin(heat.Plan{Column: creeping(hot), Tolerance: tol, ExtensionRate: e,
			Events: append([]heat.Event{{Verb: "change-base", From: 0, To: 0, Temperature: hot - 150}}, events...)})
		return Heated{ev}, err
	}}
}

// joined is a course with the states of d at half its pairs: two pairs are one.
func joined(d *course) *course {
	c := *d
	c.legs = nil
	for i := 0; i < len(d.legs); i++ {
		l := d.legs[i]
		if i+1 < len(d.legs) && l.mid != nil && d.legs[i+1].mid != nil {
			m := d.legs[i+1]
			if one, two := l.end.t-l.from.t, m.end.t-m.from.t; math.Abs(one/two-1) < 1e-6 {
				l = leg{l.from, l.end, m.end}
				i++
			}
		}
		c.legs = append(c.legs, l)
	}
	return &c
}

// Halving all steps moves no drip by 0.1 %, nor any ln amplitude by 1e-4, in a column
// that cools, and in ones that stretch and thicken as they do. Both have the same
// temperatures: those of two runs of the heat differ by as much themselves.
func TestHalved(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	for _, e := range []float64{0, 3e-16, -1e-15} {
		set := common()
		set.Window = 50 * myr
		list := octaves(20e3, 1000e3, 64)
		own := followed(t, cooling(0.02, e), set, list, nil)
		b := followed(t, cooling(0.02, e), set, list, own.course)
		whole := joined(b.course)
		a, err := newGroup(whole, set, list, 0)
		if err != nil {
			t.Fatal(err)
		}
		if err := a.again(ctx, whole); err != nil {
			t.Fatal(err)
		}
		var worst, worstTime, heat float64
		n := 0
		for i, f := range a.list {
			g, o := b.grid.list[i], own.grid.list[i]
			for j := range f.times {
				if math.IsInf(f.times[j], 1) != math.IsInf(g.times[j], 1) {
					t.Errorf("λ %g: %g and %g", f.first, f.times[j], g.times[j])
				} else if !math.IsInf(f.times[j], 1) {
					n++
					worstTime = math.Max(worstTime, math.Abs(f.times[j]/g.times[j]-1))
					heat = math.Max(heat, math.Abs(o.times[j]/g.times[j]-1))
				}
			}
			if !f.done() && !g.done() {
				worst = math.Max(worst, math.Abs(f.log+logSize(f.y[f.base()])-g.log-logSize(g.y[g.base()])))
			}
		}
		t.Logf("e %g: %d and %d legs, %d times; ln amplitude differs by %.2g, times by %.2g, with the heat run again by %.2g", e, len(whole.legs), len(b.course.legs), n, worst, worstTime, heat)
		if worst > 1e-4 || worstTime > 1e-3 || heat > 1e-3 || n == 0 {
			t.Errorf("e %g: ln amplitude differs by %.2g, times by %.2g, with the heat run again by %.2g", e, worst, worstTime, heat)
		}
	}
}

// 50 Myr, 64 wavelengths, five layers of Newtonian rock, with the heat and its snapshots.
func BenchmarkCourse(b *testing.B) {
	set := common()
	set.Window = 50 * myr
	list := octaves(20e3, 1000e3, 64)
	for b.Loop() {
		d, err := newThrough(ctx, cooling(0.05, 0), set, Options{Workers: 1})
		if err != nil {
			b.Fatal(err)
		}
		if d.grid, err = newGroup(d.course, set, list, 1); err != nil {
			b.Fatal(err)
		}
		if err := d.to(ctx, d.set.Window); err != nil {
			b.Fatal(err)
		}
		b.ReportMetric(float64(len(d.course.legs)), "legs")
	}
}
