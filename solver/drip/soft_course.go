package drip

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
)

// softNode is the column at one time, and the closure in it.
type softNode struct {
	*node
	back Background
	soft *Soft // nil until asked for
	// probed are entries of A at a few wavelengths: what the spacing of nodes is judged by.
	probed   []probe
	exponent float64 // the root's largest, up to 5
}

// softStretch is time without jumps: nodes in it, to be interpolated between. It ends where
// the next begins, the last where it is followed no further.
type softStretch struct {
	nodes  []*softNode
	closed bool
	end    float64 // s, where closed
}

const (
	// softSpacing is what the growth rate at the middle of three nodes may be off by,
	// relative, when it is interpolated between the outer two; between neighbours it is a
	// quarter of that at most, and a sixth on average.
	softSpacing = 3e-3
	// softIdle is the growth, in e-foldings over the whole time, below which a rate needs
	// no better accuracy.
	softIdle = 0.5
	// softBegin is the first distance of nodes after a jump, of the whole time: what begins
	// there goes like the root of time, which the middle of three nodes does not show.
	softBegin = 1.0 / 400
)

// softCourse is a column through time for undulations that soften their own rock: nodes
// that all wavelengths share, made as they are needed.
type softCourse struct {
	view
	set       Settings
	until     float64 // s
	spacing   float64
	fine      bool // laws are tabulated as for a column that stands still
	stretches []*softStretch
	h         float64 // next distance of nodes, s
}

func newSoftCourse(p Plan, t *tape, set Settings, until float64) (*softCourse, error) {
	c := &softCourse{view: newView(p, t), set: set, until: until, spacing: softSpacing}
	c.h = softBegin * (c.until - t.motion.Time())
	n, err := c.look()
	if err != nil {
		return nil, err
	}
	c.fit(n, nil, true)
	c.stretches = []*softStretch{{nodes: []*softNode{n}}}
	if t.motion.Time() >= c.until {
		c.close(c.until)
	}
	if n.lay.rootBase < 0 {
		return nil, ErrNoRoot
	}
	if !n.lay.movable(n.lay.rootBase) {
		return nil, errWall
	}
	return c, set.check(n.root)
}

func (c *softCourse) first() *softNode { return c.stretches[0].nodes[0] }

func (c *softCourse) last() *softNode {
	s := c.stretches[len(c.stretches)-1]
	return s.nodes[len(s.nodes)-1]
}

func (c *softCourse) close(end float64) {
	s := c.stretches[len(c.stretches)-1]
	s.closed, s.end = true, end
}

// look returns the column where the tape is now.
func (c *softCourse) look() (*softNode, error) {
	n, err := c.view.look()
	if err != nil {
		return nil, err
	}
	n.lay.surface = n.s.Column.Surface.Boundary == column.Free
	b := n.s.Column.Base.Boundary
	n.lay.base = b == column.HalfSpace || b == column.Inviscid
	return &softNode{node: n, back: Background{c.tape.motion.ExtensionRate(), c.plan.AlongStrike}}, nil
}

// movable says whether an interface can move.
func (l *layout) movable(i int) bool {
	contact, _, _ := l.places()
	return contact[i] >= 0
}

// closure returns the node's Soft, its laws tabulated coarsely or not.
func (n *softNode) closure(coarse bool) (*Soft, error) {
	if n.soft == nil {
		var err error
		if n.soft, err = newSoft(n.s, n.model, n.back, n.lay.parts); err != nil {
			return nil, err
		}
		n.soft.coarse = coarse
	}
	return n.soft, nil
}

