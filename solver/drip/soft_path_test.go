package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/growth"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// sticky is creeping with laws of dislocation creep, and a root that is weaker by a
// factor; invented.
func sticky(base, factor float64) *column.Column {
	c := creeping(base)
	law := func(factor float64, names ...string) column.Viscosity {
		k := &rheology.Creep{}
		for _, n := range names {
			l, err := rheology.Find(n)
			if err != nil {
				panic(err)
			}
			k.Laws = append(k.Laws, l)
		}
		return column.Viscosity{Creep: k, Exponent: 1, Factor: factor}
	}
	const wet = "wet olivine dislocation Hirth 2003"
	c.Layers[0].Viscosity = law(1, "wet quartzite Hirth 2001")
	c.Layers[1].Viscosity = law(1, "wet anorthite dislocation Rybacki 2006", "wet anorthite diffusion Rybacki 2006")
	c.Layers[2].Viscosity = law(1, "mafic granulite Wilks 1990")
	c.Layers[3].Viscosity = law(factor, "dry eclogite Zhang 2007")
	c.Layers[4].Viscosity = law(1, wet, "wet olivine diffusion Hirth 2003")
	c.Base.Rock.Viscosity = law(1, wet)
	return c
}

// chilled is a sticky column whose base is made colder.
func chilled(tol, e float64, events ...heat.Event) Plan {
	return Plan{Reference: 1e-15, Begin: func() (Motion, error) {
		ev, err := heat.Begin(heat.Plan{Column: sticky(1750, 0.003), Tolerance: tol, ExtensionRate: e,
			Events: append([]heat.Event{{Verb: "change-base", Temperature: 1600}}, events...)})
		return Heated{ev}, err
	}}
}

func softly() Settings {
	set := common()
	set.Softening, set.Amplitude, set.Window = "self", 1500, 40*myr
	return set
}

func soften(t testing.TB, p Plan, set Settings) *softThrough {
	t.Helper()
	q, err := newSoftThrough(ctx, p, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return q
}

func (q *softThrough) must(t testing.TB, wavelength float64, b boost) softWave {
	t.Helper()
	w, err := q.follow(ctx, wavelength, b, q.until)
	if err != nil || q.failed > 0 {
		t.Fatal(err, q.failed)
	}
	return w
}

// powerful is stiff with exponents n, the viscosities at 1e-15 1/s.
func powerful(n float64) *column.Column {
	c := stiff()
	for i := range c.Layers {
		c.Layers[i].Viscosity.Exponent = n
	}
	c.Base.Rock.Viscosity.Exponent = n
	return c
}

// A column in which nothing changes is the still one: the closure's time, and the best
// estimate, of the same wavelength; its laws are tabulated otherwise.
func TestSoftStill(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	c := powerful(3)
	s, err := state.New(c, 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	set := softly()
	set.Window = 1e4 * myr
	q := soften(t, cold(c, 0), set)
	f, err := NewSoft(s, Background{})
	if err != nil {
		t.Fatal(err)
	}
	for _, lambda := range []float64{30e3, 80e3, 200e3} {
		want, err := f.Time(2*math.Pi/lambda, set.Amplitude, 12e3, Horizon)
		if err != nil {
			t.Fatal(err)
		}
		finite := Corrections(want.Exponent, 1, set.Amplitude/12e3).Finite
		one, two := q.must(t, lambda, slow), q.must(t, lambda, best)
		t.Logf("%g km: %.7g and %.7g Myr; best %.7g and %.7g", lambda/1e3, one.Time/myr, want.Time/myr, two.Time/myr, want.Best*finite/myr)
		if math.Abs(one.Time/want.Time-1) > 1e-4 || math.Abs(two.Time/(want.Best*finite)-1) > 2e-4 {
			t.Errorf("%g m: %g s, want %g; best %g, want %g", lambda, one.Time, want.Time, two.Time, want.Best*finite)
		}
	}
}

// In a still column of one n over fluid t = (a^(1−n) − b^(1−n))/((n − 1)c) (derived): the
// growth is faster than exponential and ends at a finite time.
func TestSoftBlowUp(t *testing.T) {
	for _, n := range []float64{2, 3, 5} {
		rock := func(rho, n float64) column.Rock {
			return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: 1e20, Bottom: 1e20, Exponent: n, Factor: 1}}
		}
		c := &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Rigid},
			Layers: []column.Layer{{Name: "root", Root: true, Thickness: 10e3, Rock: rock(3400, n)}},
			Base:   column.Base{Boundary: column.Inviscid, Rock: rock(3300, 1)}}
		s, err := state.New(c, 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		f, err := NewSoft(s, Background{})
		if err != nil {
			t.Fatal(err)
		}
		const lambda = 30e3
		out := make([]float64, 2)
		if err := f.Rate(2*math.Pi/lambda, []float64{0, 500}, out); err != nil {
			t.Fatal(err)
		}
		set := softly()
		set.Amplitude, set.Window = 500, 1e5*myr
		w := soften(t, cold(c, 0), set).must(t, lambda, slow)
		want := (math.Pow(500, 1-n) - math.Pow(10e3, 1-n)) / ((n - 1) * out[1] / math.Pow(500, n))
		t.Logf("n %g: %.7g and %.7g Myr", n, w.Time/myr, want/myr)
		if math.Abs(w.Time/want-1) > 1e-4 || math.Abs(w.Exponent-n) > 1e-4 {
			t.Errorf("n %g: %g s, want %g; exponent %g", n, w.Time, want, w.Exponent)
		}
	}
}

