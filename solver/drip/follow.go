package drip

import (
	"errors"
	"math"
	"runtime"
	"sync"

	"keelfall/solver/growth"
)

// follower is one undulation followed through a course: the displacement y e^log of
// every state for a unit undulation of the root's base at the start.
type follower struct {
	first float64 // wavelength at the course's start, m
	lay   layout
	y     []float64
	log   float64
	a     []float64  // A at the last node
	times [3]float64 // of the drip, for the amplitude × 3, as it is, and ÷ 3; +Inf so far
	most  float64    // bound on the growth rates there are, roughly, 1/s
	due   int        // pairs until it is looked at again
	parts map[string]int
	heats map[string]int // elements of T' of each layer
	finer int            // parts for each that is needed; 2 in tests
	size  float64        // amplitude at the start, m; 0: there is none, and it is not followed
	trace *Trace         // of the base, where asked for
	kept  []displaced    // displacements at the nodes, where asked for
	keep  bool
	every float64 // s: points of the trace are no further apart

	a1, a2     []float64
	y1, y2, yd []float64
	l1, l2, ld float64
	fix        float64 // what extrapolation adds to ln |base| over a pair
}

// group is followers that go along, by increasing wavelength.
type group struct {
	set     Settings
	workers int
	list    []*follower
	stopAt  int     // 0 to 2: the group is done when one has dripped from that amplitude; −1: when all have from all
	limit   float64 // m, for stopAt: longer wavelengths do not count
	strain0 float64
	strain  float64 // where it is now
}

// newGroup starts undulations of the root's base at the course's first node.
func newGroup(c *course, set Settings, wavelengths []float64, workers int) (*group, error) {
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	n := c.first
	g := &group{set: set, workers: workers, stopAt: -1, limit: math.Inf(1), strain0: n.strain, strain: n.strain}
	for _, w := range wavelengths {
		f := &follower{first: w, parts: map[string]int{}, heats: map[string]int{}, finer: max(1, c.finer), size: set.Start(w, set.Criterion*n.root)}
		for i := range f.times {
			f.times[i] = math.Inf(1)
		}
		f.lay = n.lay
		f.lay.parts = f.partsAt(n, w, n.lay.cover)
		f.heat(n, w, &f.lay)
		contact, _, states := f.lay.places()
		f.y = make([]float64, states)
		b := n.lay.rootBase
		if b < 0 || contact[b] < 0 {
			return nil, errors.New("drip: the root's base cannot move: it lies on a wall")
		}
		f.y[contact[b]] = 1
		g.list = append(g.list, f)
	}
	return g, g.enter(n)
}

// wavelength is that of a follower at a node, m.
func (g *group) wavelength(f *follower, n *node) float64 {
	return f.first * math.Exp(n.strain-g.strain0)
}

// partsAt returns the parts of a node's layers for a wavelength, in the rock that cover
// says. As many as a layer once has it keeps, until it needs more than the margin that
// Parts gives it.
func (f *follower) partsAt(n *node, wavelength float64, cover [][]float64) [][]float64 {
	out := make([][]float64, len(cover))
	for i, p := range n.form.Parts(wavelength) {
		if p == 0 {
			continue
		}
		name := n.lay.names[i]
		if had := f.parts[name]; 2*had < p*f.finer {
			f.parts[name] = p * f.finer
		}
		out[i] = cut(cover[i], f.parts[name], f.finer)
	}
	return out
}

// enter fits the followers to a node: its layers, its parts, its A.
func (g *group) enter(n *node) error {
	return g.each(func(list []*follower) error {
		form := n.form.Twin()
		defer form.Release()
		for _, f := range list {
			w := g.wavelength(f, n)
			to := n.lay
			to.parts = f.partsAt(n, w, n.lay.cover)
			f.heat(n, w, &to)
			f.y = f.lay.carry(&to, f.y)
			f.lay = to
			if err := matrix(&f.a, form, n, w, &f.lay); err != nil {
				return err
			}
			f.bound()
		}
		return nil
	})
}

// matrix fills A of a layout's states at a node, of which form is a twin.
func matrix(dst *[]float64, form *growth.Template, n *node, wavelength float64, l *layout) error {
	if err := l.place(form, n, wavelength); err != nil {
		return err
	}
	a, _, err := form.Matrix(wavelength, l.parts)
	*dst = append((*dst)[:0], a...)
	return err
}

// each calls do for the followers that are not done, in stretches, one a worker: no
// result depends on how many there are.
func (g *group) each(do func([]*follower) error) error {
	live := make([]*follower, 0, len(g.list))
	for _, f := range g.list {
		if !f.done() {
			live = append(live, f)
		}
	}
	workers := max(1, min(g.workers, len(live)))
	if workers == 1 {
		return do(live)
	}
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() { errs[w] = do(live[len(live)*w/workers : len(live)*(w+1)/workers]) })
	}
	wg.Wait()
	return errors.Join(errs...)
}

// done says whether there is nothing more to follow.
func (f *follower) done() bool { return f.size == 0 || !math.IsInf(f.times[2], 1) }
