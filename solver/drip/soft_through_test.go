package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/heat"
)

// The whole answer answers the quick one, and its drips come one after another.
func TestSoftThrough(t *testing.T) {
	if testing.Short() {
		t.Skip("one goroutine, and long under the race detector")
	}
	p, set := chilled(0.02, 3e-16), softly()
	r, err := Through(ctx, p, set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%.5g (%.5g, %.5g) Myr at %.4g km, %+v, %d drips", r.Time/myr, r.TimeLow/myr, r.TimeHigh/myr, r.Wavelength/1e3, r.Soft, len(r.Drips))
	s := r.Soft
	if r.Outcome != "drips" || !s.Strained || s.Best != r.Time || !(s.BestLow < s.Best && s.Best < s.BestHigh && s.Best < s.Slow*1.1) || !(r.TimeLow < r.Time && r.Time < r.TimeHigh) {
		t.Errorf("%s: %g (%g, %g) s, %+v", r.Outcome, r.Time, r.TimeLow, r.TimeHigh, s)
	}
	if n := len(r.First.Time); n < 3 || r.First.Time[n-1] != r.Time || len(r.First.Stress) != n || len(r.First.Background) != n || !(r.First.StrainRate[n-1] > 5*r.First.StrainRate[0]) {
		t.Errorf("first drip's trace: %+v", r.First)
	}
	if len(r.Traces) != len(r.Curve.Time) || len(r.Drips) < 2 {
		t.Errorf("%d traces of %d, %d drips", len(r.Traces), len(r.Curve.Time), len(r.Drips))
	}
	for i, d := range r.Drips {
		if i > 0 && !(d.Time > r.Drips[i-1].Time && d.Lost < r.Drips[i-1].Lost) {
			t.Errorf("drip %d: %+v after %+v", i, d, r.Drips[i-1])
		}
	}
	for _, near := range []float64{0, 1.2 * r.InitialWavelength} {
		got, err := ThroughTime(ctx, p, set, Options{Near: near})
		if err != nil || math.Abs(got/r.Time-1) > 5e-3 {
			t.Errorf("near %g m: %g s, want %g (%v)", near, got, r.Time, err)
		}
	}
	one, err := ThroughTimeAt(ctx, p, set, r.InitialWavelength)
	if err != nil || math.Abs(one/r.Time-1) > 1e-4 {
		t.Errorf("alone %g s, want %g (%v)", one, r.Time, err)
	}
	limited, err := Through(ctx, p, set, Options{Limit: 0.6 * r.Wavelength, LimitIs: "a limit"})
	if err != nil || limited.Wavelength > 0.6*r.Wavelength*(1+1e-6) || !(limited.Time > r.Time) || limited.Excluded == "" {
		t.Errorf("within a limit: %g s at %g m, %q, %v", limited.Time, limited.Wavelength, limited.Excluded, err)
	}
}

// 50 Myr, the spectrum's wavelengths, five layers of creep laws, with heat and snapshots.
func BenchmarkSoftCourse(b *testing.B) {
	set := softly()
	set.Window = 50 * myr
	for b.Loop() {
		if _, err := Through(ctx, chilled(0.05, 0), set, Options{Workers: 1}); err != nil {
			b.Fatal(err)
		}
	}
}

// The first drip alone, near a wavelength.
func BenchmarkSoftCourseTime(b *testing.B) {
	set := softly()
	for b.Loop() {
		if _, err := ThroughTime(ctx, chilled(0.05, 0), set, Options{Workers: 1, Near: 200e3}); err != nil {
			b.Fatal(err)
		}
	}
}

// The same in a column that is strained, without friction and where friction decides.
func BenchmarkSoftStrained(b *testing.B) {
	for _, v := range []struct {
		name   string
		column *column.Column
	}{{"creep", sticky(1750, 0.003)}, {"friction", breaking()}} {
		b.Run(v.name, func(b *testing.B) {
			set := softly()
			for b.Loop() {
				if _, err := ThroughTime(ctx, strainedBy(v.column, 3e-16), set, Options{Workers: 1, Near: 200e3}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// Where friction decides, the coarse tables and those that agree with the law to 1e-6 give
// one drip time.
func TestSoftFriction(t *testing.T) {
	set := softly()
	for _, lambda := range []float64{100e3, 200e3} {
		var times [2]float64
		for i := range times {
			q := soften(t, strainedBy(breaking(), 3e-16), set)
			q.course.fine = i == 1
			times[i] = q.must(t, lambda, slow).Time
		}
		t.Logf("%g km: %.7g and %.7g Myr", lambda/1e3, times[0]/myr, times[1]/myr)
		if !(math.Abs(times[0]/times[1]-1) < 1e-4) {
			t.Errorf("%g m: %g s, finely %g", lambda, times[0], times[1])
		}
	}
}

// breaking is sticky with friction in its crust; invented.
func breaking() *column.Column {
	c := sticky(1750, 0.003)
	for i := range 2 {
		c.Layers[i].Friction = &rheology.Friction{Cohesion: 20e6, Angle: math.Pi / 6, PoreFluid: 0.37}
	}
	return c
}

// strainedBy is a column whose base is made colder, extended at e in 1/s.
func strainedBy(c *column.Column, e float64) Plan {
	return Plan{Reference: 1e-15, Begin: func() (Motion, error) {
		ev, err := heat.Begin(heat.Plan{Column: c, Tolerance: 0.05, ExtensionRate: e,
			Events: []heat.Event{{Verb: "change-base", Temperature: 1600}}})
		return Heated{ev}, err
	}}
}
