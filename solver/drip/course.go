package drip

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Plan is a column through time and how it is strained.
type Plan struct {
	Begin       func() (Motion, error) // the column at time 0, the same every time
	AlongStrike bool                   // the wavevector runs along strike
	Reference   float64                // 1/s, at which creep is evaluated where nothing strains the column
	thermal     string                 // buoyancy of Strained; "": none
}

const (
	// stepTolerance is what the second-order solution of a span may be off by in ln
	// amplitude. The fourth-order one that is used is off by less than 1e-4: by 5e-5 of brute force, and by 7e-6 where the
	// tests halve all steps.
	stepTolerance = 1e-3
	// leastStep is the shortest step, of the span: where something in the column ends
	// between two nodes, it is passed with one of these.
	leastStep = 1e-4
	// courseTolerance is that of the growth rates at one time.
	courseTolerance = 1e-6
)

// course is a column through time, kept as states at nodes. It is extended together
// with the undulations that follow it, whose error sets its steps, and can then be
// followed again by others.
type course struct {
	view
	span   float64   // s, what the tolerance is for
	ends   []float64 // of the pairs, where not chosen by error: for tests
	finer  int       // parts for each that is needed, where not 1: for tests
	first  *node
	legs   []leg
	relaid relaid
	h      float64 // next step, s
}

// view makes nodes of a column that is driven through time.
type view struct {
	plan   Plan
	tape   *tape
	graded map[string]bool // layers whose composition grades, or has
}

func newView(p Plan, t *tape) view { return view{p, t, map[string]bool{}} }

// leg is a pair of equal steps or, where mid is nil, a jump.
type leg struct{ from, mid, end *node }

// relaid is a node with its parts laid out anew.
type relaid struct{ of, node *node }

// last is the node the course has come to.
func (c *course) last() *node {
	if n := len(c.legs); n > 0 {
		return c.legs[n-1].end
	}
	return c.first
}

// node is the column at one time.
type node struct {
	t      float64
	mark   int // of the tape
	s      *state.State
	model  *growth.Column
	form   *growth.Template
	lay    layout                    // without parts
	root   float64                   // thickness, m
	strain float64                   // ∫ e_k dt since time 0, e_k the strain rate along the wavevector
	spread float64                   // the same of the extension
	rocks  func(layer int) []float64 // marksOf
	marks  [][]float64               // those known, by layer
}

// newCourse begins a course where the tape is.
func newCourse(p Plan, t *tape, until float64) (*course, error) {
	c := &course{view: newView(p, t), span: until - t.motion.Time()}
	c.h = c.span / 200
	n, err := c.look()
	if err != nil {
		return nil, err
	}
	c.first = n
	return c, c.refine(n, nil, true)
}

// look returns the column where the tape is now.
func (c *view) look() (*node, error) {
	m := c.tape.motion
	col, profile, err := m.Snapshot()
	if err != nil {
		return nil, err
	}
	e := m.ExtensionRate()
	col.Sense = float64(cmp.Compare(e, 0))
	rate := math.Abs(e)
	if rate == 0 {
		rate = c.plan.Reference
	}
	s, err := state.From(col, profile, rate)
	if err != nil {
		return nil, fmt.Errorf("at %.4g Myr: %w", m.Time()/1e6/year, err)
	}
	n := &node{t: m.Time(), mark: c.tape.mark(), s: s, spread: c.tape.strain, lay: layout{rootBase: -1, parts: make([][]float64, len(col.Layers))}}
	if !c.plan.AlongStrike {
		n.strain = c.tape.strain
	}
	for i := range col.Layers {
		n.lay.names = append(n.lay.names, col.Layers[i].Name)
	}
	if _, last, ok := col.RootSpan(); ok {
		n.lay.rootBase, n.root = last+1, col.RootThickness()
	}
	n.model = Strained(s, Background{ExtensionRate: e, AlongStrike: c.plan.AlongStrike}, cmp.Or(c.plan.thermal, "none"))
	if d := n.model.Diffusion; d != nil { // until it is seen how it changes
		d.BaseGradientRate = -n.model.VerticalStrain * d.BaseGradient
	}
	n.lay.surface = n.model.Top == growth.Free
	n.lay.base = n.model.Base == growth.HalfSpace || n.model.Base == growth.Inviscid
	n.marks = make([][]float64, len(col.Layers))
	n.rocks = func(i int) []float64 { return marksOf(s, i, profile, math.Exp(n.spread)) }
	return n, nil
}

const year = 365.25 * 86400 // s

