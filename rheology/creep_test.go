package rheology_test

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"keelfall/rheology"

	"pgregory.net/rapid"
)

func close(got, want, rtol float64) bool { return math.Abs(got-want) <= rtol*math.Abs(want) }

func find(t testing.TB, name string) rheology.Law {
	l, err := rheology.Find(name)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// plain is a law that does not depend on conditions: ε = a τ^n.
func plain(a, n float64) rheology.Law { return rheology.Law{Name: "plain", A: a, N: n} }

func TestTangentExponent(t *testing.T) {
	for _, c := range []struct {
		name   string
		laws   []rheology.Law
		rate   float64
		want   float64
		rtol   float64
		source string
	}{
		{"equal rates of n 1 and 3.5", []rheology.Law{plain(1, 1), plain(1, 3.5)}, 2, 2.25, 1e-14, "derived: mean of the exponents"},
		{"1·τ + 2·τ^3.5 at ε 0.8", []rheology.Law{plain(1, 1), plain(2, 3.5)}, 0.8, 1.777334739, 3e-10, "derived in arbitrary precision; rtol = last digit kept"},
	} {
		creep := rheology.Creep{Laws: c.laws}
		r, err := creep.Respond(c.rate, rheology.Conditions{T: 1000})
		if err != nil || !close(r.Exponent, c.want, c.rtol) {
			t.Errorf("%s: n = %.12g, %v; want %.12g (%s)", c.name, r.Exponent, err, c.want, c.source)
		}
	}
}

// TestLimits: a Newtonian rock with both limits is springs-and-dashpots arithmetic,
// η = 1/(1/η_c + 1/η_high) + η_low. Source: derived.
func TestLimits(t *testing.T) {
	for _, c := range []struct {
		eta, low, high  float64
		capped, floored bool
	}{
		{1e21, 0, 0, false, false},
		{1e21, 1e18, 1e24, false, false},
		{3e24, 1e18, 1e24, true, false},
		{1e17, 1e18, 1e24, false, true},
		{9e23, 0, 1e24, false, false},
		{1.1e24, 0, 1e24, true, false},
	} {
		creep := rheology.Creep{Laws: []rheology.Law{plain(1/(2*c.eta), 1)}, Limits: rheology.Limits{Lowest: c.low, Highest: c.high}}
		r, err := creep.Respond(1e-15, rheology.Conditions{T: 1000})
		if err != nil {
			t.Fatal(err)
		}
		want := c.eta
		if c.high > 0 {
			want = 1 / (1/c.eta + 1/c.high)
		}
		want += c.low
		if !close(r.Viscosity, want, 1e-13) || !close(r.Exponent, 1, 1e-14) {
			t.Errorf("η = %g within %g and %g: %.15g, n %g; want %.15g", c.eta, c.low, c.high, r.Viscosity, r.Exponent, want)
		}
		if r.Capped != c.capped || r.Floored != c.floored {
			t.Errorf("η = %g: capped %v, floored %v; want %v, %v", c.eta, r.Capped, r.Floored, c.capped, c.floored)
		}
	}
}

// rock draws one to three laws of the catalogue that agree on water, limits, a factor
// and conditions from 250 to 2500 K.
func rock(t *rapid.T) (rheology.Creep, rheology.Conditions) {
	measure := rapid.SampledFrom([]rheology.WaterMeasure{rheology.WaterFugacity, rheology.WaterContent}).Draw(t, "water measure")
	var fit []rheology.Law
	for _, l := range rheology.Laws() {
		if l.Water == rheology.NoWater || l.Water == measure {
			fit = append(fit, l)
		}
	}
	logs := func(name string, low, high float64) float64 {
		return math.Exp(rapid.Float64Range(math.Log(low), math.Log(high)).Draw(t, name))
	}
	c := rheology.Creep{Factor: logs("factor", 1e-3, 1e3)}
	for range rapid.IntRange(1, 3).Draw(t, "laws") {
		c.Laws = append(c.Laws, rapid.SampledFrom(fit).Draw(t, "law"))
	}
	if rapid.Bool().Draw(t, "limited") {
		c.Limits = rheology.Limits{Lowest: logs("lowest", 1e15, 1e20), Highest: logs("highest", 1e20, 1e27)}
	}
	at := rheology.Conditions{
		T: rapid.Float64Range(250, 2500).Draw(t, "T"), P: rapid.Float64Range(0, 6e9).Draw(t, "P"),
		GrainSize: logs("grain size", 1e-6, 1e-1), Water: logs("water", 1e6, 1e10), WaterMeasure: measure,
	}
	if measure == rheology.WaterContent {
		at.Water = logs("content", 10, 1e4)
	}
	return c, at
}

func TestStressOfRateOfStress(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		rate := math.Pow(10, rapid.Float64Range(-40, 0).Draw(t, "log10 rate"))
		r, err := c.Respond(rate, at)
		if err != nil {
			t.Fatal(err)
		}
		if !close(r.Viscosity*2*rate, r.Stress, 1e-14) {
			t.Fatalf("η = %g is not τ/2ε = %g", r.Viscosity, r.Stress/2/rate)
		}
		back, err := c.StrainRate(r.Stress, at)
		if err != nil {
			t.Fatal(err)
		}
		// The rate from the stress, then the stress from that rate. A rate is the
		// n-th power of a stress, up to 5.5 for these laws, hence 1e-11 before 1e-12.
		if !close(back, rate, 1e-11) {
			t.Fatalf("rate %.16g, back %.16g", rate, back)
		}
		again, err := c.Respond(back, at)
		if err != nil || !close(again.Stress, r.Stress, 1e-12) {
			t.Fatalf("stress %.16g, again %.16g, %v", r.Stress, again.Stress, err)
		}
	})
}

