package rheology_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/rheology"
)

// TestYield: closed form by hand, C 20 MPa, φ 30°, λ 0.4, P 400 MPa:
// C cos φ + 0.6·0.5·400 = 17.3205 + 120 MPa; over 1 ± ½. Source: derived.
func TestYield(t *testing.T) {
	f := rheology.Friction{Cohesion: 20e6, Angle: math.Pi / 6, PoreFluid: 0.4}
	top := 20e6*math.Sqrt(3)/2 + 120e6
	for _, c := range []struct{ s, want float64 }{{0, top}, {1, top / 1.5}, {-1, top / 0.5}} {
		if got := f.Yield(400e6, c.s); !close(got, c.want, 1e-14) {
			t.Errorf("s = %g: %g, want %g", c.s, got, c.want)
		}
	}
}

// TestSmoothCap: a power law ε = τ³ that meets yield at its own stress is 2^(−1/8)
// weaker and twice as non-linear; far above yield it bears τ_y, n = 100. Source: derived.
func TestSmoothCap(t *testing.T) {
	c := rheology.Creep{Laws: []rheology.Law{plain(1e-24, 3)}, Friction: &rheology.Friction{Cohesion: 1e8}}
	for _, v := range []struct {
		rate, tau, n float64
		yields       bool
	}{
		{1e-6, 1e6, 3, false},
		{1, 1e8 * math.Pow(2, -0.125), 6, false},
		{1e3, 1e8, 100, true},
		{1e300, 1e8, 100, true},
	} {
		r, err := c.Respond(v.rate, rheology.Conditions{T: 1000, P: 3e8})
		// The cap itself is worth 1e-8/8 a decade away; the meeting is exact.
		if err != nil || !close(r.Stress, v.tau, 2e-9) || !close(r.Exponent, v.n, 2e-8) || v.rate != 1 && r.Yielding != v.yields {
			t.Errorf("ε = %g: %+v, %v; want %+v", v.rate, r, err, v)
		}
	}
	// A rock without strength bears what the lowest viscosity bears.
	c.Friction = &rheology.Friction{Angle: 0.5}
	c.Limits.Lowest = 1e3
	r, err := c.Respond(1, rheology.Conditions{T: 1000})
	if err != nil || r.Stress != 2e3 || r.Exponent != 1 || !r.Floored || !r.Yielding {
		t.Errorf("no strength: %+v, %v", r, err)
	}
}

func TestFrictionErrors(t *testing.T) {
	for _, c := range []struct {
		f     rheology.Friction
		sense float64
		want  string
	}{
		{rheology.Friction{Cohesion: -1}, 0, "cohesion -1 Pa"},
		{rheology.Friction{Cohesion: 1, Angle: math.Pi / 2}, 0, "angle 1.57"},
		{rheology.Friction{Cohesion: 1, PoreFluid: 1.1}, 0, "pore-fluid factor 1.1"},
		{rheology.Friction{}, 0, "leaves no strength"},
		{rheology.Friction{Angle: 0.5, PoreFluid: 1}, 0, "leaves no strength"},
		{rheology.Friction{Cohesion: 1}, 0.5, "sense of strain 0.5"},
	} {
		creep := rheology.Creep{Laws: []rheology.Law{plain(1, 1)}, Friction: &c.f}
		if _, err := creep.Respond(1, rheology.Conditions{T: 1000, Sense: c.sense}); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%+v: %v, want %s", c.f, err, c.want)
		}
	}
	creep := rheology.Creep{Laws: []rheology.Law{plain(1, 1)}, Friction: &rheology.Friction{Cohesion: 1e6}}
	if _, err := creep.StrainRate(1e6, rheology.Conditions{T: 1000}); err == nil || !strings.Contains(err.Error(), "not below the yield stress") {
		t.Errorf("at yield: %v", err)
	}
}

