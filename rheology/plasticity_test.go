package rheology_test

import (
	"math"
	"strings"
	"testing"

	"keelfall/rheology"

	"pgregory.net/rapid"
)

const (
	goetze = "dry olivine low-temperature plasticity Goetze 1979"
	mei    = "dry olivine low-temperature plasticity Mei 2010"
)

// plastic draws a law of low-temperature plasticity: one of the catalogue, or any.
func plastic(t *rapid.T) rheology.Law {
	switch rapid.IntRange(0, 3).Draw(t, "plasticity") {
	case 0:
		l, _ := rheology.Find(goetze)
		return l
	case 1:
		l, _ := rheology.Find(mei)
		return l
	}
	f := func(name string, low, high float64) float64 { return rapid.Float64Range(low, high).Draw(t, name) }
	l := rheology.Law{Name: "drawn", N: f("s", 0, 3), E: f("E", 1e5, 7e5), V: f("V", 0, 2e-5), Test: rheology.AxialCompression}
	l.Peierls = rheology.Peierls{Stress: f("τ_P", 5e8, 1e10), PerPa: f("per Pa", 0, 1e-10), P: f("p", 0.2, 1), Q: f("q", 1, 2)}
	if l.N < 0.5 || rapid.Bool().Draw(t, "kept out") {
		l.Peierls.Least = f("τ_0", 1e7, 2e8)
	}
	if l.N < 0.5 {
		l.N = 0
	}
	// Where stress nears τ_P at a rate that is drawn, n may be 0.001, and nothing is known
	// to 1e-10: the rate at τ_P is kept well above 1/s, as any attempt frequency is.
	l.A = math.Exp(f("ln rate at τ_P", 5, 60) - l.N*math.Log(l.Peierls.Stress))
	return l
}

// byHand returns ln ε and n of one law as its formula reads, at x = ln τ of the unscaled
// rock. Source: the definition in Peierls' comment, the exponent by differentiating it.
func byHand(l *rheology.Law, x float64, at rheology.Conditions) (ln, n float64) {
	ln, n = math.Log(l.A)+l.N*x, l.N
	if l.M != 0 {
		ln -= l.M * math.Log(at.GrainSize)
	}
	if l.R != 0 {
		ln += l.R * math.Log(at.Water)
	}
	h := (l.E + at.P*l.V) / (rheology.GasConstant * at.T)
	b := l.Peierls
	if b.Stress == 0 {
		return ln - h, n
	}
	peak := math.Log(b.Stress * (1 + b.PerPa*at.P))
	r := math.Exp(min(x, peak) - peak)
	u := math.Pow(r, b.P)
	ln -= h * math.Pow(1-u, b.Q)
	if r < 1 {
		n += h * b.P * b.Q * u * math.Pow(1-u, b.Q-1)
	} else {
		k := 0.0
		if b.Q == 1 {
			k = h * b.P
		}
		n = max(1, l.N+k)
		ln += (n - l.N) * (x - peak)
	}
	if b.Least > 0 {
		w := math.Exp(8 * (x - math.Log(b.Least)))
		if w < 1e-6 {
			ln += 8*(x-math.Log(b.Least)) - w/2
			n += 8 * (1 - w/2)
		} else if w < 700 {
			ln += math.Log(1 - math.Exp(-w)) // loses 1e-10 at w = 1e-6
			n += 8 * w / (math.Exp(w) - 1)
		}
	}
	return ln, n
}

// TestAgainstBisection: two or three mechanisms at one stress, found again by bisecting
// the sum of the formulas; 1e-10 in stress, rate and exponent is what is promised. A rate
// is up to the 200th power of the stress.
func TestAgainstBisection(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c, at := rock(t)
		c.Laws = append(c.Laws[:min(len(c.Laws), 2)], plastic(t))
		if rapid.Bool().Draw(t, "alone") {
			c.Laws = c.Laws[len(c.Laws)-1:]
		}
		c.Limits.Lowest = 0
		at.T = rapid.Float64Range(300, 2000).Draw(t, "T again")
		melt := rapid.Float64Range(0, 0.3).Draw(t, "melt")
		c.Melt, c.Weakening = func(T, P float64) float64 { return melt }, rapid.Float64Range(0, 45).Draw(t, "weakening")
		lnE := rapid.Float64Range(-40, 0).Draw(t, "log10 rate") * math.Ln10

		sum := func(x float64) (ln, n float64) {
			lns, ns := make([]float64, 0, 4), make([]float64, 0, 4)
			for i := range c.Laws {
				l, n := byHand(&c.Laws[i], x-math.Log(c.Factor), at)
				lns, ns = append(lns, l+melt*c.Weakening), append(ns, n)
			}
			if high := c.Limits.Highest; high > 0 {
				lns, ns = append(lns, x-math.Log(2*high)), append(ns, 1)
			}
			top := math.Inf(-1)
			for _, l := range lns {
				top = max(top, l)
			}
			var s, m float64
			for i, l := range lns {
				s += math.Exp(l - top)
				m += ns[i] * math.Exp(l-top)
			}
			return top + math.Log(s), m / s
		}
		low, high := -1000.0, 1000.0
		for range 200 {
			if mid := low + (high-low)/2; mid <= low || mid >= high {
				break
			} else if ln, _ := sum(mid); ln < lnE {
				low = mid
			} else {
				high = mid
			}
		}
		_, n := sum(high)
		r, err := c.Respond(math.Exp(lnE), at)
		if high > 690 || high < -690 {
			t.Skip("a stress beyond a float64")
		}
		if err != nil || !close(r.Stress, math.Exp(high), 1e-10) || !close(r.Exponent, n, 1e-9) {
			t.Fatalf("τ = %.15g, n = %.15g, %v; by bisection %.15g, %.15g", r.Stress, r.Exponent, err, math.Exp(high), n)
		}
		back, err := c.StrainRate(r.Stress, at)
		if err != nil || !close(back, math.Exp(lnE), 1e-10) {
			t.Fatalf("rate %.15g, %v; was %.15g", back, err, math.Exp(lnE))
		}
	})
}

