package state

import "slices"

// yieldKinks adds to a layer's kinks, by bisection to the last digits, the depths at
// which the exponent of yield reaches rheology.MaxExponent. Of several crossings between
// two nodes it finds one or none.
func (s *State) yieldKinks(layer int, kinks []float64) []float64 {
	f := s.flows[layer]
	if f == nil || s.Column.Layers[layer].Friction == nil {
		return kinks
	}
	limited := func(z float64) bool {
		T, P, _ := s.heat.Layers[layer].At(z)
		r, err := f.Respond(s.StrainRate, T, P)
		return err == nil && r.Limited // New has evaluated every node
	}
	ps := s.Layers[layer].Points
	out := slices.Clone(kinks)
	above := limited(ps[0].Depth)
	for i := 1; i < len(ps); i++ {
		below := limited(ps[i].Depth)
		if below != above {
			a, b := ps[i-1].Depth, ps[i].Depth
			for range 50 { // of the spacing of nodes, 2^−50
				if z := (a + b) / 2; limited(z) == above {
					a = z
				} else {
					b = z
				}
			}
			if z := (a + b) / 2; z > ps[0].Depth+edge*z && z < ps[len(ps)-1].Depth*(1-edge) {
				out = append(out, z)
			}
		}
		above = below
	}
	slices.Sort(out)
	return slices.Compact(out)
}
