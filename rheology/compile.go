package rheology

import (
	"fmt"
	"math"
)

// mechanism is one law for one rock: ln ε = c − (e + P v)/T + n ln τ. Where the grain
// size follows the stress, d ∝ τ^−p, n is the law's exponent plus m p; held is the
// exponent at a grain size that is held. A barrier of low-temperature plasticity makes
// the activation part depend on stress.
type mechanism struct {
	c, e, v, n, held float64
	barrier          barrier
}

// node is a group, whose mechanisms and mixes act at one stress, or a mix, whose groups
// act at one strain rate. Nodes stand in preorder, the whole rock first.
type node struct {
	rule   Mixing  // of a mix
	a, b   int     // a group's mechanisms
	end    int     // behind the last node below this one
	share  float64 // of a group: its fraction in its mix
	lnRate float64 // of a mix: ln of its fraction in iso-stress mixtures around it
}

// many is how many mechanisms, terms and nodes are held without allocation.
const many = 8

// compiler holds what every law of a rock is made ready with, and how many mechanisms
// and nodes there are so far. Its methods fill slices that are long enough.
type compiler struct {
	at       *Conditions
	piezo    *Piezometer
	lnFactor float64
	nm, nn   int
}

// compile makes c ready for one rock, in the slices given where they are long enough.
// Laws that share one stress, iso-stress phases among them, become one list of
// mechanisms; the upper limit is the first group's last.
func (c *Creep) compile(ms []mechanism, nodes []node, at *Conditions) (Flow, error) {
	if c.Factor != 0 && !(c.Factor > 0 && !math.IsInf(c.Factor, 1)) {
		return Flow{}, fmt.Errorf("rheology: viscosity factor %g, must be > 0", c.Factor)
	}
	k := compiler{at: at, piezo: c.Piezometer}
	if c.Factor != 0 {
		k.lnFactor = math.Log(c.Factor)
	}
	if c.Piezometer != nil {
		if err := c.Piezometer.Validate(); err != nil {
			return Flow{}, err
		}
	}
	nm, nn := size(c.Laws, c.Mixtures)
	if nm++; nm > len(ms) { // the limit
		ms = make([]mechanism, nm)
	}
	if nn++; nn > len(nodes) { // the rock
		nodes = make([]node, nn)
	}
	if err := k.group(ms, nodes, c.Laws, c.Mixtures, 1, c.Limits.Highest); err != nil {
		return Flow{}, err
	}
	f := Flow{ms: ms[:k.nm], nodes: nodes[:k.nn], limits: c.Limits, piezo: c.Piezometer}
	for i := range f.ms {
		f.follows = f.follows || f.ms[i].n != f.ms[i].held
		f.bent = f.bent || f.ms[i].barrier.p != 0
	}
	if c.Melt != nil && c.Weakening != 0 {
		if !(c.Weakening > 0) || math.IsInf(c.Weakening, 1) {
			return Flow{}, fmt.Errorf("rheology: weakening by melt %g, must be >= 0", c.Weakening)
		}
		f.melt, f.weakening = c.Melt, c.Weakening
	}
	if c.Friction != nil {
		if err := c.Friction.Validate(); err != nil {
			return Flow{}, err
		}
		if s := at.Sense; s != 0 && s != 1 && s != -1 {
			return Flow{}, fmt.Errorf("rheology: sense of strain %g, must be 1, 0 or -1", s)
		}
		f.frictional = true
		f.yield, f.yieldPerPa = c.Friction.line(at.Sense)
	}
	return f, nil
}

// size is how many mechanisms and nodes the laws and mixtures need at most.
func size(laws []Law, mixtures []Mixture) (nm, nn int) {
	nm = len(laws)
	for i := range mixtures {
		nn += 1 + len(mixtures[i].Phases)
		for j := range mixtures[i].Phases {
			p := &mixtures[i].Phases[j]
			m, n := size(p.Laws, p.Mixtures)
			nm, nn = nm+m, nn+n
		}
	}
	return nm, nn
}