func TestExponentAgainstDifferences(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		rate := math.Pow(10, rapid.Float64Range(-40, 0).Draw(t, "log10 rate"))
		const h = 1e-4
		up, err1 := c.Respond(rate*math.Exp(h), at)
		mid, err2 := c.Respond(rate, at)
		down, err3 := c.Respond(rate*math.Exp(-h), at)
		if err := errors.Join(err1, err2, err3); err != nil {
			t.Fatal(err)
		}
		n := 2 * h / math.Log(up.Stress/down.Stress)
		// Differences: h² times a third derivative of order one, and round-off 1e-12/h.
		if !close(mid.Exponent, n, 1e-6) {
			t.Fatalf("n = %.10g, by differences %.10g", mid.Exponent, n)
		}
	})
}

// TestExponentIsTheMean: n = Σ n_i ε_i/Σ ε_i with each law's rate taken on its own at
// the stress found. The definition; 1e-11 because a rate is a power of the stress.
func TestExponentIsTheMean(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		c.Limits.Lowest = 0
		r, err := c.Respond(math.Pow(10, rapid.Float64Range(-40, 0).Draw(t, "log10 rate")), at)
		if err != nil {
			t.Fatal(err)
		}
		var rate, weighted float64
		if high := c.Limits.Highest; high > 0 {
			rate = r.Stress / (2 * high)
			weighted = rate
		}
		for _, l := range c.Laws {
			one := rheology.Creep{Laws: []rheology.Law{l}, Factor: c.Factor}
			e, err := one.StrainRate(r.Stress, at)
			if err != nil { // too slow for a float64: its share is zero
				continue
			}
			n := l.N
			if l.Plastic() { // its own exponent, which a test of its own compares
				r, err := one.Respond(e, at)
				if err != nil {
					t.Fatal(err)
				}
				n = r.Exponent
			}
			rate += e
			weighted += n * e
		}
		if !close(r.Exponent, weighted/rate, 1e-11) {
			t.Fatalf("n = %.15g, the mean is %.15g", r.Exponent, weighted/rate)
		}
	})
}

// TestFactorScales: with no limits, the factor multiplies stress and viscosity at a
// given rate and leaves the exponent alone.
func TestFactorScales(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		c.Limits = rheology.Limits{}
		f := c.Factor
		scaled, err1 := c.Respond(1e-15, at)
		c.Factor = 0
		bare, err2 := c.Respond(1e-15, at)
		if err := errors.Join(err1, err2); err != nil {
			t.Fatal(err)
		}
		if !close(scaled.Viscosity, f*bare.Viscosity, 1e-11) || !close(scaled.Exponent, bare.Exponent, 1e-9) {
			t.Fatalf("factor %g: %+v against %+v", f, scaled, bare)
		}
	})
}

