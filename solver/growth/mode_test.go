package growth_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// stack is a column whose derivatives are tested: graded viscosities and, in the
// second layer, a graded density, so that every term of the formulas is at work.
// scale, rho and thick change one layer at a time.
func stack(base growth.Boundary, e float64, scale, rho, thick []float64) *growth.Column {
	h := []float64{20e3, 15e3, 12e3}
	dens := []float64{2750, 2950, 3450}
	if base == growth.Rigid || base == growth.FreeSlip { // something that sinks above the wall
		dens = []float64{2750, 3450, 3100}
	}
	eta := []float64{1e23, 3e21, 2e21}
	efold := []float64{9e3, 20e3, math.Inf(1)} // of viscosity with depth
	c := &growth.Column{Gravity: 9.81, Top: growth.Free, Base: base, EtaS: 4e20 * scale[3], EtaN: 4e20 * scale[3]}
	var z, above float64
	for i := range h {
		hi := h[i] + thick[i]
		z0 := z
		l := growth.Layer{Thickness: hi, Viscosity: func(d float64) (float64, float64) {
			x := (d - z0) / hi // the profile stretches with the layer
			v := eta[i] * scale[i] * math.Exp(-x*h[i]/efold[i])
			if e == 0 {
				return v, v
			}
			return v, v / 3
		}}
		top, bottom := dens[i]+rho[i], dens[i]+rho[i]
		if i == 1 {
			bottom += 120
			l.Gradient = func(float64) float64 { return 120 / hi }
		}
		c.Layers = append(c.Layers, l)
		c.Jumps = append(c.Jumps, top-above)
		above = bottom
		z += hi
	}
	c.Jumps = append(c.Jumps, 3270+rho[3]-above)
	c.ShearRate, c.VerticalStrain = e, -e
	return c
}

func zeros() []float64 { return make([]float64, 4) }
func ones() []float64  { return []float64{1, 1, 1, 1} }

// The exact derivatives agree with central differences of the growth rate, without a
// background and while the column is stretched or shortened, over every base.
func TestSensitivities(t *testing.T) {
	complexes := 0
	for _, e := range []float64{0, 3e-15, -3e-15} {
		for _, base := range []growth.Boundary{growth.HalfSpace, growth.Inviscid, growth.Rigid, growth.FreeSlip} {
			for _, wavelength := range []float64{25e3, 60e3, 300e3} {
				complexes += differences(t, base, e, wavelength)
			}
		}
	}
	t.Logf("%d of the modes are complex", complexes)
}

func differences(t *testing.T, base growth.Boundary, e, wavelength float64) (complexes int) {
	t.Helper()
	rate := func(scale, rho, thick []float64) float64 {
		s, err := growth.NewSolver(stack(base, e, scale, rho, thick), 1e-12)
		if err != nil {
			t.Fatal(err)
		}
		r, err := s.Rate(wavelength)
		if err != nil {
			t.Fatal(err)
		}
		return r.Growth
	}
	s, err := growth.NewSolver(stack(base, e, ones(), zeros(), zeros()), 1e-12)
	if err != nil {
		t.Fatal(err)
	}
	m, err := s.Mode(wavelength)
	if err != nil {
		t.Fatal(err)
	}
	if m.Residual > 1e-9 {
		t.Errorf("base %d, e %g, %g km: work and dissipation differ by %.2g", base, e, wavelength/1e3, m.Residual)
	}
	// Central differences with steps of 1e-4 are good to about 1e-7 of the largest
	// derivative of their kind.
	compare := func(name string, exact, difference, size float64) {
		t.Helper()
		if !(math.Abs(exact-difference) <= 2e-6*size) {
			t.Errorf("base %d, e %g, %g km (rate %.3g%+.3gi), %s: exact %.9g, differences %.9g", base, e, wavelength/1e3, m.Growth, m.Imaginary, name, exact, difference)
		}
	}
	const d = 1e-4
	layers := 4
	if base != growth.HalfSpace {
		layers = 3
	}
	scale := math.Max(math.Abs(m.Growth), math.Abs(e)) // of a rate
	for i := range layers {
		up, down := ones(), ones()
		up[i], down[i] = math.Exp(d), math.Exp(-d)
		compare(fmt.Sprintf("ln viscosity of layer %d", i), m.DlnqDlnEta[i]*m.Growth, (rate(up, zeros(), zeros())-rate(down, zeros(), zeros()))/(2*d), scale)
	}
	for i := range layers {
		up, down := zeros(), zeros()
		up[i], down[i] = 0.05, -0.05
		compare(fmt.Sprintf("density of layer %d", i), m.DqDrho[i], (rate(ones(), up, zeros())-rate(ones(), down, zeros()))/0.1, scale/100)
	}
	for i := range 3 {
		up, down := zeros(), zeros()
		up[i], down[i] = 2, -2
		compare(fmt.Sprintf("thickness of layer %d", i), m.DqDh[i], (rate(ones(), zeros(), up)-rate(ones(), zeros(), down))/4, scale/10e3)
	}
	if m.Imaginary != 0 {
		complexes++
	}
	return complexes
}

