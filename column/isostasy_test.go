package column

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

const gravity = 9.81

// slab is a layer of one density.
type slab struct{ thickness, density float64 }

func weigh(slabs ...slab) Weight {
	var w Weight
	for _, s := range slabs {
		w.AddUniform(s.thickness, s.density)
	}
	return w
}

func one(density float64) Asthenosphere {
	return Asthenosphere{Rock: Rock{Density: Uniform(density)}}
}

func balance(t interface{ Fatal(...any) }, w Weight, r Reference, a Asthenosphere) Isostasy {
	b, err := Balance(gravity, w, r, a)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func near(got, want, tolerance float64) bool {
	return math.Abs(got-want) <= tolerance*math.Abs(want)
}

// TestBalance holds closed forms, all derived in rational arithmetic: crust 35 to 50 km
// (the geometry of Turcotte & Schubert); a root cut out; a crust thinned under water.
func TestBalance(t *testing.T) {
	const km = 1e3
	for _, c := range []struct {
		name               string
		w, ref             Weight
		below, e, force, L float64
	}{
		{"Airy", weigh(slab{50 * km, 2800}), weigh(slab{35 * km, 2800}), 3300, 25000.0 / 11, 2653159090909.091, 50*km - 25000.0/11},
		{"root cut out", weigh(slab{50 * km, 2850}), weigh(slab{50 * km, 2850}, slab{12 * km, 3450}), 3250, 12e3 * 200 / 3250, 1182271015384.6155, 62 * km},
		{"root put in", weigh(slab{50 * km, 2850}, slab{12 * km, 3450}), weigh(slab{50 * km, 2850}), 3250, -12e3 * 200 / (3250 - SeaWater), math.NaN(), 62*km + 12e3*200/(3250-SeaWater)},
		{"basin", weigh(slab{20 * km, 2800}), weigh(slab{35 * km, 2800}), 3300, -15e3 * 500 / (3300 - SeaWater), -1577648953744.4934, 35 * km},
	} {
		b := balance(t, c.w, Reference{Weight: c.ref}, one(c.below))
		if !near(b.Elevation, c.e, 1e-12) || !near(b.Level, c.L, 1e-12) || b.Density != c.below {
			t.Errorf("%s: elevation %.12g, level %.12g, density %g; want %.12g, %.12g", c.name, b.Elevation, b.Level, b.Density, c.e, c.L)
		}
		if !math.IsNaN(c.force) && !near(b.Force, c.force, 1e-11) {
			t.Errorf("%s: force %.13g, want %.13g", c.name, b.Force, c.force)
		}
	}
}

// some draws slabs that float.
func some(t *rapid.T, label string) []slab {
	n := rapid.IntRange(1, 6).Draw(t, label+" layers")
	out := make([]slab, n)
	for i := range out {
		out[i] = slab{rapid.Float64Range(500, 60e3).Draw(t, label+" thickness"), rapid.Float64Range(2400, 3700).Draw(t, label+" density")}
	}
	return out
}

// fluid draws an asthenosphere of one density, or one that is squeezed and warms.
func fluid(t *rapid.T) Asthenosphere {
	if rapid.Bool().Draw(t, "one density") {
		return one(rapid.Float64Range(3100, 3500).Draw(t, "asthenosphere"))
	}
	return Asthenosphere{T: rapid.Float64Range(1400, 1800).Draw(t, "T"), P: rapid.Float64Range(0, 6e9).Draw(t, "P"), Rock: Rock{HeatCapacity: 1100,
		Density: EquationOfState{Reference: 3350, Expansivity: 3e-5, Compressibility: 8e-12, ReferenceTemperature: 293.15}}}
}

// TestIsostasyProperties: neither the cutting of a layer in two nor asthenosphere put
// under both columns changes anything; a column beside itself stands as high and drives
// nothing; and the force is −g ∫ z Δρ dz with the water counted, here summed piece by piece.
func TestIsostasyProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		slabs, others, a := some(t, "column"), some(t, "reference"), fluid(t)
		r := Reference{Elevation: rapid.Float64Range(-4e3, 4e3).Draw(t, "elevation"), Weight: weigh(others...)}
		b := balance(t, weigh(slabs...), r, a)
		// What sizes round-off: the whole of the energy, the thickness of both columns.
		size := weigh(slabs...).Thickness + r.Weight.Thickness
		same := func(what string, c Isostasy, tolerance float64) {
			if math.Abs(c.Elevation-b.Elevation) > tolerance*size || math.Abs(c.Force-b.Force) > tolerance*b.PotentialEnergy {
				t.Fatalf("%s: elevation %.14g and force %.14g, were %.14g and %.14g", what, c.Elevation, c.Force, b.Elevation, b.Force)
			}
		}
		i, u := rapid.IntRange(0, len(slabs)-1).Draw(t, "cut"), rapid.Float64Range(0.01, 0.99).Draw(t, "at")
		cut := append(append(append([]slab{}, slabs[:i]...), slab{u * slabs[i].thickness, slabs[i].density}, slab{(1 - u) * slabs[i].thickness, slabs[i].density}), slabs[i+1:]...)
		same("a layer cut in two", balance(t, weigh(cut...), r, a), 1e-12)

		deep := rapid.Float64Range(1e3, 200e3).Draw(t, "deeper")
		w, s := weigh(slabs...), r
		for range 20 { // in pieces: a parabola is not quite the density of squeezed rock
			add(t, &a, &w, max(0, -b.Elevation), deep/20)
			add(t, &a, &s.Weight, max(0, -r.Elevation), deep/20)
		}
		same("asthenosphere put under both", balance(t, w, s, a), 3e-9)

		self := balance(t, r.Weight, r, a)
		if math.Abs(self.Elevation-r.Elevation) > 1e-12*size || math.Abs(self.Force) > 1e-12*self.PotentialEnergy {
			t.Fatalf("beside itself: elevation %g of %g, force %g", self.Elevation, r.Elevation, self.Force)
		}
		if rho, ok := a.Rock.Density.(Uniform); ok {
			got := moment(slabs, b.Elevation, float64(rho), b.Level) - moment(others, r.Elevation, float64(rho), b.Level)
			if want := -gravity * got; math.Abs(b.Force-want) > 1e-12*b.PotentialEnergy {
				t.Fatalf("force %.14g, −g∫zΔρ dz %.14g", b.Force, want)
			}
		}
	})
}

