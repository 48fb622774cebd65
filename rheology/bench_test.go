package rheology_test

import (
	"testing"

	"keelfall/rheology"
)

func BenchmarkRespond(b *testing.B) {
	c := rheology.Creep{
		Laws:   []rheology.Law{find(b, "dry olivine dislocation Hirth 2003"), find(b, "dry olivine diffusion Hirth 2003")},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24},
	}
	at := rheology.Conditions{T: 1300, P: 2e9, GrainSize: 1e-3}
	for b.Loop() {
		if _, err := c.Respond(1e-15, at); err != nil {
			b.Fatal(err)
		}
	}
}

func TestNoAllocationPlastic(t *testing.T) {
	c, at := everything(t)
	c.Laws = []rheology.Law{find(t, goetze)}
	c.Melt, c.Weakening = func(T, P float64) float64 { return 0.02 }, 30
	if n := testing.AllocsPerRun(100, func() {
		r, err := c.Respond(1e-15, at)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := c.StrainRate(r.Stress, at); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

// profile is a geotherm of 200 points to 2 GPa and 1600 K, and olivine with three
// mechanisms.
func profile(tb testing.TB) (f *rheology.Flow, T, P [200]float64) {
	c := rheology.Creep{
		Laws:   []rheology.Law{find(tb, "dry olivine dislocation Hirth 2003"), find(tb, "dry olivine diffusion Hirth 2003"), find(tb, goetze)},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e26},
	}
	f, err := c.For(rheology.Conditions{GrainSize: 1e-3})
	if err != nil {
		tb.Fatal(err)
	}
	for i := range T {
		T[i], P[i] = 600+5*float64(i), 1e7*float64(i)
	}
	return f, T, P
}

func BenchmarkProfile(b *testing.B) {
	f, T, P := profile(b)
	b.ReportAllocs()
	for b.Loop() {
		for i := range T {
			if _, err := f.Respond(1e-15, T[i], P[i]); err != nil {
				b.Fatal(err)
			}
		}
	}
}
