package race

import (
	"context"
	"fmt"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/drip"
)

// exponentStep is by how much ln η is changed either way: the drip time of layered rock
// is smooth in it, and third derivatives count for less than 1e-3 (tested).
const exponentStep = 0.05

// Exponents returns ∂ln t/∂ln η of the first drip's time t with respect to the viscosity
// of every layer, the base last: by central differences at the drip's first wavelength in
// m, with the softening in use. At the quickest wavelength the time does not depend on it,
// so that these are the exponents of the drip time itself. In Newtonian rock that meets no
// limit they add up to 1; in rock of one n that only the drip softens, to n.
func Exponents(ctx context.Context, p *Problem, wavelength float64) ([]float64, error) {
	out := make([]float64, len(p.Column.Layers)+1)
	for i := range out {
		if i == len(p.Column.Layers) && p.Column.Base.Boundary != column.HalfSpace {
			continue // it has no viscosity
		}
		for _, sign := range []float64{1, -1} {
			q := *p
			q.Column.Layers = slices.Clone(p.Column.Layers)
			v := &q.Column.Base.Viscosity
			if i < len(p.Column.Layers) {
				v = &q.Column.Layers[i].Viscosity
			}
			v.Factor = v.FactorOr1() * math.Exp(sign*exponentStep)
			t, err := q.timeAt(ctx, wavelength)
			if err != nil {
				return nil, err
			}
			if math.IsInf(t, 1) || !(t > 0) {
				return nil, fmt.Errorf("race: with the viscosity of layer %d changed by %g %% there is no drip time", i+1, 100*exponentStep)
			}
			out[i] += sign * math.Log(t) / (2 * exponentStep)
		}
	}
	return out, nil
}

// timeAt is the drip time of one wavelength, s.
func (p *Problem) timeAt(ctx context.Context, wavelength float64) (float64, error) {
	if p.Moving() {
		plan, err := p.dripPlan()
		if err != nil {
			return 0, err
		}
		return drip.ThroughTimeAt(ctx, plan, p.dripSettings(), wavelength)
	}
	s, err := Prepare(p)
	if err != nil {
		return 0, err
	}
	return drip.TimeAt(ctx, s, p.dripSettings(), wavelength)
}