// add puts asthenosphere under a column that lies under so much water.
func add(t *rapid.T, a *Asthenosphere, w *Weight, water, thickness float64) {
	load := SeaWater * water
	s := Weight{Mass: load + w.Mass}
	if err := a.Under(gravity, &s, thickness); err != nil {
		t.Fatal(err)
	}
	w.Moment += s.Moment - load*thickness // Under has counted the load above the piece
	w.Mass, w.Thickness = s.Mass-load, w.Thickness+thickness
}

// moment is ∫ z ρ dz of a column with its surface at an elevation, water where that is
// negative, down to the level over rock of the density below.
func moment(slabs []slab, elevation, below, level float64) float64 {
	z, sum := -elevation, 0.0
	piece := func(a, b, rho float64) { sum += rho * (b - a) * (b + a) / 2 }
	if elevation < 0 {
		piece(0, z, SeaWater)
	}
	for _, s := range slabs {
		piece(z, z+s.thickness, s.density)
		z += s.thickness
	}
	piece(z, level, below)
	return sum
}

// TestAddLinear: linear density against its closed form, and a parabola too.
func TestAddLinear(t *testing.T) {
	w := Weight{}
	const h, a, b = 12e3, 2700.0, 3100.0
	w.Add(h, h*(a+b)/2, a, b)
	if want := h * h * (2*a + b) / 6; !near(w.Moment, want, 1e-14) {
		t.Errorf("linear: moment %.15g, want %.15g", w.Moment, want)
	}
	// ρ = 3000 + 400 s²: mass h(3000 + 400/3), moment h²(1500 + 400/12)
	w = Weight{}
	w.Add(h, h*(3000+400.0/3), 3000, 3400)
	if want := h * h * (1500 + 400.0/12); !near(w.Moment, want, 1e-14) {
		t.Errorf("parabola: moment %.15g, want %.15g", w.Moment, want)
	}
}