func TestFlowIsCreep(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		f, err := c.For(at)
		if err != nil {
			t.Fatal(err)
		}
		a, err1 := c.Respond(1e-14, at)
		b, err2 := f.Respond(1e-14, at.T, at.P)
		ra, err3 := c.StrainRate(1e7, at)
		rb, err4 := f.StrainRate(1e7, at.T, at.P)
		if (err1 == nil) != (err2 == nil) || (err3 == nil) != (err4 == nil) || a != b || ra != rb {
			t.Fatalf("%+v %v, %+v %v; %g %v, %g %v", a, err1, b, err2, ra, err3, rb, err4)
		}
	})
}

func TestRespondErrors(t *testing.T) {
	dry, wet := find(t, "dry olivine dislocation Hirth 2003"), find(t, "wet olivine diffusion Hirth 2003")
	ok := rheology.Conditions{T: 1400, P: 1e9, GrainSize: 1e-3, Water: 1e8, WaterMeasure: rheology.WaterFugacity}
	with := func(f func(*rheology.Conditions)) rheology.Conditions { c := ok; f(&c); return c }
	for _, c := range []struct {
		name string
		law  rheology.Law
		rate float64
		at   rheology.Conditions
		want string
	}{
		{"rate 0", dry, 0, ok, "rheology: strain rate 0 1/s, must be > 0"},
		{"T below 0", dry, 1e-15, with(func(c *rheology.Conditions) { c.T = -3 }), "rheology: T = -3 K, must be > 0"},
		{"T not a number", dry, 1e-15, with(func(c *rheology.Conditions) { c.T = math.NaN() }), "rheology: T = NaN K, must be > 0"},
		{"P below 0", dry, 1e-15, with(func(c *rheology.Conditions) { c.P = -1 }), "rheology: P = -1 Pa, must be >= 0"},
		{"no grain size", wet, 1e-15, with(func(c *rheology.Conditions) { c.GrainSize = 0 }), "rheology: wet olivine diffusion Hirth 2003 needs a grain size"},
		{"no water", wet, 1e-15, with(func(c *rheology.Conditions) { c.Water = 0 }), "rheology: wet olivine diffusion Hirth 2003 needs a water fugacity in Pa"},
		{"the other measure", wet, 1e-15, with(func(c *rheology.Conditions) { c.WaterMeasure = rheology.WaterContent }), "rheology: wet olivine diffusion Hirth 2003 needs a water fugacity in Pa"},
	} {
		creep := rheology.Creep{Laws: []rheology.Law{c.law}}
		r, err := creep.Respond(c.rate, c.at)
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: %+v, %v; want %s", c.name, r, err, c.want)
		}
	}
	creep := rheology.Creep{Laws: []rheology.Law{dry}}
	if r, err := creep.Respond(1e-15, with(func(c *rheology.Conditions) { c.T = 1 })); err == nil {
		t.Errorf("1 K: %+v, want an error: the stress is beyond a float64", r)
	}
	if _, err := (&rheology.Creep{}).Respond(1e-15, ok); err == nil {
		t.Error("no law: want an error")
	}
	var needs *rheology.NeedsError
	creep.Laws[0] = wet
	if _, err := creep.StrainRate(1e6, rheology.Conditions{T: 1000}); !errors.As(err, &needs) || needs.Law != wet.Name {
		t.Errorf("want a NeedsError naming the law, got %v", err)
	}
}

func TestNoAllocation(t *testing.T) {
	c := rheology.Creep{
		Laws:   []rheology.Law{find(t, "dry olivine dislocation Hirth 2003"), find(t, "dry olivine diffusion Hirth 2003")},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e24},
	}
	at := rheology.Conditions{T: 1300, P: 2e9, GrainSize: 1e-3}
	if n := testing.AllocsPerRun(100, func() {
		r, _ := c.Respond(1e-15, at)
		c.StrainRate(r.Stress, at)
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

func ExampleCreep_Respond() {
	law, err := rheology.Find("dry olivine dislocation Hirth 2003")
	if err != nil {
		fmt.Println(err)
		return
	}
	creep := rheology.Creep{Laws: []rheology.Law{law}}
	r, err := creep.Respond(1e-15, rheology.Conditions{T: 1573.15, P: 2e9})
	fmt.Printf("%.1e Pa s, n = %.1f, %v\n", r.Viscosity, r.Exponent, err)
	// Output: 1.1e+20 Pa s, n = 3.5, <nil>
}