// In Newtonian rock the closure has nothing to soften: the linear course's times, with
// heat, stretching, and rock that comes in.
func TestSoftNewtonian(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	set := common()
	set.Window = 50 * myr
	sill := heat.Event{Verb: "intrude", Name: "sill", Layer: "lower crust", From: 1 * myr, To: 1 * myr, Thickness: 2e3, Temperature: 1400,
		Rock: creeping(hot).Layers[2].Rock}
	pull := heat.Event{Verb: "stretch", From: 2 * myr, To: 6 * myr, Rate: 5e-16}
	for _, v := range []struct {
		e      float64
		events []heat.Event
	}{{0, nil}, {1e-16, nil}, {0, []heat.Event{sill, pull}}} {
		p := cooling(0.0003, v.e, v.events...)
		list := []float64{60e3, 150e3, 300e3}
		want := followed(t, p, set, list, nil)
		checked := 0
		for i, lambda := range list {
			whole := soften(t, p, set)
			fine := soften(t, p, set)
			fine.course.spacing, fine.error = softSpacing/16, softError/10
			a, b, exact := whole.must(t, lambda, slow), fine.must(t, lambda, slow), want.grid.list[i].times[1]
			t.Logf("e %g, %d events, %g km: %.7g, finely %.7g, linear %.7g Myr", v.e, len(v.events), lambda/1e3, a.Time/myr, b.Time/myr, exact/myr)
			if math.IsInf(exact, 1) {
				continue
			}
			checked++
			// the linear course is good to 1e-4 of ln amplitude itself
			if math.Abs(b.Time/exact-1) > 2e-4 || math.Abs(a.Time/exact-1) > 1e-3 {
				t.Errorf("%g m: %g s, finely %g, linear %g", lambda, a.Time, b.Time, exact)
			}
		}
		if checked == 0 {
			t.Error("nothing drips")
		}
	}
}

// As the amplitude goes to nothing in a background, the leading rate is the tangent
// rheology's, along the stretch and along strike.
func TestSoftTangent(t *testing.T) {
	for _, strike := range []bool{false, true} {
		for _, e := range []float64{2e-15, -1e-15} {
			p := cold(powerful(3), e)
			p.AlongStrike = strike
			q := soften(t, p, softly())
			n := q.course.first()
			if err := q.course.extend(ctx); err != nil {
				t.Fatal(err)
			}
			g, err := growth.NewSolver(Strained(n.s, Background{e, strike}, "none"), 1e-10)
			if err != nil {
				t.Fatal(err)
			}
			const lambda = 100e3
			m, err := g.Mode(lambda)
			if err != nil {
				t.Fatal(err)
			}
			path := &softPath{ctx: ctx, course: q.course, first: lambda, boost: best, a0: 1e-6, seen: map[*softBand]bool{}}
			y := make([]float64, 4)
			for i := range y {
				y[i] = 1e-4 * m.Displacement[i] // m
			}
			f, err := path.flow(0, y)
			if err != nil {
				t.Fatal(err)
			}
			finite := Corrections(f.exponent, 2*math.Pi/lambda*12e3, 1e-6).Finite
			rate := 0.0
			for j := range y {
				rate += f.a.At(3, j) * y[j]
			}
			_, ez, _ := Background{e, strike}.rates()
			got := ez + (rate/y[3]-ez)*finite
			t.Logf("strike %v, e %g: %.7g and %.7g per Myr", strike, e, got*myr, m.Growth*myr)
			if math.Abs(got/m.Growth-1) > 1e-4 {
				t.Errorf("strike %v, e %g: %g 1/s, tangent %g", strike, e, got, m.Growth)
			}
		}
	}
}

