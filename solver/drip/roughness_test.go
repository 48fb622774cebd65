package drip

import (
	"math"
	"testing"

	"keelfall/column"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

func red(set Settings, exponent, at float64) Settings {
	set.Spectrum, set.Rough = "red", Roughness{Exponent: exponent, At: at}
	return set
}

func frozenOf(t *testing.T, c *column.Column, set Settings, o Options) *Result {
	t.Helper()
	s, err := state.New(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := Solve(ctx, s, set, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// halves are two half-spaces of one viscosity, as far as a wavelength of 10 km can see:
// q = Δρ g/(4 η k) (Chandrasekhar 1961, viscous limit), here 2e-14 1/s.
func halves() (*column.Column, float64) {
	const q0, lambda, drho = 2e-14, 10e3, 100.0
	eta := drho * 9.81 / (4 * q0 * 2 * math.Pi / lambda)
	rock := func(rho float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: 1, Factor: 1}}
	}
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Root: true, Thickness: 200e3, Rock: rock(3300 + drho)}},
		Base:   column.Base{Boundary: column.HalfSpace, Rock: rock(3300)}}, q0 / lambda
}

// Between half-spaces there is one mode: t = ln(stop/a(λ))/q(λ), with a(λ) red or a table
// (derived). The quickest wavelength of a red spectrum solves no simpler equation; it is
// searched for here by brute force.
func TestRoughHalfSpaces(t *testing.T) {
	c, perMetre := halves()
	set := common()
	set.Criterion = 0.05 // 10 km
	table := set
	table.Amplitude, table.Rough = 0, Roughness{Wavelength: []float64{6e3, 9e3, 14e3}, Amplitude: []float64{100, 700, 300}}
	for name, set := range map[string]Settings{"white": set, "red": red(set, 1, 10e3), "falling": red(set, -2, 10e3), "table": table} {
		r := frozenOf(t, c, set, Options{From: 5e3, To: 15e3})
		exact := func(w float64) float64 { return math.Log(10e3/set.AmplitudeAt(w)) / (perMetre * w) }
		for i, w := range r.Curve.Wavelength {
			if got, want := r.Curve.Time[i], exact(w); math.Abs(got/want-1) > 1e-8 {
				t.Errorf("%s, λ %g: %g s, want %g", name, w, got, want)
			}
			if got, want := r.Curve.Low[i], exact(w)-math.Log(3)/(perMetre*w); math.Abs(got/want-1) > 1e-8 {
				t.Errorf("%s, λ %g, three times as high: %g s, want %g", name, w, got, want)
			}
		}
		best, at := math.Inf(1), 0.0
		for w := r.Curve.Wavelength[0]; w <= r.Curve.Wavelength[len(r.Curve.Wavelength)-1]*(1+1e-12); w += 1 {
			if x := exact(w); x < best {
				best, at = x, w
			}
		}
		if r.Time > best*(1+1e-6) || math.Abs(r.Wavelength/at-1) > 1e-3 {
			t.Errorf("%s: drips at %g s at %g m, the best of all metres %g s at %g m", name, r.Time, r.Wavelength, best, at)
		}
		o, err := Time(ctx, mustState(t, c), set, Options{From: 5e3, To: 15e3})
		if err != nil || math.Abs(o/r.Time-1) > 1e-5 {
			t.Errorf("%s: Time %g s (%v), Solve %g", name, o, err, r.Time)
		}
	}
}