// Two half-spaces share the resistance as their viscosities do, and scaling every
// viscosity scales the rate back.
func TestSharesOfHalfSpaces(t *testing.T) {
	k := 2 * math.Pi / 100e3
	c := checks.Layered(growth.Rigid, growth.HalfSpace, []float64{600 / k}, []float64{3350}, []float64{3e21}, 3300, 1e21, 9.81)
	s, err := growth.NewSolver(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	m, err := s.Mode(100e3)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{0.75, 0.25} { // D ∝ η: both half-spaces move alike
		if math.Abs(m.DissipationShare[i]-want) > 1e-9 {
			t.Errorf("layer %d: share %.12g, want %g", i, m.DissipationShare[i], want)
		}
	}
}

// The derivatives of complex rates too: random strained columns whose leading mode
// oscillates.
func TestComplexSensitivities(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	tested := 0
	for range 3000 {
		c, depth := randomColumn(rng)
		if c.ShearRate == 0 {
			continue
		}
		c.ShearRate *= 30
		c.VerticalStrain *= 30
		lambda := depth * math.Pow(10, rng.Float64()*2-0.5)
		solver := func(c *growth.Column) *growth.Solver {
			s, err := growth.NewSolver(c, 1e-12)
			if err != nil {
				t.Fatal(err)
			}
			return s
		}
		r, err := solver(c).Rate(lambda)
		if err != nil {
			t.Fatal(err)
		}
		if r.Imaginary == 0 || r.Imaginary < 0.1*math.Abs(r.Growth) {
			continue
		}
		m, err := solver(c).Mode(lambda)
		if err != nil {
			t.Fatal(err)
		}
		size := math.Hypot(r.Growth, r.Imaginary)
		for i := range c.Layers {
			at := func(x float64) float64 {
				d := *c
				d.Layers = append([]growth.Layer(nil), c.Layers...)
				d.Layers[i].Viscosity = func(z float64) (float64, float64) {
					es, en := c.Layers[i].Viscosity(z)
					return es * math.Exp(x), en * math.Exp(x)
				}
				r, err := solver(&d).Rate(lambda)
				if err != nil {
					t.Fatal(err)
				}
				return r.Growth
			}
			const h = 1e-4
			got, want := m.DlnqDlnEta[i]*r.Growth, (at(h)-at(-h))/(2*h)
			if math.Abs(got-want) > 2e-5*size { // differences: rounding 1e-12/h, curvature h²
				t.Errorf("λ %g m, rate %g%+gi, layer %d: exact %.8g, differences %.8g", lambda, r.Growth, r.Imaginary, i, got, want)
			}
		}
		if tested++; tested == 8 {
			return
		}
	}
	t.Fatalf("only %d oscillating modes found", tested)
}

// The fastest wavelength moves as its derivatives say: maxima found again with one
// layer changed, without a background and while the column is shortened.
func TestShift(t *testing.T) {
	for _, e := range []float64{0, -1e-15} {
		fastest := func(scale, rho, thick []float64) *growth.Spectrum {
			sp, err := growth.Compute(t.Context(), stack(growth.HalfSpace, e, scale, rho, thick), growth.Options{From: 30e3, To: 300e3, Tolerance: 1e-11})
			if err != nil {
				t.Fatal(err)
			}
			if sp.Fastest.AtRangeEdge || sp.Shift == nil {
				t.Fatalf("e %g: no maximum inside the range", e)
			}
			return sp
		}
		here := fastest(ones(), zeros(), zeros())
		check := func(name string, got float64, a, b *growth.Spectrum, step, size float64) {
			t.Helper()
			want := math.Log(b.Fastest.Wavelength/a.Fastest.Wavelength) / (2 * step)
			if math.Abs(got-want) > 2e-4*size { // peaks are resolved to about 1e-9, h⁴ of the differences
				t.Errorf("e %g, %s: %.8g, peaks found again %.8g", e, name, got, want)
			}
		}
		for i := range 4 {
			up, down := ones(), ones()
			up[i], down[i] = math.Exp(1e-3), math.Exp(-1e-3)
			check(fmt.Sprintf("ln viscosity of layer %d", i), here.Shift.DlnEta[i], fastest(down, zeros(), zeros()), fastest(up, zeros(), zeros()), 1e-3, 1)
			up, down = zeros(), zeros()
			up[i], down[i] = 0.2, -0.2
			check(fmt.Sprintf("density of layer %d", i), here.Shift.Drho[i], fastest(ones(), down, zeros()), fastest(ones(), up, zeros()), 0.2, 1e-2)
		}
		for i := range 3 {
			up, down := zeros(), zeros()
			up[i], down[i] = 10, -10
			check(fmt.Sprintf("thickness of layer %d", i), here.Shift.Dh[i], fastest(ones(), zeros(), down), fastest(ones(), zeros(), up), 10, 1e-4)
		}
	}
}