// TestPiezometer: at 100 MPa of differential stress, van der Wal et al. 1993 as recalled
// gives 15 mm × 100^−1.33 = 32.8 µm; a diffusion law then flows as τ^(n + m p), and what
// is found agrees with itself. Source: derived.
func TestPiezometer(t *testing.T) {
	p, err := rheology.FindPiezometer("Olivine")
	if err != nil {
		t.Fatal(err)
	}
	if got, want := p.GrainSize(100e6/math.Sqrt(3)), 0.015*math.Pow(100, -1.33); !close(got, want, 1e-13) {
		t.Errorf("%g m, want %g", got, want)
	}
	diffusion := find(t, "dry olivine diffusion Hirth 2003")
	at := rheology.Conditions{T: 1400, P: 1e9}
	c := rheology.Creep{Laws: []rheology.Law{diffusion}, Piezometer: p}
	a, err1 := c.Respond(1e-15, at)
	b, err2 := c.Respond(1e-13, at)
	if n := math.Log(100) / math.Log(b.Stress/a.Stress); err1 != nil || err2 != nil || !close(n, 1+3*1.33, 1e-12) || a.Exponent != 1 {
		t.Errorf("follows as %g, held %g; %v %v", n, a.Exponent, err1, err2)
	}
	c.Laws = append(c.Laws, find(t, "dry olivine dislocation Hirth 2003"))
	c.Limits, c.Factor = rheology.Limits{Lowest: 1e17, Highest: 1e25}, 3
	r, err := c.Respond(1e-15, at)
	if err != nil {
		t.Fatal(err)
	}
	at.GrainSize, c.Piezometer = r.GrainSize, nil
	held, err := c.Respond(1e-15, at)
	if err != nil || !close(held.Stress, r.Stress, 1e-12) || !close(held.Exponent, r.Exponent, 1e-11) {
		t.Errorf("%+v with its grain size given: %+v, %v", r, held, err)
	}
	c.Piezometer = p
	if s := c.Cautions([]rheology.Use{{T: at.T, P: at.P}}); len(s) == 0 || !strings.Contains(s[len(s)-1], "van der Wal et al. 1993") {
		t.Errorf("cautions %q do not say that the piezometer was recalled", s)
	}
	if _, err := rheology.FindPiezometer("quartz"); err == nil || !strings.Contains(err.Error(), "known are olivine") {
		t.Errorf("quartz: %v", err)
	}
}

func everything(t testing.TB) (rheology.Creep, rheology.Conditions) {
	p, _ := rheology.FindPiezometer("olivine")
	dis, dif := find(t, "dry olivine dislocation Hirth 2003"), find(t, "dry olivine diffusion Hirth 2003")
	m := rheology.Mixture{Rule: rheology.Geometric, Phases: []rheology.Phase{{Fraction: 0.6, Laws: []rheology.Law{dis, dif}}, {Fraction: 0.4, Laws: []rheology.Law{find(t, "dry eclogite Zhang 2007")}}}}
	return rheology.Creep{
		Mixtures: []rheology.Mixture{m}, Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24}, Piezometer: p,
		Friction: &rheology.Friction{Cohesion: 20e6, Angle: 0.5},
	}, rheology.Conditions{T: 1300, P: 2e9}
}

func TestNoAllocationMixed(t *testing.T) {
	c, at := everything(t)
	if n := testing.AllocsPerRun(100, func() {
		r, _ := c.Respond(1e-15, at)
		c.StrainRate(r.Stress, at)
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

func BenchmarkRespondMixed(b *testing.B) {
	all, at := everything(b)
	f, _ := all.For(at)
	for _, v := range []struct {
		name string
		run  func() error
	}{
		{"everything", func() error { _, err := all.Respond(1e-15, at); return err }},
		{"everything, made ready", func() error { _, err := f.Respond(1e-15, at.T, at.P); return err }},
	} {
		b.Run(v.name, func(b *testing.B) {
			for b.Loop() {
				if err := v.run(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	c := rheology.Creep{Laws: all.Mixtures[0].Phases[0].Laws, Limits: all.Limits, Friction: all.Friction, Piezometer: all.Piezometer}
	b.Run("friction and piezometer", func(b *testing.B) {
		for b.Loop() {
			if _, err := c.Respond(1e-15, at); err != nil {
				b.Fatal(err)
			}
		}
	})
}
