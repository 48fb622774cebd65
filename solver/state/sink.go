package state

import (
	"fmt"

	"keelfall/column"
)

// Sinking is what decides whether a layer's rock is denser than the rock below it, both
// taken at one temperature and pressure, those of the layer's middle.
type Sinking struct {
	Layer       int
	Depth, T, P float64 // of the layer's middle: m, K, Pa
	Density     float64 // of the layer's rock, kg/m³
	Below       float64 // of the rock below it, at its top, at the same T and P, kg/m³
	Contrast    float64 // Density − Below: positive sinks
	HasBelow    bool    // false over a base without rock (rigid, free-slip), or one whose table does not reach these T and P
	Expansivity float64 // −(∂ρ/∂T)_P/ρ of the layer's rock, 1/K
	BulkModulus float64 // ρ (∂P/∂ρ)_T of the layer's rock, Pa; +Inf where its density does not depend on pressure
	Needs       []Need  // one for each handle the rock has
}

// Need is the value of one property of a layer's rock at which Contrast changes sign.
type Need struct {
	What     string  // "garnet share" (of the volume at 298 K and P = 0, where modes are counted), "reaction extent" (of the mass) or "melt fraction" (of the volume)
	Now      float64 // the value in use
	From, To float64 // the range searched
	At       float64 // where the contrast changes sign
	Found    bool    // false: never in the range
	Rises    bool    // more of it makes the rock denser against what lies below
}

// Sinking returns for every layer, from the surface down, what decides whether its rock
// sinks into the rock below, at the T and P of the layer's middle; T = 0 where the state
// has no temperature. Where a layer grades, its rock is that of its middle and the rock
// below that of its top.
//
// The needs of a rock are those its density has: the share of garnet in mineral modes,
// garnets and other minerals each keeping their proportions; the reacted share of a
// reaction; the fraction of a melt that has a density. Each is looked for with all else
// as it is, melt at the fraction in use included, and found to 1e-12 where the contrast
// is not round-off itself. Each moves the density one way only, so that a sign at either
// end decides. A melt fraction above column.MeltLimit is beyond what melt in a rock is.
//
// Errors: a density that is no positive number.
func (s *State) Sinking() ([]Sinking, error) {
	out := make([]Sinking, len(s.Layers))
	for i := range out {
		l := &s.Column.Layers[i]
		top, bottom := s.Span(i)
		k := Sinking{Layer: i, Depth: top + (bottom-top)/2}
		k.T, k.P, _ = s.heat.Layers[i].At(k.Depth)
		k.Density = l.Density.At(k.T, k.P, middle)
		k.Expansivity = column.Expansivity(l.Density, k.T, k.P, middle)
		k.BulkModulus = column.BulkModulus(l.Density, k.T, k.P, middle)
		if below := s.below(i); below != nil && column.Covered(below, k.T, k.P) == nil {
			k.HasBelow = true
			k.Below = below.At(k.T, k.P, 0)
			k.Contrast = k.Density - k.Below
		}
		if sum := k.Density + k.Below; !(k.Density > 0 && k.Below >= 0) || sum-sum != 0 {
			return nil, fmt.Errorf("state: %s: density %g kg/m³ above %g kg/m³ at T = %.4g K, P = %.4g Pa", l.Name, k.Density, k.Below, k.T, k.P)
		}
		if k.HasBelow {
			for _, h := range handles(l.Density, k.T, k.P) {
				k.Needs = append(k.Needs, h.need(k.Below))
			}
		}
		out[i] = k
	}
	return out, nil
}

// middle is the relative depth at which a layer's rock is taken.
const middle = 0.5

// below returns the density of the rock under a layer; nil over a wall.
func (s *State) below(layer int) column.Density {
	c := s.Column
	switch b := c.Base.Boundary; {
	case layer+1 < len(c.Layers):
		return c.Layers[layer+1].Density
	case b == column.HalfSpace || b == column.Inviscid:
		return c.Base.Density
	}
	return nil
}

// handle is a property of a rock, from 0 to 1, and the density in kg/m³ it gives.
type handle struct {
	what    string
	now     float64
	density func(value float64) float64
}

// handles returns what can be changed in a density at one T and P.
func handles(d column.Density, T, P float64) []handle {
	var melt []handle
	x := middle
	whole := func(solid column.Density) float64 { return solid.At(T, P, x) }
	if m, ok := d.(column.Molten); ok {
		phi, _ := m.Melt.At(T, P)
		if m.Melt != nil && m.Melt.Density > 0 {
			melt = []handle{{"melt fraction", phi, func(v float64) float64 { return m.AtFraction(T, P, middle, v) }}}
		}
		whole = func(solid column.Density) float64 { return column.Molten{Solid: solid, Melt: m.Melt}.At(T, P, x) }
		d = m.Solid
	}
	if v, ok := d.(column.Varying); ok {
		d, x = v.Here(middle)
	}
	var out []handle
	switch d := d.(type) {
	case *column.Modes:
		if share, ok := d.Garnet(); ok {
			out = []handle{{"garnet share", share, func(v float64) float64 { return whole(d.WithGarnet(v)) }}}
		}
	case column.Reaction:
		if d.WithExtent(0.5).Covers(T, P) == nil { // both parts have a density here
			out = []handle{{"reaction extent", d.Extent, func(v float64) float64 { return whole(d.WithExtent(v)) }}}
		}
	}
	return append(out, melt...)
}

// need looks for the value that gives the density of the rock below.
func (h handle) need(below float64) Need {
	n := Need{What: h.what, Now: h.now, To: 1}
	from, to := h.density(0)-below, h.density(1)-below
	n.Rises = to > from
	switch {
	case from == to: // no handle on the density
	case from == 0:
		n.Found = true
	case to == 0:
		n.At, n.Found = 1, true
	case (from < 0) != (to < 0):
		n.At, n.Found = bisect(0, 1, func(v float64) bool { return (h.density(v)-below < 0) == (from < 0) }), true
	}
	return n
}