func mustState(t *testing.T, c *column.Column) *state.State {
	t.Helper()
	s, err := state.New(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Red is, wavelength by wavelength, white with that wavelength's amplitude, in a column
// that stands still and in one that moves; and the quickest wavelength is a longer one.
func TestRedIsWhiteOfItsAmplitude(t *testing.T) {
	white := common()
	set := red(white, 1, 100e3)
	o := Options{From: 30e3, To: 200e3}
	still := func(set Settings) *Result { return frozenOf(t, stiff(), set, o) }
	moving := func(set Settings) *Result {
		r, err := Through(ctx, cold(stiff(), 1e-16), set, o)
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	for name, solve := range map[string]func(Settings) *Result{"still": still, "moving": moving} {
		plain, r := solve(white), solve(set)
		if !(r.InitialWavelength > 1.02*plain.InitialWavelength) {
			t.Errorf("%s: red drips at %g m, white at %g", name, r.InitialWavelength, plain.InitialWavelength)
		}
		for _, i := range []int{0, len(r.Curve.Wavelength) / 2, len(r.Curve.Wavelength) - 1} {
			one := white
			one.Amplitude = set.AmplitudeAt(r.Curve.Wavelength[i])
			want := solve(one).Curve.Time[i]
			if got := r.Curve.Time[i]; math.Abs(got/want-1) > 1e-5 && !(math.IsInf(got, 1) && math.IsInf(want, 1)) {
				t.Errorf("%s, λ %g: %g s, white of that amplitude %g", name, r.Curve.Wavelength[i], got, want)
			}
		}
	}
}

// Where a table has no undulation nothing drips, and where the undulation already is the
// drip it is none.
func TestRoughGaps(t *testing.T) {
	set := common()
	set.Rough = Roughness{Wavelength: []float64{60e3, 90e3}, Amplitude: []float64{400, 500}}
	r := frozenOf(t, stiff(), set, Options{From: 20e3, To: 300e3})
	if w := r.Curve.Wavelength; w[0] < 60e3*(1-1e-12) || w[len(w)-1] > 90e3*(1+1e-12) {
		t.Errorf("curve from %g to %g m", w[0], w[len(w)-1])
	}
	if r.Wavelength < 60e3*(1-1e-12) || r.Wavelength > 90e3*(1+1e-12) {
		t.Errorf("drips at %g m", r.Wavelength)
	}
	set = red(common(), 2, 100e3) // 12 km at 490 km
	r = frozenOf(t, stiff(), set, Options{From: 200e3, To: 800e3})
	for i, w := range r.Curve.Wavelength {
		if over := set.AmplitudeAt(w) >= 12e3; over != math.IsInf(r.Curve.Time[i], 1) || r.Curve.Time[i] <= 0 {
			t.Errorf("λ %g, amplitude %g m: drips at %g s", w, set.AmplitudeAt(w), r.Curve.Time[i])
		}
	}
	for name, wrong := range map[string]Roughness{
		"order": {Wavelength: []float64{2, 1}, Amplitude: []float64{1, 1}}, "none": {Wavelength: []float64{1, 2}, Amplitude: []float64{1, 0}},
		"lengths": {Wavelength: []float64{1, 2}, Amplitude: []float64{1}}, "at": {Exponent: 1}, "nan": {Exponent: math.NaN(), At: 1},
		"high": {Wavelength: []float64{1, 2}, Amplitude: []float64{13e3, 14e3}},
	} {
		set := common()
		set.Rough = wrong
		if _, err := Solve(ctx, mustState(t, stiff()), set, Options{}); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}

// Late, the flow is that of the leading mode; at all times the stress of Newtonian rock
// is 2 η times its strain rate; a column that moves as little as none says the same.
func TestFirst(t *testing.T) {
	set := common()
	set.Amplitude = 1 // so that the mode has long won
	r := frozenOf(t, stiff(), set, Options{})
	p, err := newProblem(mustState(t, stiff()), set, 1)
	if err != nil {
		t.Fatal(err)
	}
	m := r.Mode
	at := -1
	for i := range m.Depth { // the upper side of the base
		if m.Layer[i] == p.last {
			at = i
		}
	}
	k, eta := 2*math.Pi/r.Wavelength, 2e20
	want := math.Max(math.Abs(k*m.U[at]), math.Abs(m.Shear[at])/(2*eta)) / math.Abs(m.Displacement[p.base])
	n := len(r.First.Time) - 1
	if got := r.First.StrainRate[n] / r.First.Base[n]; math.Abs(got/want-1) > 1e-3 {
		t.Errorf("strain rate per metre at the drip %g, of the mode %g", got, want)
	}
	if got := r.First.StrainRate[0] / r.First.Base[0]; math.Abs(got/want-1) < 1e-3 {
		t.Error("the first flow is the mode's already: the check above shows nothing")
	}
	for i, rate := range r.First.StrainRate {
		if math.Abs(r.First.Stress[i]/(2*eta*rate)-1) > 1e-9 || r.First.Background[i] != 0 {
			t.Errorf("stress %g Pa at %g 1/s, background %g", r.First.Stress[i], rate, r.First.Background[i])
		}
	}
	set = common()
	r = frozenOf(t, stiff(), set, Options{})
	moving, err := Through(ctx, cold(stiff(), 0), set, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, x := range moving.First.Time {
		if x < 0.05*r.Time { // the surface still settles, faster than between two of the points
			continue
		}
		compare(t, "strain rate", moving.First.StrainRate[i], interpolated(r.First.Time, r.First.StrainRate, x), 1e-3)
		compare(t, "amplitude", moving.First.Base[i], interpolated(r.First.Time, r.First.Base, x), 1e-3)
	}
	compare(t, "the last time", moving.First.Time[len(moving.First.Time)-1], r.Time, 1e-5)
	for i, a := range moving.Traces {
		b := r.Traces[i]
		for j, x := range a.Time {
			if x > 0.05*r.Time && x < b.Time[len(b.Time)-1] {
				compare(t, "trace", a.Base[j], interpolated(b.Time, b.Base, x), 3e-3)
			}
		}
	}
}

func compare(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if math.Abs(got/want-1) > tolerance {
		t.Errorf("%s %g, want %g", what, got, want)
	}
}

// interpolated is y(x) at v, straight in ln y.
func interpolated(x, y []float64, v float64) float64 {
	for i := 1; i < len(x); i++ {
		if v <= x[i]*(1+1e-6) {
			return y[i-1] * math.Pow(y[i]/y[i-1], (v-x[i-1])/(x[i]-x[i-1]))
		}
	}
	return math.NaN()
}

// A strained column has its background beside the drip's own rates, and power-law rock
// is softer against what it is stretched along: the larger of 2 η_N ε_xx and S.
func TestFirstStrained(t *testing.T) {
	const e = 2e-16
	r, err := Through(ctx, cold(stiff(), e), common(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.First.Time) < 6 {
		t.Fatalf("%d times", len(r.First.Time))
	}
	for i := range r.First.Time {
		compare(t, "background", r.First.Background[i], e, 1e-12)
		compare(t, "stress", r.First.Stress[i], 4e20*r.First.StrainRate[i], 1e-6)
	}
	c := growth.Contact{U: 2, Shear: 3, EtaS: 5, EtaN: 2}
	if rate, stress := c.Invariants(); rate != 0.3 || stress != 3 { // no wavenumber: shear alone
		t.Errorf("%g, %g", rate, stress)
	}
}

// Where nothing drips in the window, a drip in twice the window is still timed.
func TestBeyondTheWindow(t *testing.T) {
	exact := frozenOf(t, stiff(), common(), Options{})
	for share, found := range map[float64]bool{0.7: true, 0.4: false} {
		set := common()
		set.Window = share * exact.Time
		r, err := Through(ctx, cold(stiff(), 0), set, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if r.Outcome != "window" || len(r.Drips) > 0 || found != !math.IsInf(r.Time, 1) {
			t.Errorf("window of %g: %s, %g Myr, %d drips", share, r.Outcome, r.Time/myr, len(r.Drips))
		}
		if found {
			compare(t, "time", r.Time, exact.Time, 1e-5)
			if r.Mode == nil || !(r.Rate > 0) {
				t.Error("no mode")
			}
		}
	}
}
