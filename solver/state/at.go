package state

import (
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
)

// edge is how far outside a layer, relative to the column's depth, a depth still
// counts as its edge: round-off of sums of thicknesses.
const edge = 1e-9

// At returns the state of a layer's rock at the depth z in m. Depths outside the
// layer are an error. It panics if the layer does not exist.
func (s *State) At(layer int, z float64) (Point, error) {
	h := &s.heat.Layers[layer]
	l := &s.Column.Layers[layer]
	slack := edge * s.Column.Depth()
	if !(z >= h.Top-slack && z <= h.Bottom+slack) {
		return Point{}, fmt.Errorf("state: depth %g m is outside %s, %g to %g m", z, l.Name, h.Top, h.Bottom)
	}
	z = min(max(z, h.Top), h.Bottom)
	T, P, _ := h.At(z)
	p, err := s.point(&l.Rock, s.flows[layer], (z-h.Top)/l.Thickness, z, T, P)
	if err != nil {
		return Point{}, fmt.Errorf("state: %s at %.0f m: %w", l.Name, z, err)
	}
	return p, nil
}

// ViscosityAt returns the secant viscosity in Pa s and the tangent exponent of a
// layer's rock at the depth z in m, which is taken to the nearest depth in the layer.
// T is interpolated by quintics and P by cubics that meet the equations' slopes at
// the nodes; the laws are evaluated exactly there, so that ln η is smooth inside the
// layer (but for Kinks) to some 1e-9. It does not allocate, and may be called by
// several goroutines at once. It panics if the layer does not exist.
func (s *State) ViscosityAt(layer int, z float64) (eta, n float64) {
	if s.flows[layer] == nil {
		h := &s.heat.Layers[layer]
		return s.Column.Layers[layer].Viscosity.At(min(max((z-h.Top)/(h.Bottom-h.Top), 0), 1))
	}
	T, P, _ := s.heat.Layers[layer].At(z)
	r, err := s.flows[layer].Respond(s.StrainRate, T, P)
	if err != nil { // New has evaluated every node of this layer
		panic(fmt.Sprintf("state: %s at %g m: %v", s.Column.Layers[layer].Name, z, err))
	}
	return r.Viscosity, r.Exponent
}

// ResponseAt returns how a layer's rock at the depth z in m answers another strain rate
// eII in 1/s: the full law, limits included. Layer len(s.Layers) is the half-space, at
// its top. A viscosity given as a number is the secant one at the state's strain rate,
//
//	η(ε) = η (ε/StrainRate)^(1/n − 1)
//
// Errors: a strain rate that is not positive (the state's own as well, where a number
// with n > 1 needs it), a base that is no half-space, and those of rheology.
func (s *State) ResponseAt(layer int, z, eII float64) (rheology.Response, error) {
	if !(eII > 0) || math.IsInf(eII, 1) {
		return rheology.Response{}, fmt.Errorf("state: strain rate %g 1/s, must be > 0", eII)
	}
	T, P := s.Base.T, s.Base.P
	if n := len(s.Layers); layer < n {
		T, P, _ = s.heat.Layers[layer].At(z)
	} else if s.Column.Base.Boundary != column.HalfSpace {
		return rheology.Response{}, fmt.Errorf("state: a base that is %s has no viscosity", s.Column.Base.Boundary)
	}
	if f := s.flows[layer]; f != nil {
		return f.Respond(eII, T, P)
	}
	eta, n := s.Base.Viscosity, s.Base.Exponent
	if layer < len(s.Layers) {
		eta, n = s.ViscosityAt(layer, z)
	}
	if n != 1 {
		if !(s.StrainRate > 0) {
			return rheology.Response{}, fmt.Errorf("state: a viscosity given with n = %g needs the strain rate it holds at; it is %g 1/s", n, s.StrainRate)
		}
		eta *= math.Pow(eII/s.StrainRate, 1/n-1)
	}
	return rheology.Response{Stress: 2 * eta * eII, Viscosity: eta, Exponent: n, Slope: 1 / n}, nil
}

// TemperatureAt returns T in K and dT/dz in K/m in a layer at the depth z in m; both
// are 0 where the column has no temperature. At a kink the slope is the lower side's.
func (s *State) TemperatureAt(layer int, z float64) (T, slope float64) {
	T, _, slope = s.heat.Layers[layer].At(z)
	return T, slope
}

// PressureAt returns the lithostatic pressure in Pa in a layer at the depth z in m.
func (s *State) PressureAt(layer int, z float64) float64 {
	_, P, _ := s.heat.Layers[layer].At(z)
	return P
}

// GradientAt returns the compositional density gradient dρ/dz at fixed P and T, in
// kg/m⁴, in a layer at the depth z in m: the gradient that counts for buoyancy. It is
// zero for one composition, however much that is compressed or heated.
func (s *State) GradientAt(layer int, z float64) float64 {
	h := &s.heat.Layers[layer]
	l := &s.Column.Layers[layer]
	T, P, _ := h.At(z)
	return l.Density.Gradient(T, P, min(max((z-h.Top)/l.Thickness, 0), 1)) / l.Thickness
}

// DepthOf returns the depth in m at which the lithostatic pressure is that in Pa, to
// round-off of the state's own interpolation; ok is false where the column does not
// reach it.
func (s *State) DepthOf(pressure float64) (depth float64, ok bool) {
	for i := range s.heat.Layers {
		h := &s.heat.Layers[i]
		if _, top, _ := h.At(h.Top); !(pressure >= top) {
			return 0, false
		} else if pressure == top {
			return h.Top, true
		}
		if _, bottom, _ := h.At(h.Bottom); pressure <= bottom {
			return bisect(h.Top, h.Bottom, func(z float64) bool { _, P, _ := h.At(z); return P < pressure }), true
		}
	}
	return 0, false
}

// Kinks returns the depths in m inside a layer where the slope of a given geotherm or
// of a tabulated density jumps, melting begins or ends, or the exponent of frictional
// yield reaches its limit; ln η and n are continuous there but a slope is not, and ∂ρ/∂T
// is not even continuous.
// The slice is the state's own.
func (s *State) Kinks(layer int) []float64 { return s.kinks[layer] }

// Span returns the depths in m of a layer's top and bottom.
func (s *State) Span(layer int) (top, bottom float64) {
	return s.heat.Layers[layer].Top, s.heat.Layers[layer].Bottom
}
