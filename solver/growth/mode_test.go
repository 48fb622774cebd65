package growth_test

import (
	"fmt"
	"math"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// stack is a column whose derivatives are tested: graded viscosities and, in the
// second layer, a graded density, so that every term of the formulas is at work.
// scale, rho and thick change one layer at a time.
func stack(base growth.Boundary, scale, rho, thick []float64) *growth.Column {
	h := []float64{20e3, 15e3, 12e3}
	dens := []float64{2750, 2950, 3450}
	eta := []float64{1e23, 3e21, 2e21}
	efold := []float64{9e3, 20e3, math.Inf(1)} // of viscosity with depth
	c := &growth.Column{Gravity: 9.81, Top: growth.Free, Base: base, EtaS: 4e20 * scale[3], EtaN: 4e20 * scale[3]}
	var z, above float64
	for i := range h {
		hi := h[i] + thick[i]
		z0 := z
		l := growth.Layer{Thickness: hi, Viscosity: func(d float64) (float64, float64) {
			x := (d - z0) / hi // the profile stretches with the layer
			e := eta[i] * scale[i] * math.Exp(-x*h[i]/efold[i])
			return e, e
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
	return c
}

func zeros() []float64 { return make([]float64, 4) }
func ones() []float64  { return []float64{1, 1, 1, 1} }

// The exact derivatives agree with central differences of the growth rate.
func TestSensitivities(t *testing.T) {
	for _, base := range []growth.Boundary{growth.HalfSpace, growth.Inviscid} {
		for _, wavelength := range []float64{25e3, 60e3, 300e3} {
			rate := func(scale, rho, thick []float64) float64 {
				s, err := growth.NewSolver(stack(base, scale, rho, thick), 1e-12)
				if err != nil {
					t.Fatal(err)
				}
				r, err := s.Rate(wavelength)
				if err != nil {
					t.Fatal(err)
				}
				return r.Growth
			}
			s, err := growth.NewSolver(stack(base, ones(), zeros(), zeros()), 1e-12)
			if err != nil {
				t.Fatal(err)
			}
			m, err := s.Mode(wavelength)
			if err != nil {
				t.Fatal(err)
			}
			if m.Residual > 1e-9 {
				t.Errorf("work and dissipation differ by %.2g", m.Residual)
			}
			compare := func(name string, exact, difference, size float64) {
				t.Helper()
				// central differences with a step of 1e-4 are good to about 1e-7 of the
				// largest derivative of their kind
				if math.Abs(exact-difference) > 2e-6*size {
					t.Errorf("base %d, %g km, %s: exact %.9g, differences %.9g", base, wavelength/1e3, name, exact, difference)
				}
			}
			const d = 1e-4
			for i := range 4 {
				if base == growth.Inviscid && i == 3 {
					continue
				}
				up, down := ones(), ones()
				up[i], down[i] = math.Exp(d), math.Exp(-d)
				fd := (rate(up, zeros(), zeros()) - rate(down, zeros(), zeros())) / (2 * d * m.Growth)
				compare(fmt.Sprintf("ln viscosity of layer %d", i), m.DlnqDlnEta[i], fd, 1)
			}
			for i := range 4 {
				up, down := zeros(), zeros()
				up[i], down[i] = 0.05, -0.05
				fd := (rate(ones(), up, zeros()) - rate(ones(), down, zeros())) / 0.1
				compare(fmt.Sprintf("density of layer %d", i), m.DqDrho[i], fd, m.Growth/100)
			}
			for i := range 3 {
				up, down := zeros(), zeros()
				up[i], down[i] = 2, -2
				fd := (rate(ones(), zeros(), up) - rate(ones(), zeros(), down)) / 4
				compare(fmt.Sprintf("thickness of layer %d", i), m.DqDh[i], fd, m.Growth/10e3)
			}
		}
	}
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
