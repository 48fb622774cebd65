package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/state"
)

// softRock returns the closure of a layer h of exponent n on a rigid top over fluid
// without viscosity: η at 1e-15 1/s, Δρ too dense.
func softRock(n float64) (*drip.Soft, error) {
	rock := func(rho, n float64) column.Rock {
		return column.Rock{Density: column.Uniform(rho), Viscosity: column.Viscosity{Top: eta, Bottom: eta, Exponent: n, Factor: 1}}
	}
	s, err := state.New(&column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Rigid},
		Layers: []column.Layer{{Name: "root", Thickness: h, Root: true, Rock: rock(3300+drho, n)}},
		Base:   column.Base{Boundary: column.Inviscid, Rock: rock(3300, 1)}}, 1e-15)
	if err != nil {
		return nil, err
	}
	return drip.NewSoft(s, drip.Background{})
}

// softDescent returns C of w = C h A (Δρgh)^n (Z/h)^n at Z/h = z.
func softDescent(n, kh, z float64) (float64, error) {
	f, err := softRock(n)
	if err != nil {
		return 0, err
	}
	out := make([]float64, 2)
	if err := f.Rate(kh/h, []float64{0, z * h}, out); err != nil {
		return 0, err
	}
	lnA := -n * math.Log(2*eta*math.Pow(1e-15, 1-1/n)) // η = ½ A^(−1/n) ε^((1−n)/n)
	return math.Exp(math.Log(out[1]/h) - lnA - n*math.Log(drho*g*h*z)), nil
}

// softeningChecks are drips that soften their own rock.
func softeningChecks() []Check {
	var list []Check
	add := func(name, unit string, want, tol float64, source string, f func() (float64, error)) {
		list = append(list, Check{name, unit, want, tol, source, Derived, func(context.Context) (float64, error) { return f() }})
	}
	add("softening, n = 1: rate of a hanging layer, kh = 2", "1/s", HangingRate(h, drho, eta, g, 2/h), 1e-6,
		"geometry of Houseman & Molnar 1997, GJI 128, 125; closed form derived", func() (float64, error) {
			f, err := softRock(1)
			if err != nil {
				return 0, err
			}
			out := make([]float64, 2)
			err = f.Rate(2/h, []float64{0, 0.1 * h}, out)
			return out[1] / (0.1 * h), err
		})
	for _, n := range []float64{2, 3, 5} {
		add(fmt.Sprintf("softening: power of the amplitude that the descent goes with, n = %g", n), "", n, 1e-4,
			"derived: strain rate ∝ stress^n, stress ∝ amplitude", func() (float64, error) {
				a, err := softDescent(n, 2, 0.02)
				if err != nil {
					return 0, err
				}
				b, err := softDescent(n, 2, 0.2)
				return n + math.Log10(b/a), err
			})
	}
	// two-dimensional C₁, five or six digits, and the closure's share of it, three
	for _, v := range []struct{ n, kh, flat, share float64 }{
		{2, 1, 0.065118, 0.979}, {2, 2, 0.09888, 0.985}, {2, 3, 0.08854, 0.994},
		{3, 1, 0.018002, 0.934}, {3, 2, 0.030746, 0.954}, {3, 3, 0.026841, 0.980},
	} {
		add(fmt.Sprintf("softening: closure over two-dimensional rate, n = %g, kh = %g", v.n, v.kh), "", v.share, 6e-4,
			"derived: spectral and finite-element solutions made for this project, which agree to 4e-4; three digits", func() (float64, error) {
				c, err := softDescent(v.n, v.kh, 0.05)
				return c / v.flat, err
			})
	}
	for _, v := range []struct{ n, kh float64 }{{2, 2}, {3, 2.1}, {5, 2.2}} { // each at its fastest kh, to 0.1
		add(fmt.Sprintf("softening: fastest tip by the closure and its share, nth root, n = %g", v.n), "", 0.324, 7e-3,
			"derived: two-dimensional rates follow 0.324^n for n of 1 to 5, three digits", func() (float64, error) {
				c, err := softDescent(v.n, v.kh, 0.05)
				return math.Pow(c/drip.Corrections(v.n, v.kh, 0).Centre, 1/v.n), err
			})
	}
	for _, n := range []float64{2, 3} {
		add(fmt.Sprintf("softening: time from 0.05 h to h over the law of blow-up, n = %g", n), "", 1, 1e-4,
			"derived: t = (a^(1−n) − b^(1−n))/((n − 1)c) of dξ/dt = c ξ^n", func() (float64, error) { return blowUp(n) })
	}
	return list
}

// blowUp is the time of a drip over that of dξ/dt = c ξ^n.
func blowUp(n float64) (float64, error) {
	const k, a = 2 / h, 0.05 * h
	f, err := softRock(n)
	if err != nil {
		return 0, err
	}
	out := make([]float64, 2)
	if err := f.Rate(k, []float64{0, a}, out); err != nil {
		return 0, err
	}
	d, err := f.Time(k, a, h, drip.Horizon)
	c := out[1] / math.Pow(a, n)
	return d.Time * (n - 1) * c / (math.Pow(a, 1-n) - math.Pow(h, 1-n)), err
}
