package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/solver/growth"
)

// embedded is a layer h of viscosity η and exponent n in a matrix η/r of exponent nm
// without gravity, strained at rate e (positive in extension) along the wavevector.
// The matrix above is opaq/k thick.
func embedded(n, r, nm, e, k float64) *growth.Column {
	upper := opaq / k * math.Sqrt(nm)
	return &growth.Column{Top: growth.Rigid, Base: growth.HalfSpace, Gravity: 0,
		Layers: []growth.Layer{
			{Thickness: upper, Viscosity: PowerLaw(eta/r, nm)},
			{Thickness: h, Viscosity: PowerLaw(eta, n)},
		},
		Jumps: []float64{0, 0, 0}, EtaS: eta / r, EtaN: eta / r / nm,
		ShearRate: e, VerticalStrain: -e}
}

// plate is a layer h of exponent n between fluids without viscosity, no gravity.
func plate(n, e float64) *growth.Column {
	return &growth.Column{Top: growth.Free, Base: growth.Inviscid,
		Layers: []growth.Layer{{Thickness: h, Viscosity: PowerLaw(eta, n)}},
		Jumps:  []float64{0, 0}, ShearRate: e, VerticalStrain: -e}
}

// Fletcher is the folding rate (dξ/dt)/(ξ|e|) of a Newtonian layer, K = kh, Q the
// matrix viscosity over the layer's (Fletcher 1977, Tectonophysics 39, 593).
func Fletcher(K, Q float64) float64 {
	return 1 - 2*(1-Q)/((1-Q*Q)-((1+Q)*(1+Q)*math.Exp(K)-(1-Q)*(1-Q)*math.Exp(-K))/(2*K))
}

func strainChecks() []Check {
	const e = 1e-15
	var list []Check
	for _, v := range []struct{ K, R float64 }{{0.5, 20}, {1.2, 100}, {3, 10}} {
		k := v.K / h
		list = append(list, Check{fmt.Sprintf("folding, viscosity ratio %g, kh = %g", v.R, v.K), "(dξ/dt)/(ξ|e|)", Fletcher(v.K, 1/v.R), 1e-9,
			"Fletcher 1977, Tectonophysics 39, 593", Published,
			at(embedded(1, v.R, 1, -e, k), k, func(q float64) float64 { return q / e })})
	}
	ratio := 1e5
	kd := math.Cbrt(6/ratio) / h
	list = append(list, Check{"folding of a thin plate, ratio 1e5: dominant kh over (6η_m/η_l)^(1/3)", "", 1, 2e-3,
		"Biot 1961, GSA Bull. 72, 1595; the limit is reached as ratio^(−2/3) ≈ 5e-4", Published,
		peakOf(embedded(1, ratio, 1, -e, kd/2), math.Pi/kd, 8*math.Pi/kd, func(p growth.Peak) float64 {
			return 2 * math.Pi / p.Wavelength / kd
		})})
	for _, v := range []struct{ K, want float64 }{{0.5, 9.79028806695}, {1.5, 8.02160679416}, {2.5, 4.1897419582}} {
		list = append(list, Check{fmt.Sprintf("necking, n = 10, inviscid matrix, kh = %g", v.K), "q/e + 1", v.want, 1e-9,
			"problem of Smith 1977, GSA Bull. 88, 312; derived", Derived,
			at(plate(10, e), v.K/h, func(q float64) float64 { return q/e + 1 })})
	}
	for _, v := range []struct{ R, K, want float64 }{{100, 0.76603, 8.254877236}, {20, 1.10973, 5.584005905}} {
		list = append(list, Check{fmt.Sprintf("necking, n = 10, Newtonian matrix, ratio %g, kh = %g", v.R, v.K), "q/e + 1", v.want, 1e-9,
			"derived", Derived,
			at(embedded(10, v.R, 1, e, v.K/h), v.K/h, func(q float64) float64 { return q/e + 1 })})
	}
	list = append(list, Check{"growth while stretching, two half-spaces, 2 Myr", "ln(ξ/ξ₀)", 1.2003778905880707, 1e-9,
		"derived: (q₀/e)(exp(et) − 1) − et, q₀ 2e-14, e 3e-15 1/s", Derived, stretching})
	return list
}

// stretching integrates the rate of two half-spaces while k falls as exp(−et).
func stretching(context.Context) (float64, error) {
	const e, q0 = 3e-15, 2e-14
	t := 2e6 * 365.25 * 86400
	k0 := 2 * math.Pi / 100e3
	visc := 50 * g / (2 * k0 * q0) / 2 // on both sides
	const n = 8
	var sum float64
	x, w := gauss(n)
	for i := range x {
		k := k0 * math.Exp(-e*x[i]*t)
		c := Layered(growth.Rigid, growth.HalfSpace, []float64{opaq / k0}, []float64{3350}, []float64{visc}, 3300, visc, g)
		c.ShearRate, c.VerticalStrain = e, -e
		q, err := rate(c, k)
		if err != nil {
			return 0, err
		}
		sum += w[i] * q * t
	}
	return sum, nil
}
