package drip

import (
	"math"
	"testing"
)

// A course is the same as many equal short steps taken one at a time, without pairs and
// extrapolation, by the exponential of the matrix in the middle of each.
func TestBruteForce(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and minutes under the race detector")
	}
	set := common()
	set.Window = 20 * myr
	const steps, lambda = 4000, 150e3
	for _, e := range []float64{0, 1e-15} {
		p := cooling(0.005, e)
		d := followed(t, p, set, []float64{lambda}, nil)
		f := d.grid.list[0]
		tp, err := newTape(p.Begin)
		if err != nil {
			t.Fatal(err)
		}
		c, err := newCourse(p, tp, set.Window)
		if err != nil {
			t.Fatal(err)
		}
		lay := c.first.lay
		y := make([]float64, 16)
		contact, _, n := lay.places()
		y = y[:n]
		y[contact[lay.rootBase]] = 1
		var log, time float64
		var s stepper
		h := set.Window / steps
		for i := range steps {
			if err := tp.advance(ctx, h*(float64(i)+0.5)); err != nil {
				t.Fatal(err)
			}
			m, err := c.look()
			if err != nil {
				t.Fatal(err)
			}
			if err := c.refine(m, nil, true); err != nil {
				t.Fatal(err)
			}
			if !m.lay.same(&lay) {
				y = lay.carry(&m.lay, y)
				lay = m.lay
				contact, _, _ = lay.places()
			}
			a, _, err := m.form.Matrix(lambda*math.Exp(m.strain), lay.parts)
			if err != nil {
				t.Fatal(err)
			}
			out := make([]float64, len(y))
			before := log + logSize(y[contact[lay.rootBase]])
			s.set(a, len(y), h, 0)
			log += s.apply(out, y)
			y = out
			after, want := log+logSize(y[contact[lay.rootBase]]), math.Log(m.root/set.Amplitude)
			if time == 0 && after >= want {
				time = h * (float64(i) + (want-before)/(after-before))
			}
		}
		got, want := f.log+logSize(f.y[f.base()]), log+logSize(y[contact[lay.rootBase]])
		t.Logf("e %g: %d legs, ln amplitude %.6f against %.6f, drip %.6g against %.6g Myr", e, len(d.course.legs), got, want, f.times[1]/myr, time/myr)
		if !f.done() && math.Abs(got-want) > 1e-4 {
			t.Errorf("e %g: ln amplitude %.6f, brute force %.6f", e, got, want)
		}
		if time > 0 && math.Abs(f.times[1]/time-1) > 5e-4 || time == 0 && !math.IsInf(f.times[1], 1) {
			t.Errorf("e %g: drip at %g Myr, brute force %g", e, f.times[1]/myr, time/myr)
		}
	}
}
