package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/state"
)

// warmCourse is a drip time with T' of one wavelength on a course of a column that
// stretches at a rate in 1/s, its geotherm that of conduction at every time.
func warmCourse(t *testing.T, c *column.Column, e float64, thermal string, wavelength float64) [3]float64 {
	t.Helper()
	set := common()
	set.Window, set.Thermal = 60*myr, thermal
	d, err := newThrough(ctx, cold(c, e), set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	h, err := d.warmed(ctx, []float64{wavelength}, true)
	if err != nil {
		t.Fatal(err)
	}
	return h.grid.list[0].times
}

// On a course of a column that stands still, T' on its own elements gives the drip times
// of the whole system's exponential, whose elements are those of the flow.
func TestWarmCourseStill(t *testing.T) {
	for _, below := range []column.Boundary{column.HalfSpace, column.Inviscid, column.FreeSlip} {
		c := heavy(300, 1600, 1, below)
		s, err := state.New(c, 0)
		if err != nil {
			t.Fatal(err)
		}
		set := common()
		for _, thermal := range []string{"diffusive", "frozen"} {
			set.Thermal = thermal
			p, err := newProblem(s, set, 1)
			if err != nil {
				t.Fatal(err)
			}
			q, err := newWarm(p, s, 20*myr)
			if err != nil {
				t.Fatal(err)
			}
			want, err := q.times(90e3)
			if err != nil {
				t.Fatal(err)
			}
			for i, got := range warmCourse(t, c, 0, thermal, 90e3) {
				if off := got/want[i] - 1; !(math.Abs(off) < 2e-5) {
					t.Errorf("base %v, %s: %.8g, want %.8g Myr: off by %.2g", below, thermal, got/myr, want[i]/myr, off)
				}
			}
		}
	}
}

// Where nothing diffuses, T' on a course of a column that stretches is frozen: a geotherm
// of conduction thins with the rock, and dT'/dt = −γW is then d(γζ)/dt.
func TestWarmCourseStretching(t *testing.T) {
	for i, below := range []column.Boundary{column.HalfSpace, column.Inviscid, column.HalfSpace, column.Inviscid} {
		e := []float64{3e-16, 3e-16, -3e-16, -3e-16}[i]
		c := heavy(300, 1600, 1e-9, below)
		want, none := warmCourse(t, c, e, "frozen", 90e3), warmCourse(t, c, e, "none", 90e3)
		for i, got := range warmCourse(t, c, e, "diffusive", 90e3) {
			t.Logf("base %v, e %g: %.6g, frozen %.6g, none %.6g Myr", below, e, got/myr, want[i]/myr, none[i]/myr)
			if off := got/want[i] - 1; !(math.Abs(off) < 1e-4) || math.Abs(got/none[i]-1) < 1e-3 {
				t.Errorf("e %g: %.8g, frozen %.8g Myr: off by %.2g", e, got/myr, want[i]/myr, off)
			}
		}
	}
}

// Projected on elements laid out anew, T' stays what it is where the rock does, and
// rock that came has that of its edge.
func TestWarmCarried(t *testing.T) {
	set := common()
	set.Thermal = "diffusive"
	d, err := newThrough(ctx, cold(heavy(300, 1600, 1, column.Inviscid), 0), set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	h, err := d.warmed(ctx, []float64{90e3}, true)
	if err != nil {
		t.Fatal(err)
	}
	f := h.grid.list[0]
	l, m := f.lay, f.lay
	m.heat = nil
	for i, ends := range l.heat {
		var own []float64
		for q := range 2*len(ends) - 1 { // twice as many; the last layer ends lower, where rock came
			x := float64(q) / float64(2*len(ends)-2)
			own = append(own, ends[0]+x*(ends[len(ends)-1]-ends[0]))
		}
		if i == len(l.heat)-1 {
			own = append(own, own[len(own)-1]+2e3)
		}
		m.heat = append(m.heat, own)
	}
	y := l.carry(&m, f.y)
	back := m.carry(&l, y)
	var size, off float64
	for i := len(f.y) - l.heatStates(); i < len(f.y); i++ {
		size, off = math.Max(size, math.Abs(f.y[i])), math.Max(off, math.Abs(f.y[i]-back[i]))
	}
	if size == 0 || off > 1e-9*size {
		t.Errorf("T' of size %g came back changed by %g", size, off)
	}
}

// Halving all steps moves no drip with T' by 0.1 % in a column that cools, stretching or
// not, from below which rock comes in as it stretches.
func TestWarmHalved(t *testing.T) {
	for _, e := range []float64{0, 3e-16} {
		set := common()
		set.Window = 50 * myr
		p := cooling(0.02, e)
		none := followed(t, p, set, []float64{60e3, 120e3}, nil)
		p.thermal = "diffusive"
		own := followed(t, p, set, []float64{60e3, 120e3}, nil)
		half := followed(t, p, set, []float64{60e3, 120e3}, own.course)
		n := 0
		for i, f := range own.grid.list {
			for j, a := range f.times {
				b := half.grid.list[i].times[j]
				t.Logf("e %g, λ %g km: %.6g Myr, halved %+.2g; without T' %+.3g; %d states", e, f.first/1e3, a/myr, b/a-1, none.grid.list[i].times[j]/a-1, len(f.y))
				if math.IsInf(a, 1) && math.IsInf(b, 1) {
					continue
				}
				if n++; !(math.Abs(b/a-1) < 1e-3) {
					t.Errorf("e %g, λ %g: %g Myr, with steps halved %g", e, f.first, a/myr, b/myr)
				}
			}
		}
		if n == 0 {
			t.Errorf("e %g: nothing drips", e)
		}
	}
}

// Through answers with T' for the first drip and those after it, and its first trace ends
// at the drip; the ratio of one wavelength is near that of the answer.
func TestWarmThrough(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	set := common()
	set.Window = 40 * myr
	none, err := Through(ctx, cooling(0.02, 0), set, Options{From: 80e3, To: 240e3})
	if err != nil {
		t.Fatal(err)
	}
	set.Thermal = "diffusive"
	r, err := Through(ctx, cooling(0.02, 0), set, Options{From: 80e3, To: 240e3})
	if err != nil {
		t.Fatal(err)
	}
	w := r.Thermal
	if w == nil || !w.Included || w.With != r.Time || w.Without != none.Time || !(w.With < w.Without) {
		t.Fatalf("%+v; with T' %g, without %g Myr", w, r.Time/myr, none.Time/myr)
	}
	t.Logf("%.5g Myr at %.4g km, without T' %.5g at %.4g km; %d drips, without T' %d", r.Time/myr, r.Wavelength/1e3, none.Time/myr, none.Wavelength/1e3, len(r.Drips), len(none.Drips))
	last := len(r.First.Base) - 1
	if off := r.First.Time[last]/r.Time - 1; math.Abs(off) > 1e-3 {
		t.Errorf("the first trace ends at %g, the drip is at %g Myr", r.First.Time[last]/myr, r.Time/myr)
	}
	if a := r.First.Base[last-1]; !(a < 12e3 && a > 5e3) || !(r.First.StrainRate[last] > r.First.StrainRate[0]) {
		t.Errorf("%g m just before the drip, strain rates %g to %g 1/s", a, r.First.StrainRate[0], r.First.StrainRate[last])
	}
	if !(r.TimeLow < r.Time && r.Time < r.TimeHigh) || len(r.Drips) == 0 || r.Drips[0].Time != r.Time {
		t.Errorf("band %g to %g about %g, drips %+v", r.TimeLow, r.TimeHigh, r.Time, r.Drips)
	}
	one, err := linearThermal(ctx, cooling(0.02, 0), set, Options{}, r.InitialWavelength)
	if err != nil {
		t.Fatal(err)
	}
	if off := one.With/r.Time - 1; math.Abs(off) > 2e-3 || one.Included {
		t.Errorf("one wavelength %+v, the answer %g s", one, r.Time)
	}
}
