package checks

import (
	"context"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// heated is a unit layer of unit viscosity, conductivity, heat capacity and
// super-adiabatic gradient, with g (∂ρ/∂T) = −ra: the Rayleigh number of a layer heated
// from below, in which the adiabatic gradient is off.
func heated(top, base growth.Boundary, ra, kappa float64, fixedFlow bool) *growth.Column {
	one := func(float64) float64 { return 1 }
	return &growth.Column{Gravity: 1, Top: top, Base: base, Jumps: []float64{0, 0},
		Layers: []growth.Layer{{Thickness: 1, Viscosity: Uniform(1)}},
		Diffusion: &growth.Diffusion{FixedFlow: fixedFlow, Layers: []growth.Thermal{{
			PerKelvin: func(float64) float64 { return -ra }, Excess: one,
			Conductivity: func(float64) float64 { return kappa }, Capacity: one}}}}
}

// critical returns the Rayleigh number at which the leading rate at wavenumber k is
// zero, by bisection between half and twice a guess.
func critical(top, base growth.Boundary, k, guess float64, fixedFlow bool) (float64, error) {
	lo, hi := guess/2, guess*2
	for range 60 {
		mid := (lo + hi) / 2
		q, err := rate(heated(top, base, mid, 1, fixedFlow), k)
		if err != nil {
			return 0, err
		}
		if q > 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	return (lo + hi) / 2, nil
}

func thermalChecks() []Check {
	var list []Check
	for _, v := range []struct {
		name      string
		top, base growth.Boundary
		ra, k     float64
		flow      bool
		source    string
		status    Status
	}{
		{"rigid–rigid", growth.Rigid, growth.Rigid, 1707.76178, 3.11632, false, "Chandrasekhar 1961, ch. II", Published},
		{"slip–slip", growth.FreeSlip, growth.FreeSlip, 657.51136, 2.22144, false, "Chandrasekhar 1961, ch. II", Published},
		{"slip–rigid", growth.FreeSlip, growth.Rigid, 1100.64961, 2.68232, false, "Chandrasekhar 1961, ch. II", Published},
		{"rigid–rigid, heat flow fixed at the base", growth.Rigid, growth.Rigid, 1295.77787, 2.55191, true, "problem of Sparrow et al. 1964; derived", Derived},
		{"slip–slip, heat flow fixed at the base", growth.FreeSlip, growth.FreeSlip, 384.69284, 1.75758, true, "problem of Sparrow et al. 1964; derived", Derived},
	} {
		list = append(list, Check{"critical Rayleigh number, " + v.name, "", v.ra, 1e-8, v.source + "; nine digits", v.status,
			func(context.Context) (float64, error) { return critical(v.top, v.base, v.k, v.ra, v.flow) }})
	}
	layer := func(kappa float64, frozen bool) *growth.Column {
		c := heated(growth.Rigid, growth.HalfSpace, 1, kappa, false)
		c.EtaS, c.EtaN = 0.1, 0.1
		none := func(float64) float64 { return 0 }
		one := func(float64) float64 { return 1 }
		c.Diffusion.HalfSpace = growth.Thermal{PerKelvin: func(float64) float64 { return -1 }, Excess: none, Conductivity: func(float64) float64 { return kappa }, Capacity: one}
		if frozen { // T' = −γζ: a density gradient (∂ρ/∂T) γ
			c.Diffusion = nil
			c.Layers[0].Gradient = func(float64) float64 { return -1 }
		}
		return c
	}
	list = append(list,
		Check{"thermal layer over a half-space ten times weaker, κ = 1e-3, kh = 2", "gραγh/η", 0.0463908682814, 5e-8,
			"derived", Derived, at(layer(1e-3, false), 2, func(q float64) float64 { return q })},
		Check{"the same without diffusion", "gραγh/η", 0.0530875769, 2e-9, "derived", Derived, at(layer(0, true), 2, func(q float64) float64 { return q })},
	)
	for i, part := range []string{"real part", "imaginary part"} {
		list = append(list, Check{"oscillatory mode: stable contact in an unstable geotherm, " + part, "κ/h²", []float64{0.15163596, 7.42236781}[i], []float64{4e-8, 2e-9}[i],
			"derived; digits as given", Derived, func(context.Context) (float64, error) {
				c := heated(growth.Rigid, growth.Rigid, 2000, 1, false)
				half := c.Layers[0]
				half.Thickness = 0.5
				c.Layers = []growth.Layer{half, half}
				c.Diffusion.Layers = append(c.Diffusion.Layers, c.Diffusion.Layers[0])
				c.Jumps = []float64{0, 100, 0}
				s, err := growth.NewSolver(c, 0)
				if err != nil {
					return 0, err
				}
				r, err := s.Rate(2 * math.Pi / 3.1)
				if err != nil {
					return 0, err
				}
				return []float64{r.Growth, r.Imaginary}[i], nil
			}})
	}
	list = append(list, Check{"drip of a hot root whose heat does not diffuse, followed as a state, against the same densities typed as gradients of composition: ratio of the drip times", "", 1, 2e-6,
		"a parcel that keeps its heat sinks like one that keeps its composition, derived", Derived, heatTyped})
	return append(list, Check{"hot layer of one rock over an inviscid base, no density jump, λ = 100 km", "1/s", 2.711342845e-14, 1e-9,
		"derived; collocation in 30 digits by a second hand, T' = −ξ dT₀/dz at the base", Derived, overFluid})
}

// overFluid is the growth rate of 100 km of expanding rock, 0 to 1300 °C, over fluid of
// its own density: only temperature acts.
func overFluid(context.Context) (float64, error) {
	rock := column.Rock{Density: column.EquationOfState{Reference: 3300, Expansivity: 3e-5, ReferenceTemperature: 273.15},
		Viscosity: column.Viscosity{Top: 1e20, Bottom: 1e20, Exponent: 1, Factor: 1}, Conductivity: column.Conductivity{Reference: 2.5}, HeatCapacity: 1000}
	c := &column.Column{Gravity: g, Surface: column.Surface{Boundary: column.Rigid, Temperature: 273.15},
		Base: column.Base{Boundary: column.Inviscid, HasTemperature: true, Temperature: 1573.15, Rock: rock}}
	for i := range 8 {
		c.Layers = append(c.Layers, column.Layer{Name: string(rune('a' + i)), Thickness: 12.5e3, Rock: rock})
	}
	s, err := state.New(c, 0)
	if err != nil {
		return 0, err
	}
	return rate(drip.Strained(s, drip.Background{}, "diffusive"), 2*math.Pi/100e3)
}
