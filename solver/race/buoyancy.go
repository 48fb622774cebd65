package race

import (
	"keelfall/column"
	"keelfall/solver/state"
)

// Buoyancy returns how much denser, in kg/m³, the root's base is than what lies below
// it, at the pressure and temperature of that contact, and the stress in Pa with which
// the whole root pulls on it, both positive where the root is the denser:
//
//	∫ (ρ(z) − ρ_below) g dz     over the root layers
//
// ok is false without a root, or where it lies on a wall.
func Buoyancy(s *state.State) (contrast, stress float64, ok bool) {
	first, last, ok := s.Column.RootSpan()
	if !ok {
		return 0, 0, false
	}
	pts := s.Layers[last].Points
	contrast = -s.Jumps[last+1]
	below := pts[len(pts)-1].Density - contrast
	if b := s.Column.Base.Boundary; last+1 == len(s.Layers) && b != column.HalfSpace && b != column.Inviscid {
		return 0, 0, false
	}
	for i := first; i <= last; i++ {
		pts := s.Layers[i].Points
		for j := 1; j < len(pts); j++ {
			mean := (pts[j].Density + pts[j-1].Density) / 2
			stress += (mean - below) * s.Column.Gravity * (pts[j].Depth - pts[j-1].Depth)
		}
	}
	return contrast, stress, true
}
