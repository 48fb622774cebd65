package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// gradedRoot is stiff with a root whose density grades; invented.
func gradedRoot() *column.Column {
	c := stiff()
	c.Layers[2].Density = column.Linear{Top: 3250, Bottom: 3550}
	return c
}

// slicedRoot is gradedRoot with the root in n + 1 layers of one density each, the outer
// two half as thick, so that the contacts above and below are those of the graded one.
func slicedRoot(n int) *column.Column {
	c := stiff()
	root := c.Layers[2]
	c.Layers = c.Layers[:2]
	for i := range n + 1 {
		l := root
		l.Name = string(rune('A' + i))
		l.Thickness /= float64(n)
		if i == 0 || i == n {
			l.Thickness /= 2
		}
		l.Density = column.Uniform(3250 + 300*float64(i)/float64(n))
		c.Layers = append(c.Layers, l)
	}
	return c
}

// A column in which nothing changes, with a root that grades, against its exact solution,
// whose states are those of another mesh; by exponentials, and with twice the parts by
// rational steps. The tolerance is of ln amplitude: (t − t_exact) times the growth rate.
func TestGradedStill(t *testing.T) {
	s, err := state.New(gradedRoot(), 0)
	if err != nil {
		t.Fatal(err)
	}
	set := common()
	set.Window = 60 * myr
	p, err := newProblem(s, set, 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, finer := range []int{1, 2} {
		d, err := newThrough(ctx, cold(gradedRoot(), 0), set, Options{})
		if err != nil {
			t.Fatal(err)
		}
		d.course.finer = finer
		if d.grid, err = newGroup(d.course, set, octaves(20e3, 400e3, 9), 0); err != nil {
			t.Fatal(err)
		}
		if err := d.to(ctx, set.Window); err != nil {
			t.Fatal(err)
		}
		n, worst := 0, 0.0
		for _, f := range d.grid.list {
			x, err := p.frozen(p.solver, f.first)
			if err != nil {
				t.Fatal(err)
			}
			for j, m := range amplitudes {
				want := x.Time(24/m, set.Window) // the root is 24 amplitudes thick
				if got := f.times[j]; math.IsInf(got, 1) != math.IsInf(want, 1) {
					t.Errorf("λ %g: %g s, exact %g", f.first, got, want)
				} else if !math.IsInf(got, 1) {
					n++
					worst = math.Max(worst, math.Abs(got-want)*x.Fastest())
				}
			}
		}
		t.Logf("%d drips, off by %.2g of ln amplitude", n, worst)
		if n == 0 || worst > 2e-6 {
			t.Errorf("parts × %d: %d drips, off by %.2g of ln amplitude", finer, n, worst)
		}
	}
}

// A root that grades is the limit of one in many uniform layers, of second order in their
// thickness; at rest, and while the column stretches or thickens.
func TestGradedSliced(t *testing.T) {
	set := common()
	set.Window = 40 * myr
	for _, e := range []float64{0, 1e-15, -5e-16} {
		time := func(c *column.Column) float64 {
			return followed(t, cold(c, e), set, []float64{70e3}, nil).grid.list[0].times[1]
		}
		want := time(gradedRoot())
		a, b := time(slicedRoot(10))/want-1, time(slicedRoot(20))/want-1
		t.Logf("e %g: %.6g Myr; 10 layers %+.3g, 20 %+.3g, extrapolated %+.2g", e, want/myr, a, b, b+(b-a)/3)
		if !(want < set.Window) || math.Abs(b+(b-a)/3) > 3e-6 || math.Abs(a/b-4) > 0.1 {
			t.Errorf("e %g: %g Myr; off by %g in 10 layers, %g in 20", e, want/myr, a, b)
		}
	}
}

// A rational step is the exponential, also beside a rate that is 1e7 times faster, and
// where there are more steps than one. A is symmetric under a change of lengths by 1e3.
func TestRational(t *testing.T) {
	const n = 24
	a := make([]float64, n*n)
	for i := range n {
		for j := range n {
			size := 1 / (1 + math.Abs(float64(i-j)))
			a[i*n+j] = -size * math.Pow(1e3, float64(i-j)/n)
		}
		a[i*n+i] = 0.3 - 0.2*float64(i)
	}
	a[0] = -1e7
	y := make([]float64, n)
	y[n/2] = 1
	for _, h := range []float64{0.1, 1, 3} {
		var exact, fast stepper
		want, got := make([]float64, n), make([]float64, n)
		exact.set(a, n, h, math.Inf(1))
		l := exact.apply(want, y)
		fast.set(a, n, h, 2)
		m := fast.apply(got, y)
		if exact.steps != 0 || fast.steps < 1 {
			t.Fatalf("%d and %d steps", exact.steps, fast.steps)
		}
		var worst, size float64
		for i := range want {
			weigh := math.Pow(1e3, -float64(i)/n)
			worst = math.Max(worst, weigh*math.Abs(got[i]*math.Exp(m-l)-want[i]))
			size = math.Max(size, weigh*math.Abs(want[i]))
		}
		t.Logf("h %g: %d steps, off by %.2g", h, fast.steps, worst/size)
		if worst > 1e-6*size {
			t.Errorf("h %g: off by %g", h, worst/size)
		}
	}
}

// A root that is taken away before it drips ends the course, also beyond the window.
func TestRootGone(t *testing.T) {
	set := common()
	set.Window = 5 * myr
	p := cooling(0.05, 0, heat.Event{Verb: "remove", Layer: "root", Share: 1, From: 2 * myr, To: 2 * myr})
	r, err := Through(ctx, p, set, Options{From: 50e3, To: 200e3})
	if err != nil || !math.IsInf(r.Time, 1) || r.Reason != "the root was gone before it could drip" {
		t.Errorf("%+v, %v", r, err)
	}
}

// The same as BenchmarkCourse, with a root that grades.
func BenchmarkCourseGraded(b *testing.B) {
	set := common()
	set.Window = 50 * myr
	list := octaves(20e3, 1000e3, 64)
	c := creeping(hot)
	c.Layers[3].Density = column.Linear{Top: 3400, Bottom: 3500}
	p := Plan{Reference: 1e-15, Begin: func() (Motion, error) {
		ev, err := heat.Begin(heat.Plan{Column: c, Tolerance: 0.05,
			Events: []heat.Event{{Verb: "change-base", Temperature: hot - 150}}})
		return Heated{ev}, err
	}}
	for b.Loop() {
		d, err := newThrough(ctx, p, set, Options{Workers: 1})
		if err != nil {
			b.Fatal(err)
		}
		if d.grid, err = newGroup(d.course, set, list, 1); err != nil {
			b.Fatal(err)
		}
		if err := d.to(ctx, set.Window); err != nil {
			b.Fatal(err)
		}
		b.ReportMetric(float64(len(d.course.legs)), "legs")
		b.ReportMetric(float64(len(d.grid.list[0].y)), "states")
	}
}