// refine gives a node its growth solver. Layers whose composition grades somewhere carry
// a field from then on, also where it does not; its parts are in the rock of the node
// before, where there is one, or anew.
func (c *course) refine(n, before *node, anew bool) error {
	c.grade(n)
	c.lay(n, before, anew)
	var err error
	if n.form, err = growth.NewTemplate(n.model, courseTolerance); err != nil {
		return fmt.Errorf("at %.4g Myr: %w", n.t/1e6/year, err)
	}
	n.warm()
	return nil
}

// grade notes which layers of a node grade.
func (c *view) grade(n *node) {
	for i, name := range n.lay.names {
		if n.model.Layers[i].Gradient != nil {
			c.graded[name] = true
		}
	}
}

// know grades a node and marks its rock there.
func (c *view) know(n *node) {
	c.grade(n)
	for i, name := range n.lay.names {
		if c.graded[name] {
			n.marks[i] = n.rocks(i)
		}
	}
}

// errChanged says that the layers changed between two nodes that were to be one pair.
var errChanged = errors.New("drip: the layers changed")

// pair drives the column over two steps h.
func (c *course) pair(ctx context.Context, h float64) (leg, error) {
	l := leg{from: c.last()}
	if c.relaid.of == l.from {
		l.from = c.relaid.node
	}
	for i, n := range []**node{&l.mid, &l.end} {
		if err := c.tape.advance(ctx, l.from.t+h*float64(i+1)); err != nil {
			return l, err
		}
		var err error
		if *n, err = c.look(); err != nil {
			return l, err
		}
		if !(*n).lay.same(&l.from.lay) {
			return l, errChanged
		}
		c.know(*n)
	}
	if c.drifted(l.from, l.end, drift) { // the leg before keeps its own
		again := *l.from
		model := *again.model
		model.Layers, again.marks = slices.Clone(model.Layers), slices.Clone(again.marks)
		again.model = &model
		l.from = &again
		if err := c.refine(l.from, l.from, true); err != nil {
			return l, err
		}
		c.relaid = relaid{of: c.last(), node: l.from}
	}
	gradients(l)
	for _, n := range []*node{l.mid, l.end} {
		if err := c.refine(n, l.from, false); err != nil {
			return l, err
		}
	}
	return l, nil
}

// jumpTo drives the column to t and appends what it is there, beyond a jump.
func (c *course) jumpTo(ctx context.Context, t float64) error {
	if err := c.tape.advance(ctx, t); err != nil {
		return err
	}
	n, err := c.look()
	if err != nil {
		return err
	}
	if err := c.refine(n, c.last(), true); err != nil {
		return err
	}
	c.legs = append(c.legs, leg{from: c.last(), end: n})
	return nil
}

// extend adds one leg, with the followers that go along, up to until at most.
func (c *course) extend(ctx context.Context, g *group, until float64) error {
	from := c.last()
	tiny := 1e-7 * c.span
	next := c.tape.motion.Next()
	if next-from.t <= 2*tiny && next <= until {
		if err := c.jumpTo(ctx, next); err != nil {
			return err
		}
		return g.jump(c.legs[len(c.legs)-1])
	}
	room := math.Min(until, next-tiny) - from.t
	h := math.Max(c.h, leastStep*c.span)
	for len(c.ends) > 0 && c.ends[0] < from.t+leastStep*c.span {
		c.ends = c.ends[1:]
	}
	forced := len(c.ends) > 0
	if forced {
		h = (c.ends[0] - from.t) / 2
	}
	for {
		last := 2*h > room*0.999
		if last {
			h = room / 2
		} else if 4*h > room && !forced {
			h = room / 4 // two pairs rather than one and a sliver
		}
		l, err := c.pair(ctx, h)
		least := h <= leastStep*c.span*1.001
		if err == errChanged {
			c.tape.back(from.mark)
			if !least {
				h /= 4
				continue
			}
			if err := c.jumpTo(ctx, from.t+2*h); err != nil {
				return err
			}
			return g.jump(c.legs[len(c.legs)-1])
		}
		if err != nil {
			return err
		}
		off, err := g.try(ctx, l)
		if err != nil {
			return err
		}
		allowed := stepTolerance*2*h/c.span + stepTolerance/50
		factor := math.Min(2.5, math.Max(0.25, 0.8*math.Cbrt(allowed/(off+1e-300))))
		if off > allowed*1.5 && !least && !forced {
			c.tape.back(from.mark)
			h *= factor
			continue
		}
		c.h = math.Max(h*factor, leastStep*c.span)
		if last { // a short last step says nothing of the next
			c.h = math.Max(c.h, h)
		}
		c.legs = append(c.legs, l)
		g.accept(l)
		return nil
	}
}