// TestPeierlsStress: at τ_P the barrier is gone and ε = A τ^n; the curve is continuous
// there and rises beyond, with the exponent 1 at least. Source: derived.
func TestPeierlsStress(t *testing.T) {
	for _, name := range []string{goetze, mei} {
		l := find(t, name)
		c := rheology.Creep{Laws: []rheology.Law{l}}
		at := rheology.Conditions{T: 900}
		p := l.Peierls.Stress
		var ln []float64
		for _, tau := range []float64{p * (1 - 1e-9), p, p * (1 + 1e-9), p * 2} {
			e, err := c.StrainRate(tau, at)
			if err != nil {
				t.Fatal(err)
			}
			ln = append(ln, math.Log(e))
		}
		if want := math.Log(l.A) + l.N*math.Log(p); !close(ln[1], want, 1e-14) {
			t.Errorf("%s at τ_P: ln ε = %.15g, want %.15g", name, ln[1], want)
		}
		if n := (ln[3] - ln[1]) / math.Ln2; ln[1]-ln[0] > 1e-6 || ln[2]-ln[1] > 1e-6 || n < 1-1e-12 {
			t.Errorf("%s about and beyond τ_P: %.12g, n = %g", name, ln, n)
		}
		r, err := c.Respond(math.Exp(ln[3]), at)
		if err != nil || !close(r.Stress, 2*p, 1e-12) {
			t.Errorf("%s beyond τ_P: %+v, %v", name, r, err)
		}
	}
}

// TestKeptOut: Goetze & Evans 1979 as recalled, by hand, at 100, 200 and 500 MPa, with
// our factor 1 − exp(−(σ/200 MPa)^8); and that beside dislocation creep it is nothing in
// a hot mantle. Source: derived.
func TestKeptOut(t *testing.T) {
	c := rheology.Creep{Laws: []rheology.Law{find(t, goetze)}}
	at := rheology.Conditions{T: 1000}
	for _, s := range []float64{100, 200, 500} {
		want := math.Sqrt(3) / 2 * 5.7e11 * math.Exp(-535e3/(rheology.GasConstant*1000)*math.Pow(1-s/8500, 2)) * (1 - math.Exp(-math.Pow(s/200, 8)))
		got, err := c.StrainRate(s*1e6/math.Sqrt(3), at)
		if err != nil || !close(got, want, 1e-11) {
			t.Errorf("%g MPa: %.15g 1/s, %v; want %.15g", s, got, err, want)
		}
	}
	hot := rheology.Conditions{T: 1600, P: 3e9}
	dislocation := rheology.Creep{Laws: []rheology.Law{find(t, "dry olivine dislocation Hirth 2003")}}
	both := rheology.Creep{Laws: append(c.Laws, dislocation.Laws...)}
	a, err1 := dislocation.Respond(1e-15, hot)
	b, err2 := both.Respond(1e-15, hot)
	if err1 != nil || err2 != nil || !close(a.Stress, b.Stress, 1e-9) {
		t.Errorf("%+v, %v; %+v, %v", a, err1, b, err2)
	}
}

// TestPeierlsPressure: a Peierls stress that rises by 9 % a GPa (the form of Bystricky et
// al. 2016) at 2 GPa is one 18 % higher. Source: derived.
func TestPeierlsPressure(t *testing.T) {
	a, b := find(t, mei), find(t, mei)
	a.Peierls.PerPa = 0.09e-9
	b.Peierls.Stress *= 1.18
	at := rheology.Conditions{T: 900, P: 2e9}
	x, err1 := (&rheology.Creep{Laws: []rheology.Law{a}}).Respond(1e-14, at)
	y, err2 := (&rheology.Creep{Laws: []rheology.Law{b}}).Respond(1e-14, at)
	if err1 != nil || err2 != nil || !close(x.Stress, y.Stress, 1e-12) || !close(x.Exponent, y.Exponent, 1e-11) {
		t.Errorf("%+v, %v; %+v, %v", x, err1, y, err2)
	}
}

func TestPeierlsErrors(t *testing.T) {
	for _, c := range []struct {
		spoil func(*rheology.Law)
		want  string
	}{
		{func(l *rheology.Law) { l.Peierls.Stress = -1 }, "Peierls stress -1 Pa"},
		{func(l *rheology.Law) { l.Peierls.Stress = 0 }, "Peierls stress 0 Pa"},
		{func(l *rheology.Law) { l.Peierls.P = 1.1 }, "p = 1.1, q = 2"},
		{func(l *rheology.Law) { l.Peierls.Q = 0.5 }, "p = 1, q = 0.5"},
		{func(l *rheology.Law) { l.Peierls.PerPa = math.NaN() }, "rises by NaN"},
		{func(l *rheology.Law) { l.Peierls.Least = 9e9 }, "least stress 9e+09 Pa"},
		{func(l *rheology.Law) { l.Peierls.Least = 0 }, "it needs a least stress"},
		{func(l *rheology.Law) { l.V = -1e-6 }, "a volume >= 0"},
		{func(l *rheology.Law) { l.E = 0 }, "an activation energy > 0"},
	} {
		l := find(t, goetze)
		c.spoil(&l)
		if err := l.Validate(); err == nil || !strings.Contains(err.Error(), c.want) || !strings.Contains(err.Error(), goetze) && l.Name != "" {
			t.Errorf("got %v, want %s", err, c.want)
		}
	}
}
