package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// gradedCrust is gradedRoot with a crust that grades too, stably, and exponents n.
func gradedCrust(n float64) *column.Column {
	c := powerful(n)
	c.Layers[1].Density = column.Linear{Top: 2750, Bottom: 2950}
	c.Layers[2].Density = column.Linear{Top: 3250, Bottom: 3550}
	return c
}

// parted is the closure of a state with so many parts in each layer that grades.
func parted(t testing.TB, s *state.State, b Background, n int) *Soft {
	t.Helper()
	m := Strained(s, b, "none")
	parts := make([][]float64, len(m.Layers))
	for i := range m.Layers {
		if m.Layers[i].Gradient != nil {
			parts[i] = cut([]float64{0, 1}, n, 1)
		}
	}
	f, err := newSoft(s, m, b, parts)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// In Newtonian rock the closure of a root and a crust that grade is their exact solution,
// whose states are those of the flow's own elements; with two parts a layer, more nearly.
func TestSoftGradedNewtonian(t *testing.T) {
	s, err := state.New(gradedCrust(1), 0)
	if err != nil {
		t.Fatal(err)
	}
	p, err := newProblem(s, common(), 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, lambda := range []float64{15e3, 30e3, 70e3, 200e3} {
		x, err := p.frozen(p.solver, lambda)
		if err != nil {
			t.Fatal(err)
		}
		want := x.Time(24, Horizon)
		var off [2]float64
		for i, n := range [2]int{1, 2} {
			d, err := parted(t, s, Background{}, n).Time(2*math.Pi/lambda, 500, 12e3, Horizon)
			if err != nil {
				t.Fatal(err)
			}
			off[i] = d.Time/want - 1
		}
		t.Logf("%g km: %.6g Myr, one part %+.2g, two %+.2g", lambda/1e3, want/myr, off[0], off[1])
		if !(math.Abs(off[0]) < 1e-3 && math.Abs(off[1]) < 1e-4) {
			t.Errorf("%g m: %g s; off by %g with one part, %g with two", lambda, want, off[0], off[1])
		}
	}
}

// In power-law rock the parts that are used are as good as four times as many, and as
// many uniform layers, extrapolated to infinitely many (second order: TestGradedSliced).
func TestSoftGradedParts(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	root := func(c *column.Column) *column.Column {
		for i := range c.Layers {
			c.Layers[i].Viscosity.Exponent = 3
		}
		c.Base.Rock.Viscosity.Exponent = 3
		return c
	}
	still := func(c *column.Column) *state.State {
		s, err := state.New(root(c), 1e-15)
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
	for _, lambda := range []float64{30e3, 80e3, 200e3} {
		time := func(f *Soft) float64 {
			d, err := f.Time(2*math.Pi/lambda, 500, 12e3, Horizon)
			if err != nil {
				t.Fatal(err)
			}
			return d.Time
		}
		s := still(gradedRoot())
		f, err := NewSoft(s, Background{})
		if err != nil {
			t.Fatal(err)
		}
		one, four := time(f), time(parted(t, s, Background{}, 4))
		var sliced [2]float64
		for i, n := range [2]int{10, 20} {
			g, err := NewSoft(still(slicedRoot(n)), Background{})
			if err != nil {
				t.Fatal(err)
			}
			sliced[i] = time(g)
		}
		limit := sliced[1] + (sliced[1]-sliced[0])/3
		t.Logf("%g km: %.7g, four parts %+.2g, 10 layers %+.2g, 20 %+.2g, extrapolated %+.2g", lambda/1e3, one/myr, four/one-1, sliced[0]/one-1, sliced[1]/one-1, limit/one-1)
		if math.Abs(one/four-1) > 5e-4 || math.Abs(one/limit-1) > 5e-4 || math.Abs(four/limit-1) > 2e-4 {
			t.Errorf("%g m: %g s, four parts %g, layers %g", lambda, one, four, limit)
		}
	}
}

// A root that grades in a column that does not change is the still one.
func TestSoftGradedStill(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	s, err := state.New(gradedCrust(3), 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	set := softly()
	set.Window = 1e4 * myr
	q := soften(t, cold(gradedCrust(3), 0), set)
	f, err := NewSoft(s, Background{})
	if err != nil {
		t.Fatal(err)
	}
	for _, lambda := range []float64{30e3, 80e3, 200e3} {
		want, err := f.Time(2*math.Pi/lambda, set.Amplitude, 12e3, Horizon)
		if err != nil {
			t.Fatal(err)
		}
		if one := q.must(t, lambda, slow); math.Abs(one.Time/want.Time-1) > 1e-4 {
			t.Errorf("%g m: %g s, want %g", lambda, one.Time, want.Time)
		}
	}
}

// reacting is cooling with a root that reacts from above, and grows for a while; invented.
func reacting(tol, e float64, events ...heat.Event) Plan {
	return reactingIn(creeping, hot, 150, tol, e, events...)
}

func reactingIn(rocks func(float64) *column.Column, base, colder, tol, e float64, events ...heat.Event) Plan {
	return Plan{Reference: 1e-15, Begin: func() (Motion, error) {
		c := rocks(base)
		eos := func(rho float64) column.Density {
			return column.EquationOfState{Reference: rho, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293.15}
		}
		c.Layers[3].Density = column.Reaction{Protolith: eos(3420), Product: eos(3600), Extent: 0.2, Cap: 0.9,
			Field:    &column.StabilityField{Above: 1.1e9, At: 1073.15, Slope: 1.2e6},
			Kinetics: &column.Kinetics{Prefactor: 2e-5, ActivationEnergy: 210e3}}
		ev, err := heat.Begin(heat.Plan{Column: c, Tolerance: tol, ExtensionRate: e,
			Events: append([]heat.Event{{Verb: "change-base", Temperature: base - colder}}, events...)})
		return Heated{ev}, err
	}}
}

// growing adds rock to the root's base for a while: a tenth of its thickness.
func growing() heat.Event {
	return heat.Event{Verb: "accumulate", Layer: "root", From: 0.5 * myr, To: 3 * myr, Rate: 1.2e3 / (2.5 * myr), Temperature: 1350}
}

// In Newtonian rock the closure's times for a root that reacts and grows are those of the
// linear course, whose states and forces are made otherwise: to 2e-4 where nothing comes
// (measured). Rock that comes to the base and reacts within the last cells moves any
// course's times by some 0.5 % (TestRundalRuns).
func TestSoftReactingNewtonian(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	set := common()
	set.Window = 50 * myr
	for _, v := range []struct {
		e      float64
		events []heat.Event
	}{{0, nil}, {1e-16, []heat.Event{growing()}}} {
		p := reacting(0.003, v.e, v.events...)
		list := []float64{60e3, 150e3}
		want := followed(t, p, set, list, nil)
		checked := 0
		for i, lambda := range list {
			q := soften(t, p, set)
			a, exact := q.must(t, lambda, slow), want.grid.list[i].times[1]
			t.Logf("e %g, %d events, %g km: %.7g, linear %.7g Myr; %d stretches, %d states", v.e, len(v.events), lambda/1e3, a.Time/myr, exact/myr, len(q.course.stretches), len(want.grid.list[i].y))
			if math.IsInf(exact, 1) {
				continue
			}
			checked++
			most := 1e-3
			if len(v.events) > 0 {
				most = 5e-3
			}
			if !(math.Abs(a.Time/exact-1) < most) {
				t.Errorf("e %g, %g m: %g s, linear %g", v.e, lambda, a.Time, exact)
			}
		}
		if checked == 0 {
			t.Error("nothing drips")
		}
	}
}

// Nodes four times as close and finer steps move no drip of a root that reacts by 0.1 %,
// and by 0.8 % (measured) where it grows: four times as many nodes again move that one by
// 0.4 % the other way, so that it is the column's own unrest, see TestRundalRuns.
func TestSoftReactingFinely(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and minutes under the race detector")
	}
	rocks := func(base float64) *column.Column { return sticky(base, 0.003) }
	checked := 0
	for _, v := range []struct {
		lambda, most float64
		events       []heat.Event
	}{{80e3, 1e-3, nil}, {150e3, 1e-3, nil}, {80e3, 1e-2, []heat.Event{growing()}}} {
		p, lambda := reactingIn(rocks, 1750, 150, 0.003, 0, v.events...), v.lambda
		whole, fine := soften(t, p, softly()), soften(t, p, softly())
		fine.course.spacing, fine.error = softSpacing/16, softError/8
		a, b := whole.must(t, lambda, best), fine.must(t, lambda, best)
		t.Logf("%g km: %.6g and %.6g Myr, %d stretches, %d and %d steps", lambda/1e3, a.Time/myr, b.Time/myr, len(whole.course.stretches), a.Steps, b.Steps)
		if math.IsInf(a.Time, 1) != math.IsInf(b.Time, 1) || !math.IsInf(a.Time, 1) && math.Abs(a.Time/b.Time-1) > v.most {
			t.Errorf("%g m: %g and %g s", lambda, a.Time, b.Time)
		}
		if !math.IsInf(a.Time, 1) {
			checked++
		}
	}
	if checked == 0 {
		t.Error("nothing drips")
	}
}
