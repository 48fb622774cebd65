package rheology

import "math"

// tree is a rock at fixed temperature and pressure. A group adds rates at one stress; a
// mix averages stresses at one strain rate. In logarithms, with x = ln τ and y = ln ε,
// every part of it is a rising curve x(y) with a slope 1/n that is bounded by those of
// its laws, so a safeguarded Newton iteration inverts any of them.
//
// A result comes with two exponents: n along the curve, and held, at grain sizes that
// are held. They differ where a piezometer sets the grain size.
type tree struct {
	ts      []term
	nodes   []node
	follows bool
}

// point is a point of a curve; NaN where an iteration did not converge.
type point struct{ x, y, n, held float64 }

var nowhere = point{math.NaN(), math.NaN(), math.NaN(), math.NaN()}

// groupAt returns the point of group i at the strain rate exp(y).
func (t *tree) groupAt(i int, y float64) point {
	nd := &t.nodes[i]
	if nd.end > i+1 && t.next(i+1) == nd.end { // one mix
		if nd.a < nd.b {
			return t.oneMix(i, y)
		}
		p := t.mixAt(i+1, y-t.nodes[i+1].lnRate)
		p.y = y
		return p
	}
	// The stress is below that of each part alone, and near the least of them.
	p := point{x: math.Inf(1), y: y}
	if nd.a < nd.b {
		x, n, _, err := lnStress(t.ts[nd.a:nd.b], y)
		if err != nil {
			return nowhere
		}
		if p = (point{x, y, n, n}); nd.end == i+1 {
			if t.follows {
				p.held = heldMean(t.ts[nd.a:nd.b], x)
			}
			return p
		}
	}
	for j := i + 1; j < nd.end; j = t.next(j) {
		p.x = min(p.x, t.mixAt(j, y-t.nodes[j].lnRate).x)
	}
	var s search
	x := p.x
	for s.begin(); s.more(); x += s.dx {
		p = t.groupUnder(i, x)
		if s.try(x, p.y-y, p.n) {
			return point{x + s.dx, y, p.n, p.held}
		}
	}
	return nowhere
}

// oneMix is groupAt for mechanisms and one mix, which is the usual mixture under an upper
// limit: the unknown is the mix's own strain rate exp(z), so that nothing is inverted on
// the way.
func (t *tree) oneMix(i int, y float64) point {
	ts, lnRate := t.ts[t.nodes[i].a:t.nodes[i].b], t.nodes[i+1].lnRate
	var s search
	z := y - lnRate
	for s.begin(); s.more(); z += s.dx {
		q := t.mixAt(i+1, z)
		p := t.groupOf(ts, q.x)
		top := max(p.y, z+lnRate)
		a, b := math.Exp(p.y-top), math.Exp(z+lnRate-top)
		if s.try(z, top+math.Log(a+b)-y, (a*p.n/q.n+b)/(a+b)) {
			return point{q.x + s.dx/q.n, y, (a*p.n + b*q.n) / (a + b), (a*p.held + b*q.held) / (a + b)}
		}
	}
	return nowhere
}

// groupOf returns the point of mechanisms at the stress exp(x).
func (t *tree) groupOf(ts []term, x float64) point {
	y, n := lnSum(ts, x)
	p := point{x, y, n, n}
	if t.follows {
		p.held = heldMean(ts, x)
	}
	return p
}

// groupUnder returns the point of group i at the stress exp(x).
func (t *tree) groupUnder(i int, x float64) point {
	nd := &t.nodes[i]
	p := point{x: x, y: math.Inf(-1)}
	if nd.a < nd.b {
		p = t.groupOf(t.ts[nd.a:nd.b], x)
	}
	for j := i + 1; j < nd.end; j = t.next(j) {
		q := t.mixUnder(j, x)
		q.y += t.nodes[j].lnRate
		top := max(p.y, q.y)
		a, b := math.Exp(p.y-top), math.Exp(q.y-top)
		p = point{x, top + math.Log(a+b), (a*p.n + b*q.n) / (a + b), (a*p.held + b*q.held) / (a + b)}
	}
	return p
}

// mixAt returns the point of mix i at the strain rate exp(y).
func (t *tree) mixAt(i int, y float64) point {
	nd := &t.nodes[i]
	var x, r, h float64
	first := true
	for j := i + 1; j < nd.end; j = t.next(j) {
		g := t.groupAt(j, y)
		f := t.nodes[j].share
		switch {
		case nd.rule == Geometric:
			x, r, h = x+f*g.x, r+f/g.n, h+f/g.held
		case first:
			x, r, h = g.x+math.Log(f), 1/g.n, 1/g.held
		default:
			gx := g.x + math.Log(f)
			top := max(x, gx)
			a, b := math.Exp(x-top), math.Exp(gx-top)
			x, r, h = top+math.Log(a+b), (a*r+b/g.n)/(a+b), (a*h+b/g.held)/(a+b)
		}
		first = false
	}
	return point{x, y, 1 / r, 1 / h}
}

// mixUnder returns the point of mix i at the stress exp(x).
func (t *tree) mixUnder(i int, x float64) point {
	var s search
	y := t.groupUnder(i+1, x).y
	for s.begin(); s.more(); y += s.dx {
		p := t.mixAt(i, y)
		if s.try(y, p.x-x, 1/p.n) {
			return point{x, y + s.dx, p.n, p.held}
		}
	}
	return nowhere
}

// next is the node behind node i and all below it.
func (t *tree) next(i int) int { return t.nodes[i].end }

// heldMean is the mean of the held exponents, weighted by the rates at exp(x).
func heldMean(ts []term, x float64) float64 {
	top := math.Inf(-1)
	for i := range ts {
		ln, _, _, _ := ts[i].rate(x)
		top = max(top, ln)
	}
	var s, m float64
	for i := range ts {
		ln, slope, _, _ := ts[i].rate(x)
		w := math.Exp(ln - top)
		s += w
		m += w * (ts[i].held + slope - ts[i].n)
	}
	return m / s
}

// search is Newton's method for a rising function of one variable; it bisects where a
// step would leave what is known to hold the root, or is more than half the last one
// there: about a sharp bend, steps from either side may land on the other for ever.
type search struct {
	low, high, dx, before float64
	steps                 int
}

func (s *search) begin() { *s = search{low: math.Inf(-1), high: math.Inf(1), before: math.Inf(1)} }

func (s *search) more() bool { s.steps++; return s.steps <= newtonSteps }

// try takes the function's value and slope at x and sets dx. It says whether x + dx is
// the root: a step of 1e-8 leaves an error of its square times a curvature of order ten.
func (s *search) try(x, f, slope float64) bool {
	if f > 0 {
		s.high = min(s.high, x)
	} else {
		s.low = max(s.low, x)
	}
	s.dx = -f / slope
	if math.Abs(s.dx) < 1e-8 {
		return true
	}
	if math.Abs(f) < 1e-15 || s.high-s.low < 1e-14*max(1, math.Abs(x)) {
		s.dx = 0
		return true
	}
	both := s.high-s.low < math.Inf(1)
	if to := x + s.dx; !(to > s.low && to < s.high) || both && math.Abs(s.dx) > s.before/2 {
		s.dx = (s.low+s.high)/2 - x // one of the bounds is x itself, the other was met before
	}
	s.before = math.Abs(s.dx)
	return false
}
