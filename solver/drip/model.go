package drip

import (
	"math"

	"keelfall/column"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Background is the deformation of the whole column while the undulation grows.
type Background struct {
	ExtensionRate float64 // e, 1/s, positive in extension
	AlongStrike   bool    // the wavevector runs along strike, across the extension
}

// rates returns d = (e_k − e_z)/2, e_z and (d/ε₀)² with the second invariant ε₀ = |e|.
func (b Background) rates() (d, vertical, ratio float64) {
	switch e := b.ExtensionRate; {
	case e == 0:
		return 0, 0, 0
	case b.AlongStrike: // e_k = 0, e_y = e, e_z = −e
		return e / 2, -e, 0.25
	default: // e_k = e, e_z = −e
		return e, -e, 1
	}
}

// Model returns what the growth solver needs of a state that nothing strains: the
// secant viscosities at the state's strain rate, isotropic; density jumps and
// compositional gradients; no thermal buoyancy.
func Model(s *state.State) *growth.Column { return Strained(s, Background{}, "none") }

// Strained returns the same of a state that is strained, with thermal buoyancy "none",
// "frozen" or "diffusive". Where it is strained, the viscosity against normal strain
// along the wavevector is η_N = η [1 + (1/n − 1) d²/ε₀²], n the tangent exponent
// (Fletcher 1974, Tectonophysics 22; Smith 1977, GSA Bull. 88); the state must be that
// at the background's strain rate.
func Strained(s *state.State, b Background, thermal string) *growth.Column {
	c := s.Column
	d, vertical, soften := b.rates()
	normal := func(eta, n float64) float64 { return eta * (1 + (1/n-1)*soften) }
	m := &growth.Column{
		Gravity: c.Gravity,
		Top:     boundaries[c.Surface.Boundary], Base: boundaries[c.Base.Boundary],
		Jumps: s.Jumps,
		EtaS:  s.Base.Viscosity, EtaN: normal(s.Base.Viscosity, math.Max(1, s.Base.Exponent)),
		ShearRate: d, VerticalStrain: vertical,
	}
	for i := range c.Layers {
		l := growth.Layer{
			Thickness: c.Layers[i].Thickness,
			Kinks:     s.Kinks(i),
			Viscosity: func(z float64) (float64, float64) {
				eta, n := s.ViscosityAt(i, z)
				return eta, normal(eta, n)
			},
		}
		if graded(s, i) {
			l.Gradient = func(z float64) float64 { return s.GradientAt(i, z) }
			top, _ := s.Span(i)
			l.Breaks = breaks(c.Layers[i].Density, top, l.Thickness)
		}
		m.Layers = append(m.Layers, l)
	}
	switch {
	case !s.HasTemperature:
	case thermal == "frozen":
		for i := range m.Layers {
			if !needsTemperature(c, i) {
				continue
			}
			composition, heat := m.Layers[i].Gradient, heatOf(s, i)
			m.Layers[i].HeatGradient = composition == nil
			m.Layers[i].Gradient = func(z float64) float64 {
				g := heat.PerKelvin(z) * heat.Excess(z)
				if composition != nil {
					g += composition(z)
				}
				return g
			}
		}
	case thermal == "diffusive":
		m.Diffusion = diffusion(s)
	}
	return m
}

var boundaries = map[column.Boundary]growth.Boundary{
	column.Free: growth.Free, column.FreeSlip: growth.FreeSlip, column.Rigid: growth.Rigid,
	column.HalfSpace: growth.HalfSpace, column.Inviscid: growth.Inviscid,
}

// graded says whether composition grades anywhere in a layer.
func graded(s *state.State, layer int) bool {
	for _, p := range s.Layers[layer].Points {
		if s.GradientAt(layer, p.Depth) != 0 {
			return true
		}
	}
	return false
}

func needsTemperature(c *column.Column, layer int) bool {
	return c.Layers[layer].Density.NeedsTemperature()
}

// diffusion returns the heat of a column whose temperature is perturbed.
func diffusion(s *state.State) *growth.Diffusion {
	c := s.Column
	d := &growth.Diffusion{FixedFlow: c.Base.HasHeatFlow}
	for i := range c.Layers {
		d.Layers = append(d.Layers, heatOf(s, i))
	}
	last := len(c.Layers) - 1
	_, d.BaseGradient = s.TemperatureAt(last, c.Depth())
	constant := func(v float64) func(float64) float64 { return func(float64) float64 { return v } }
	if c.Base.Boundary == column.HalfSpace {
		r, b := &c.Base.Rock, s.Base
		d.HalfSpace = growth.Thermal{PerKelvin: constant(r.Density.PerKelvin(b.T, b.P, 0)), Excess: constant(0),
			Conductivity: constant(r.Conductivity.Value(b.T, b.P)), Capacity: constant(b.Density * r.ApparentHeatCapacity(b.T, b.P))}
	}
	return d
}

// heatOf returns what temperature perturbations need of one layer.
func heatOf(s *state.State, layer int) growth.Thermal {
	l := &s.Column.Layers[layer]
	top, bottom := s.Span(layer)
	at := func(z float64) (T, P, x, slope float64) {
		T, slope = s.TemperatureAt(layer, z)
		return T, s.PressureAt(layer, z), (z - top) / (bottom - top), slope
	}
	return growth.Thermal{
		PerKelvin: func(z float64) float64 {
			T, P, x, _ := at(z)
			return l.Density.PerKelvin(T, P, x)
		},
		Excess: func(z float64) float64 { // dT₀/dz less the adiabat's, α g T₀/c_p without melt
			T, P, x, slope := at(z)
			return slope - l.Adiabat(T, P, x)*l.Density.At(T, P, x)*s.Column.Gravity
		},
		Conductivity: func(z float64) float64 {
			T, P, _, _ := at(z)
			return l.Conductivity.Value(T, P)
		},
		Capacity: func(z float64) float64 {
			T, P, x, _ := at(z)
			return l.Density.At(T, P, x) * l.ApparentHeatCapacity(T, P)
		},
	}
}