// TestAsthenosphere: a squeezed rock of one temperature has z = ln((1 + βP)/(1 + βP₀))/(ρβg)
// between two pressures; its adiabat is held against very small steps of another method.
func TestAsthenosphere(t *testing.T) {
	const rho, beta, alpha, c = 3300.0, 8e-12, 3e-5, 1000.0
	a := Asthenosphere{T: 1600, P: 3e9, Rock: Rock{HeatCapacity: c, Density: EquationOfState{Reference: rho, Compressibility: beta}}}
	s, err := a.from(gravity, 0.5e9, 9e9)
	want := math.Log((1+beta*9e9)/(1+beta*0.5e9)) / (rho * beta * gravity)
	if err != nil || !near(s.depth, want, 1e-9) || s.T != 1600 {
		t.Errorf("depth %.12g, want %.12g; T = %g K; %v", s.depth, want, s.T, err)
	}
	back, err := a.from(gravity, 9e9, 0.5e9)
	if err != nil || !near(back.depth, -s.depth, 1e-10) || !near(back.moment, -s.moment, 1e-10) {
		t.Errorf("back: %+v, was %+v; %v", back, s, err)
	}
	// dT/dP = αT/(ρc) with ρ and α of 1 − α(T − T_at): integrated here in very small steps
	a.Rock.Density = EquationOfState{Reference: rho, Compressibility: beta, Expansivity: alpha, ReferenceTemperature: 293}
	T, z := 1600.0, 0.0
	const n = 400000
	for i := range n {
		P := 3e9 + 4e9*(float64(i)+0.5)/n
		warm := rho * (1 - alpha*(T-293)) * (1 + beta*P)
		T += 4e9 / n * alpha * T / ((1 - alpha*(T-293)) * warm * c)
		z += 4e9 / n / (warm * gravity)
	}
	s, err = a.from(gravity, 3e9, 7e9)
	if err != nil || !near(s.T, T, 1e-7) || !near(s.depth, z, 1e-7) {
		t.Errorf("T = %.10g K, depth %.10g; want %.10g, %.10g; %v", s.T, s.depth, T, z, err)
	}
}

// TestUnder: a thickness of asthenosphere weighs what lies between its pressures.
func TestUnder(t *testing.T) {
	a := Asthenosphere{T: 1600, P: 3e9, Rock: Rock{HeatCapacity: 1000, Density: EquationOfState{Reference: 3300, Expansivity: 3e-5, Compressibility: 8e-12}}}
	w := weigh(slab{40e3, 2800})
	top := gravity * w.Mass
	if err := a.Under(gravity, &w, 30e3); err != nil {
		t.Fatal(err)
	}
	s, err := a.from(gravity, top, gravity*w.Mass)
	if err != nil || !near(s.depth, 30e3, 1e-12) || w.Thickness != 70e3 {
		t.Errorf("%g m between those pressures, %g m in all; %v", s.depth, w.Thickness, err)
	}
	if got, want := gravity*(w.Moment-40e3*40e3*1400), s.moment; !near(got, want, 1e-8) {
		t.Errorf("moment %.12g, want %.12g", got, want)
	}
}

// TestIsostasyRefuses: an error with the numbers, never NaN.
func TestIsostasyRefuses(t *testing.T) {
	crust := weigh(slab{35e3, 2800})
	for name, c := range map[string]struct {
		g    float64
		w    Weight
		r    Reference
		a    Asthenosphere
		want string
	}{
		"no column":        {gravity, Weight{}, Reference{Weight: crust}, one(3300), "0 m thick"},
		"no reference":     {gravity, crust, Reference{}, one(3300), "0 m thick"},
		"NaN mass":         {gravity, Weight{1, math.NaN(), 1}, Reference{Weight: crust}, one(3300), "NaN"},
		"NaN elevation":    {gravity, crust, Reference{Elevation: math.NaN(), Weight: crust}, one(3300), "NaN"},
		"no asthenosphere": {gravity, crust, Reference{Weight: crust}, Asthenosphere{}, "asthenosphere"},
		"no gravity":       {0, crust, Reference{Weight: crust}, one(3300), "0 m/s²"},
		"light as water":   {gravity, weigh(slab{20e3, 900}), Reference{Weight: weigh(slab{35e3, 800})}, one(1000), "does not carry water"},
		"no density":       {gravity, crust, Reference{Weight: crust}, one(-1), "-1 kg/m³"},
	} {
		b, err := Balance(c.g, c.w, c.r, c.a)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %+v, error %v; want one with %q", name, b, err, c.want)
		}
	}
}
