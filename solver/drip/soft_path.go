package drip

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// boost says by what the closure's flow is multiplied.
type boost int

const (
	slow  boost = iota // nothing: a slow bound where one n holds everywhere
	best               // the best estimate: shortfall and finite amplitude put right
	early              // the same, by as much as the finite amplitude may be wrong
	tardy
)

// softPath is one undulation's way through a course: the medium of its softRun. Between
// two nodes dξ/dt = A ξ has the A of both closures at that ξ and the wavenumber then,
// interpolated entry by entry.
type softPath struct {
	ctx    context.Context
	course *softCourse
	first  float64 // wavelength when it began, m
	boost  boost
	a0     float64 // amplitude then over the root's thickness
	at     int     // stretch
	from   int     // node in it that begins the interval looked at last
	cores  bool    // both closures at the same time, on two cores
	seen   map[*softBand]bool
}

// nodes returns the two nodes around t, and where between them t is, 0 to 1.
func (p *softPath) nodes(t float64) (a, b *softNode, x float64) {
	n := p.course.stretches[p.at].nodes
	i := min(p.from, len(n)-1)
	for i > 0 && t < n[i].t {
		i--
	}
	for i+2 < len(n) && t > n[i+1].t {
		i++
	}
	if p.from = i; i+1 >= len(n) {
		return n[i], n[i], 0
	}
	a, b = n[i], n[i+1]
	return a, b, math.Min(1, math.Max(0, (t-a.t)/(b.t-a.t)))
}

// wavelength is that at t, m.
func (p *softPath) wavelength(t float64) float64 { return p.first * math.Exp(p.course.strain(t)) }

func (p *softPath) root(t float64) float64 {
	a, b, x := p.nodes(t)
	return blend(a.root, b.root, x)
}

func (p *softPath) stop(t float64) float64 { return p.course.set.Criterion * p.root(t) }

func (p *softPath) depth(t float64) float64 {
	a, _, _ := p.nodes(t)
	return a.s.Column.Depth()
}

func (p *softPath) share(float64) float64 { return 1 }

// end makes sure that nodes reach ahead and returns the end of the stretch.
func (p *softPath) end(ahead float64) (float64, error) {
	s := p.course.stretches[p.at]
	for !s.closed && s.nodes[len(s.nodes)-1].t < ahead {
		if err := p.course.extend(p.ctx); err != nil {
			return 0, err
		}
	}
	if s.closed {
		return s.end, nil
	}
	return math.Inf(1), nil
}

func (p *softPath) unsettled(t float64) {
	a, b, _ := p.nodes(t)
	k := 2 * math.Pi / p.wavelength(t)
	for _, n := range []*softNode{a, b} {
		if n.soft != nil {
			n.soft.again(k)
		}
	}
}

// flow interpolates between the closures of two nodes.
func (p *softPath) flow(t float64, y []float64) (flowing, error) {
	a, b, x := p.nodes(t)
	k := 2 * math.Pi / p.wavelength(t)
	var fa, fb flowing
	var ea, eb error
	switch {
	case x < 1e-9 || a == b:
		fa, ea = p.one(a, k, y)
	case x > 1-1e-9:
		fa, ea = p.one(b, k, y)
	case p.cores:
		done := make(chan struct{})
		ca, cb := p.ready(a, k), p.ready(b, k)
		if ca != nil || cb != nil {
			return flowing{}, cmp.Or(ca, cb)
		}
		go func() { fb, eb = b.settled(k, y); close(done) }()
		fa, ea = a.settled(k, y)
		<-done
	default:
		if fa, ea = p.one(a, k, y); ea == nil {
			fb, eb = p.one(b, k, y)
		}
	}
	if err := cmp.Or(ea, eb); err != nil {
		return flowing{}, err
	}
	_, ez, _ := a.back.rates()
	if fb.a != nil {
		fa = midway(fa, fb, x, ez)
	}
	p.hasten(&fa, t, ez)
	return fa, nil
}

// one is the closure of a node.
func (p *softPath) one(n *softNode, k float64, y []float64) (flowing, error) {
	if err := p.ready(n, k); err != nil {
		return flowing{}, err
	}
	return n.settled(k, y)
}

// settled is the closure of a node that has one; whatever fails in it, it has not settled.
func (n *softNode) settled(k float64, y []float64) (flowing, error) {
	f, err := n.soft.flowing(k, y)
	if err != nil && !errors.Is(err, errConverge) {
		err = fmt.Errorf("%w: %w", errConverge, err)
	}
	return f, err
}

// ready makes a node's closure and drops what another undulation left in it.
func (p *softPath) ready(n *softNode, k float64) error {
	f, err := n.closure(!p.course.fine)
	if err != nil {
		return err
	}
	b, err := f.band(k)
	if err == nil && !p.seen[b] {
		p.seen[b] = true
		b.forget()
	}
	return err
}

// midway interpolates the flow, without the column's own e_z.
func midway(a, b flowing, x, ez float64) flowing {
	n, _ := a.a.Dims()
	out := flowing{a: mat.NewDense(n, n, nil),
		exponent: a.exponent + x*(b.exponent-a.exponent), over: a.over + x*(b.over-a.over),
		strain: a.strain + x*(b.strain-a.strain), stress: a.stress + x*(b.stress-a.stress)}
	if math.IsInf(a.over, 1) {
		out.over = a.over
	}
	for i := range n {
		for j := range n {
			e := 0.0
			if i == j && a.a.At(i, i) != 0 {
				e = ez
			}
			out.a.Set(i, j, e+blend(a.a.At(i, j)-e, b.a.At(i, j)-e, x))
		}
	}
	return out
}

// hasten multiplies the flow, but not the column's own e_z, by what makes it the best
// estimate.
func (p *softPath) hasten(f *flowing, t, ez float64) {
	if p.boost == slow {
		return
	}
	c := strainedCorrections(f.exponent, 2*math.Pi/p.wavelength(t)*p.root(t), p.a0, f.over)
	faster := 1 / (c.Centre * map[boost]float64{best: c.Finite, early: c.FiniteLow, tardy: c.FiniteHigh}[p.boost])
	n, _ := f.a.Dims()
	for i := range n {
		for j := range n {
			v, e := f.a.At(i, j), 0.0
			if i == j && v != 0 {
				e = ez
			}
			f.a.Set(i, j, e+faster*(v-e))
		}
	}
	f.strain *= faster
}

// jump carries displacements into the next stretch; false where there is
// no root any more.
func (p *softPath) jump(r *softRun) bool {
	s := p.course.stretches
	from := s[p.at].nodes[0].lay
	p.at, p.from = p.at+1, 0
	to := s[p.at].nodes[0].lay
	if to.rootBase < 0 || !to.movable(to.rootBase) {
		return false
	}
	_, _, n := from.places()
	states := make([]float64, n)
	old, _ := from.displaced()
	for i, c := range old {
		if c >= 0 {
			states[c] = r.y[i]
		}
	}
	states = from.carry(&to, states)
	now, contact := to.displaced()
	r.y, r.base = make([]float64, len(now)), contact[to.rootBase]
	for i, c := range now {
		if c >= 0 {
			r.y[i] = states[c]
		}
	}
	return true
}
