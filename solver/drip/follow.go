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
	rate  float64    // of growth in the last pair, 1/s
	parts map[string]int
	trace *Amplitude // of the base, where asked for

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
		f := &follower{first: w, parts: map[string]int{}}
		for i := range f.times {
			f.times[i] = math.Inf(1)
		}
		f.lay = n.lay
		f.lay.parts = f.partsAt(n, w)
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

// partsAt returns the parts of a node's layers for a wavelength; what a layer once has
// it keeps.
func (f *follower) partsAt(n *node, wavelength float64) []int {
	need := n.form.Parts(wavelength)
	for i, p := range need {
		name := n.lay.names[i]
		if had, ok := f.parts[name]; ok && p > 0 {
			need[i] = had
		} else if p > 0 {
			f.parts[name] = p
		}
	}
	return need
}

// enter fits the followers to a node: its layers, its parts, its A.
func (g *group) enter(n *node) error {
	return g.each(func(list []*follower) error {
		form := n.form.Twin()
		defer form.Release()
		for _, f := range list {
			w := g.wavelength(f, n)
			to := n.lay
			to.parts = f.partsAt(n, w)
			f.y = f.lay.carry(&to, f.y)
			f.lay = to
			if err := matrix(&f.a, form, w, to.parts); err != nil {
				return err
			}
		}
		return nil
	})
}

func matrix(dst *[]float64, form *growth.Template, wavelength float64, parts []int) error {
	a, _, err := form.Matrix(wavelength, parts)
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

func (f *follower) done() bool { return !math.IsInf(f.times[2], 1) }
