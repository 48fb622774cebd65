package race

import (
	"fmt"

	"keelfall/column"
	"keelfall/solver/state"
)

// Reference is the column that elevation and potential energy are measured against.
// Below its layers the asthenosphere goes on.
type Reference struct {
	Elevation     float64 // of its surface above sea level, m
	Layers        []ReferenceLayer
	Asthenosphere float64 // density of what both columns float on, kg/m³; 0: the rock below the problem's own column
}

// ReferenceLayer is a layer of one in-situ density.
type ReferenceLayer struct {
	Thickness float64 // m
	Density   float64 // kg/m³
}

// Floats is a column in local isostatic balance beside the reference: no stress in its
// rocks holds it up or down.
type Floats struct {
	column.Isostasy
	HasRoot     bool
	WithoutRoot column.Isostasy // with asthenosphere in the root's place
}

// Isostasy floats a prepared column, with its root and without.
//
// Errors: an experiment without a reference, and those of column.Balance; a column in
// which an asthenosphere has no density at some pressure is one.
func Isostasy(p *Problem, s *state.State) (*Floats, error) {
	r, a, err := reference(p, s)
	if err != nil {
		return nil, err
	}
	g := s.Column.Gravity
	out := &Floats{}
	if out.Isostasy, err = column.Balance(g, s.Weight(), r, a); err != nil {
		return nil, err
	}
	w, ok, err := s.WeightWithoutRoot(a)
	if err != nil || !ok || !(w.Mass > 0) {
		return out, err
	}
	out.HasRoot = true
	out.WithoutRoot, err = column.Balance(g, w, r, a)
	return out, err
}

// IsostasyThrough floats a column at several times, beside the reference and on the
// asthenosphere of s, its start.
func IsostasyThrough(p *Problem, s *state.State, weights []column.Weight) ([]column.Isostasy, error) {
	r, a, err := reference(p, s)
	if err != nil {
		return nil, err
	}
	out := make([]column.Isostasy, len(weights))
	for i, w := range weights {
		if out[i], err = column.Balance(s.Column.Gravity, w, r, a); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// reference is p's, and what both columns float on.
func reference(p *Problem, s *state.State) (column.Reference, column.Asthenosphere, error) {
	if p.Reference == nil {
		return column.Reference{}, column.Asthenosphere{}, fmt.Errorf("%w: no reference column to measure elevation against", ErrInput)
	}
	r := column.Reference{Elevation: p.Reference.Elevation}
	for _, l := range p.Reference.Layers {
		r.Weight.AddUniform(l.Thickness, l.Density)
	}
	a := s.Asthenosphere()
	if rho := p.Reference.Asthenosphere; rho > 0 {
		a = column.Asthenosphere{Rock: column.Rock{Density: column.Uniform(rho)}}
	}
	return r, a, nil
}
