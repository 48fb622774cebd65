package state

import (
	"fmt"

	"keelfall/column"
)

// Weight returns the column as column.Balance takes it: masses between the nodes from the
// pressure, which is integrated with the in-situ density.
func (s *State) Weight() column.Weight {
	var w column.Weight
	for i := range s.Layers {
		s.weigh(&w, i)
	}
	return w
}

// weigh puts a layer below the others.
func (s *State) weigh(w *column.Weight, layer int) {
	ps, g := s.Layers[layer].Points, s.Column.Gravity
	for j := 1; j < len(ps); j++ {
		a, b := &ps[j-1], &ps[j]
		w.Add(b.Depth-a.Depth, (b.P-a.P)/g, a.Density, b.Density)
	}
}

// Asthenosphere is the rock below the column, on the adiabat through the temperature and
// pressure of the column's base. Under a base that is rigid or free-slip and has no rock
// of its own it is the last layer's, as it is at its bottom.
func (s *State) Asthenosphere() column.Asthenosphere {
	a := column.Asthenosphere{Rock: s.Column.Base.Rock, T: s.Base.T, P: s.Base.P}
	if a.Rock.Density == nil {
		a.Rock, a.Place = s.Column.Layers[len(s.Column.Layers)-1].Rock, 1
	}
	return a
}

// WeightWithoutRoot is Weight with asthenosphere in the place of the root layers; what
// lies below them keeps its density. ok is false where there is no root.
func (s *State) WeightWithoutRoot(a column.Asthenosphere) (w column.Weight, ok bool, err error) {
	for i := range s.Column.Layers {
		l := &s.Column.Layers[i]
		if !l.Root {
			s.weigh(&w, i)
			continue
		}
		ok = true
		if err := a.Under(s.Column.Gravity, &w, l.Thickness); err != nil {
			return w, true, fmt.Errorf("state: in the place of %s: %w", l.Name, err)
		}
	}
	return w, ok, nil
}