// group adds a group node, its mechanisms and what lies below it.
func (k *compiler) group(ms []mechanism, nodes []node, laws []Law, mixtures []Mixture, share, highest float64) error {
	if len(laws) == 0 && len(mixtures) == 0 {
		return fmt.Errorf("rheology: no creep law")
	}
	nd := &nodes[k.nn]
	k.nn++
	*nd = node{share: share, a: k.nm}
	if err := k.laws(ms, laws, mixtures, 0); err != nil {
		return err
	}
	if highest > 0 {
		ms[k.nm] = mechanism{c: -math.Log(2 * highest), n: 1, held: 1}
		k.nm++
	}
	nd.b = k.nm
	err := k.mixes(ms, nodes, mixtures, 1)
	nd.end = k.nn
	return err
}

// laws adds the laws that act at the group's stress, iso-stress phases among them.
func (k *compiler) laws(ms []mechanism, laws []Law, mixtures []Mixture, lnShare float64) error {
	for i := range laws {
		if err := k.law(&ms[k.nm], &laws[i]); err != nil {
			return err
		}
		ms[k.nm].c += lnShare
		k.nm++
	}
	for i := range mixtures {
		m := &mixtures[i]
		sum, err := m.total()
		if err != nil {
			return err
		}
		for j := range m.Phases {
			p := &m.Phases[j]
			if m.Rule != IsoStress || p.Fraction == 0 {
				continue
			}
			if err := k.laws(ms, p.Laws, p.Mixtures, lnShare+math.Log(p.Fraction/sum)); err != nil {
				return err
			}
		}
	}
	return nil
}

// mixes adds the mixes at one strain rate that act at the group's stress.
func (k *compiler) mixes(ms []mechanism, nodes []node, mixtures []Mixture, share float64) error {
	for i := range mixtures {
		m := &mixtures[i]
		sum, err := m.total()
		if err != nil {
			return err
		}
		nd := &nodes[k.nn]
		if m.Rule != IsoStress {
			*nd = node{rule: m.Rule, lnRate: math.Log(share)}
			k.nn++
		}
		for j := range m.Phases {
			p := &m.Phases[j]
			switch {
			case p.Fraction == 0:
			case m.Rule == IsoStress:
				err = k.mixes(ms, nodes, p.Mixtures, share*p.Fraction/sum)
			default:
				err = k.group(ms, nodes, p.Laws, p.Mixtures, p.Fraction/sum, 0)
			}
			if err != nil {
				return err
			}
		}
		if m.Rule != IsoStress {
			nd.end = k.nn
		}
	}
	return nil
}

// law puts grain size, water and the viscosity factor into a law.
func (k *compiler) law(to *mechanism, l *Law) error {
	p, n := math.Log(l.A), l.N
	switch {
	case l.M == 0:
	case k.piezo != nil:
		a, b := k.piezo.line()
		// the stress that the grain size follows is, like τ, that of the scaled rock
		p -= l.M * a
		n += l.M * b
	case !(k.at.GrainSize > 0):
		return &NeedsError{l.Name, "a grain size"}
	default:
		p -= l.M * math.Log(k.at.GrainSize)
	}
	if l.R != 0 {
		if k.at.WaterMeasure != l.Water || !(k.at.Water > 0) {
			return &NeedsError{l.Name, l.Water.need()}
		}
		p += l.R * math.Log(k.at.Water)
	}
	p -= l.N * k.lnFactor // the stress, hence η, is that factor higher
	if math.IsNaN(p) || math.IsInf(p, 0) || !(l.N > 0 || l.N == 0 && l.Peierls.Least > 0) {
		return fmt.Errorf("rheology: %s: A = %g, n = %g, grain size %g m, water %g give no strain rate", l.Name, l.A, l.N, k.at.GrainSize, k.at.Water)
	}
	*to = mechanism{p, l.E / GasConstant, l.V / GasConstant, n, l.N, l.barrier(k.lnFactor)}
	return nil
}
