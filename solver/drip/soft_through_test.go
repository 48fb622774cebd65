package drip

import (
	"math"
	"testing"
)

// The whole answer answers the quick one, and its drips come one after another.
func TestSoftThrough(t *testing.T) {
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
