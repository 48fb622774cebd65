package drip

import (
	"keelfall/column"
	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Model returns what the growth solver needs of a state that nothing strains: the
// secant viscosities at the state's strain rate, isotropic; density jumps and
// compositional gradients; no thermal buoyancy.
func Model(s *state.State) *growth.Column {
	c := s.Column
	m := &growth.Column{
		Gravity: c.Gravity,
		Top:     boundaries[c.Surface.Boundary], Base: boundaries[c.Base.Boundary],
		Jumps: s.Jumps,
		EtaS:  s.Base.Viscosity, EtaN: s.Base.Viscosity,
	}
	for i := range c.Layers {
		l := growth.Layer{
			Thickness: c.Layers[i].Thickness,
			Kinks:     s.Kinks(i),
			Viscosity: func(z float64) (float64, float64) {
				eta, _ := s.ViscosityAt(i, z)
				return eta, eta
			},
		}
		if graded(s, i) {
			l.Gradient = func(z float64) float64 { return s.GradientAt(i, z) }
		}
		m.Layers = append(m.Layers, l)
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