// extend adds nodes: a pair of equal distances, or what the column is after a jump, or in
// parts laid out anew.
func (c *softCourse) extend(ctx context.Context) error {
	from := c.last()
	span := c.until - c.first().t
	tiny := 1e-7 * span
	next := c.tape.motion.Next()
	if next-from.t <= 2*tiny && next <= c.until {
		return c.jump(ctx, next)
	}
	room := math.Min(c.until, next-tiny) - from.t
	least := leastStep * span
	h := math.Max(c.h, least)
	for {
		last := 2*h > room*0.999
		if last {
			h = room / 2
		} else if 4*h > room {
			h = room / 4 // two pairs rather than one and a sliver
		}
		mid, end, err := c.pair(ctx, from, h)
		if err != nil {
			return err
		}
		small := h <= least*1.001
		if mid == nil { // the layers changed
			c.tape.back(from.mark)
			if small {
				return c.jump(ctx, from.t+2*h)
			}
			h /= 4
			continue
		}
		if c.drifted(from.node, end.node, softDrift) && !(small && c.fresh(from)) {
			c.tape.back(from.mark)
			if !c.fresh(from) {
				c.relay(from)
				return nil
			}
			h = math.Max(h/2, least)
			continue
		}
		c.fit(mid, from, false)
		c.fit(end, from, false)
		miss, err := c.miss(from, mid, end)
		if err != nil {
			return err
		}
		factor := math.Min(3, math.Max(0.25, 0.9*math.Sqrt(c.spacing/(miss+1e-300))))
		if miss > 1.5*c.spacing && !small {
			c.tape.back(from.mark)
			h *= factor
			continue
		}
		if factor *= h; !last || factor < h { // a short last step says nothing of the next
			c.h = factor
		}
		s := c.stretches[len(c.stretches)-1]
		s.nodes = append(s.nodes, mid, end)
		if end.t >= c.until*(1-1e-12) {
			c.close(c.until)
		}
		return nil
	}
}

// pair returns two nodes h apart; nil where layers come or go before the second.
func (c *softCourse) pair(ctx context.Context, from *softNode, h float64) (mid, end *softNode, err error) {
	for i, n := range []**softNode{&mid, &end} {
		if err := c.tape.advance(ctx, from.t+h*float64(i+1)); err != nil {
			return nil, nil, err
		}
		if *n, err = c.look(); err != nil {
			return nil, nil, err
		}
		if !(*n).lay.same(&from.lay) {
			return nil, nil, nil
		}
		c.know((*n).node)
	}
	return mid, end, nil
}

// jump drives the column to t, where another stretch begins.
func (c *softCourse) jump(ctx context.Context, t float64) error {
	if err := c.tape.advance(ctx, t); err != nil {
		return err
	}
	n, err := c.look()
	if err != nil {
		return err
	}
	c.h = math.Min(c.h, softBegin*(c.until-c.first().t))
	c.fit(n, c.last(), true)
	c.close(t)
	c.stretches = append(c.stretches, &softStretch{nodes: []*softNode{n}})
	if t >= c.until*(1-1e-12) || n.lay.rootBase < 0 {
		c.close(math.Max(t, c.until))
	}
	return nil
}

// blend interpolates at x from 0 to 1 between a and b: their logarithms where they are
// alike, as rates that follow a temperature are.
func blend(a, b, x float64) float64 {
	if r := b / a; r > 0.125 && r < 8 {
		return a * math.Pow(r, x)
	}
	return a + x*(b-a)
}

// around is the last node up to a time in s, or the first.
func (c *softCourse) around(t float64) *softNode {
	out := c.first()
	for _, s := range c.stretches {
		for _, n := range s.nodes {
			if n.t <= t {
				out = n
			}
		}
	}
	return out
}

// strain is ∫ e_k dt from the first node to a time in s.
func (c *softCourse) strain(t float64) float64 {
	n := c.around(t)
	out := n.strain - c.first().strain
	if t = math.Min(t, c.last().t); !c.plan.AlongStrike {
		out += n.back.ExtensionRate * (t - n.t)
	}
	return out
}

// at winds the tape back to time t and returns the column there.
func (c *softCourse) at(ctx context.Context, t float64) (*softNode, error) {
	c.tape.back(c.around(t).mark)
	if t > c.tape.motion.Time() {
		if err := c.tape.advance(ctx, t); err != nil {
			return nil, fmt.Errorf("at %.4g Myr: %w", t/1e6/year, err)
		}
	}
	return c.look()
}