// Nodes four times as close in the middle's error, and finer steps, move no time by 0.1 %.
func TestSoftHalved(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	for _, e := range []float64{0, 3e-16, -1e-15} {
		p := chilled(0.005, e)
		whole, fine := soften(t, p, softly()), soften(t, p, softly())
		fine.course.spacing, fine.error = softSpacing/16, softError/8
		checked := 0
		for _, lambda := range []float64{60e3, 120e3, 250e3} {
			a, b := whole.must(t, lambda, best), fine.must(t, lambda, best)
			t.Logf("e %g, %g km: %.6g and %.6g Myr, %d and %d steps", e, lambda/1e3, a.Time/myr, b.Time/myr, a.Steps, b.Steps)
			if math.IsInf(a.Time, 1) != math.IsInf(b.Time, 1) || !math.IsInf(a.Time, 1) && math.Abs(a.Time/b.Time-1) > 1e-3 {
				t.Errorf("e %g, %g m: %g and %g s", e, lambda, a.Time, b.Time)
			}
			if !math.IsInf(a.Time, 1) {
				checked++
			}
		}
		t.Logf("%d and %d nodes", len(whole.course.stretches[1].nodes), len(fine.course.stretches[1].nodes))
		if checked == 0 {
			t.Error("nothing drips")
		}
	}
}

// Equal short steps with a closure made anew in the middle of each.
func TestSoftBruteForce(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and minutes under the race detector")
	}
	const lambda, steps = 120e3, 120
	for _, e := range []float64{0, -1e-15} {
		p := chilled(0.005, e)
		set := softly()
		w := soften(t, p, set).must(t, lambda, slow)
		tp, err := newTape(p.Begin)
		if err != nil {
			t.Fatal(err)
		}
		c := &softCourse{view: newView(p, tp), set: set}
		h := w.Time * 1.02 / steps
		var lay layout
		y, time := []float64(nil), 0.0
		for i := range steps {
			if err := tp.advance(ctx, h*(float64(i)+0.5)); err != nil {
				t.Fatal(err)
			}
			n, err := c.look()
			if err != nil {
				t.Fatal(err)
			}
			if y == nil { // all interfaces can move
				y = make([]float64, len(n.lay.names)+1)
				y[n.lay.rootBase] = set.Amplitude
			} else if !n.lay.same(&lay) {
				y = lay.carry(&n.lay, y)
			}
			lay = n.lay
			f, err := NewSoft(n.s, n.back)
			if err != nil {
				t.Fatal(err)
			}
			k := 2 * math.Pi / lambda * math.Exp(-n.strain)
			a, err := f.flowing(k, y)
			if err != nil {
				t.Fatal(err)
			}
			middle := flowed(y, h, part{0.5, a.a})
			if a, err = f.flowing(k, middle); err != nil {
				t.Fatal(err)
			}
			next := flowed(y, h, part{1, a.a})
			stop := math.Log(n.root)
			if from, to := math.Log(math.Abs(y[lay.rootBase])), math.Log(math.Abs(next[lay.rootBase])); time == 0 && to >= stop {
				time = h * (float64(i) + (stop-from)/(to-from))
			}
			y = next
		}
		t.Logf("e %g: %.6g against %.6g Myr", e, w.Time/myr, time/myr)
		if !(math.Abs(w.Time/time-1) < 1e-3) {
			t.Errorf("e %g: %g s, brute force %g", e, w.Time, time)
		}
	}
}
