package drip

import (
	"math"

	"keelfall/solver/growth"
)

// probe is A of the root's base and the surface, without e_z, 1/s.
type probe struct{ bb, bs, sb, ss float64 }

// slaved is the growth rate of the base where the surface follows at once: at long
// wavelengths the difference of two rates almost as large as each other.
func (p probe) slaved() float64 {
	if p.ss == 0 {
		return p.bb
	}
	return p.bb - p.bs*p.sb/p.ss
}

// miss returns by how much interpolation between the outer two of three nodes misses the
// middle one: of growth rates, relative to those that matter.
func (c *softCourse) miss(from, mid, end *softNode) (float64, error) {
	idle := softIdle / (c.until - c.first().t)
	var worst float64
	var at [3][]probe
	for i, n := range []*softNode{from, mid, end} {
		if err := c.probe(n); err != nil {
			return 0, err
		}
		at[i] = n.probed
	}
	for i, m := range at[1] {
		p, q := at[0][i], at[2][i]
		guess := probe{blend(p.bb, q.bb, 0.5), blend(p.bs, q.bs, 0.5), blend(p.sb, q.sb, 0.5), blend(p.ss, q.ss, 0.5)}
		off := math.Abs(m.slaved() - guess.slaved())
		worst = math.Max(worst, mid.exponent*off/(math.Abs(m.slaved())+idle))
	}
	return worst, nil
}

// probe fills a node's probes, with the column's own viscosities: at the wavelengths
// that a root over a fluid and one over rock as stiff prefer, about, and a long one. Rock that softens itself
// follows temperature n times as closely as one at a given rate does.
func (c *softCourse) probe(n *softNode) error {
	b := n.lay.rootBase
	if n.probed != nil || b < 0 || !n.lay.movable(b) {
		return nil
	}
	s, err := growth.NewSolver(n.model, 1e-5)
	if err != nil {
		return err
	}
	for _, kh := range [3]float64{2, 0.7, 0.25} {
		m, err := s.System(2 * math.Pi * n.root / kh)
		if err != nil {
			return err
		}
		at, ez := m.Interface[b], n.model.VerticalStrain
		e := probe{bb: m.A[at*m.N+at] - ez}
		if top := m.Interface[0]; top >= 0 {
			e.bs, e.sb, e.ss = m.A[at*m.N+top], m.A[top*m.N+at], m.A[top*m.N+top]-ez
		}
		n.probed = append(n.probed, e)
	}
	for i := range n.s.Layers {
		for _, p := range n.s.Layers[i].Points {
			if n.s.Column.Layers[i].Root {
				n.exponent = math.Max(n.exponent, math.Min(p.Exponent, 5))
			}
		}
	}
	return nil
}
