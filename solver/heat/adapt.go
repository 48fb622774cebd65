package heat

import "math"

// The mesh follows the temperature. Between a cell's top T_a, its middle and its bottom
// T_b the curvature |T_a − 2T + T_b| is four times the error of a straight line; where
// it is more than split × tolerance a cell is halved, where two neighbours have little
// of it they become one. Both keep mass, enthalpy, heat production and composition.
const (
	splitAt   = 2.0
	joinAt    = 0.25    // of what splits
	finest    = 1. / 64 // of the coarsest
	leastEach = 4
	beside    = 3.0 // how much larger than a neighbour a cell may be
)

// adapt splits and joins cells after a step, once over the mesh.
func (ev *Evolution) adapt() {
	if ev.fixedMesh {
		return
	}
	if ev.mark() {
		ev.rebuild()
	}
}

// refine splits cells until nothing is left to split: after a jump.
func (ev *Evolution) refine() error {
	if ev.fixedMesh {
		ev.smooth = false
		return ev.err
	}
	for range 12 {
		ev.two.size(len(ev.cells))
		ev.w.size(len(ev.cells))
		if err := ev.rates(); err != nil {
			return err
		}
		if !ev.mark() {
			break
		}
		ev.rebuild()
	}
	ev.fresh, ev.smooth = false, false
	return ev.err
}

const (
	keepCell = iota
	splitCell
	joinNext // with the cell below
)

// mark decides what becomes of each cell, with the resistances of the last system.
func (ev *Evolution) mark() bool {
	n := len(ev.cells)
	if cap(ev.marks) < n {
		ev.marks = make([]int8, n, 2*n)
		ev.curve = make([]float64, n, 2*n)
		ev.thick = make([]float64, n, 2*n)
	}
	ev.marks, ev.curve, ev.thick = ev.marks[:n], ev.curve[:n], ev.thick[:n]
	limit := splitAt * ev.tolerance * ev.coarse
	if over := float64(n) / float64(ev.points); over > 1.25 {
		ev.coarse *= 1.1
	} else if over < 1 && ev.coarse > 1 {
		ev.coarse = max(1, ev.coarse/1.1)
	}
	half := ev.w.half
	Ta := ev.surfaceAt(ev.t)
	for i := range n {
		c := &ev.cells[i]
		var Tb float64
		switch {
		case i+1 < n:
			Tb = (c.T*half[i+1] + ev.cells[i+1].T*half[i]) / (half[i] + half[i+1])
		case ev.base.HasHeatFlow:
			Tb = c.T + ev.base.HeatFlow*half[i]
		default:
			Tb = ev.base.Temperature
		}
		ev.marks[i], ev.curve[i], ev.thick[i] = keepCell, math.Abs(Ta-2*c.T+Tb), ev.thickness(c)
		Ta = Tb
	}
	return ev.choose(limit)
}

func (ev *Evolution) choose(limit float64) bool {
	any, n := false, len(ev.cells)
	d, curve := ev.thick, ev.curve
	dmin := ev.dmax * finest
	for j := range ev.strata {
		s := &ev.strata[j]
		count := s.hi - s.lo
		for i := s.lo; i < s.hi; i++ {
			least := inf
			if i > 0 {
				least = d[i-1]
			}
			if i+1 < n {
				least = min(least, d[i+1])
			}
			if curve[i] > limit && d[i] >= 2*dmin || d[i] > 1.5*ev.dmax ||
				d[i] > beside*least && d[i] >= 2*dmin && curve[i] > limit/16 {
				ev.marks[i] = splitCell
				any = true
				continue
			}
			if i+1 >= s.hi {
				continue
			}
			both := d[i] + d[i+1]
			tiny := min(d[i], d[i+1]) < dmin/2 && both < ev.dmax
			if i == 0 && ev.eroding > 0 && d[0] < d[1]/2 && s.hi-s.lo > 1 {
				tiny = true // before it is used up, while its flow is good
			}
			calm := count > leastEach && both <= ev.dmax && curve[i] < joinAt*limit && curve[i+1] < joinAt*limit
			if calm && i > 0 && both > beside*0.7*d[i-1] || calm && i+2 < n && both > beside*0.7*d[i+2] {
				calm = curve[i]+curve[i+1] < joinAt*limit/16
			}
			if tiny || calm {
				ev.marks[i] = joinNext
				ev.marks[i+1] = keepCell
				count--
				any = true
				i++
			}
		}
	}
	return any
}

// rebuild carries out the marks.
func (ev *Evolution) rebuild() {
	out := ev.spare[:0]
	for i := 0; i < len(ev.cells); i++ {
		switch ev.marks[i] {
		case splitCell:
			a, b := ev.halves(i)
			out = append(out, a, b)
		case joinNext:
			out = append(out, ev.joined(&ev.cells[i], &ev.cells[i+1]))
			i++
		default:
			out = append(out, ev.cells[i])
		}
	}
	ev.cells, ev.spare = out, ev.cells
	ev.index() // pressures are what they were
}

// joined is two cells in one.
func (ev *Evolution) joined(a, b *cell) cell {
	c := *a
	c.m = a.m + b.m
	q := b.m / c.m
	c.e += q * (b.e - a.e)
	c.H += q * (b.H - a.H)
	c.X += q * (b.X - a.X)
	c.x += q * (b.x - a.x)
	c.P = a.P + ev.gravity*b.m/2
	c.T = c.e / ev.strata[c.layer].c
	c.solid.T = 0
	ev.settle(&c)
	return c
}

// join makes cells i and i+1 one.
func (ev *Evolution) join(i int) {
	ev.cells[i] = ev.joined(&ev.cells[i], &ev.cells[i+1])
	ev.cells = append(ev.cells[:i+1], ev.cells[i+2:]...)
	ev.index()
}

// halves splits a cell into two of half its mass, along the slopes there.
func (ev *Evolution) halves(i int) (a, b cell) {
	c := &ev.cells[i]
	s := &ev.strata[c.layer]
	up, down := ev.neighbours(i)
	a, b = *c, *c
	a.m, b.m = c.m/2, c.m/2
	// A quarter of the cell from its middle; up and down are as far as their middles.
	quarter := func(u, v, w float64) float64 {
		var du, dw float64
		if up != nil {
			du = (v - u) * (c.m / 4) / ((c.m + up.m) / 2)
		}
		if down != nil {
			dw = (w - v) * (c.m / 4) / ((c.m + down.m) / 2)
		}
		if up == nil {
			du = dw
		}
		if down == nil {
			dw = du
		}
		return limited(du, dw)
	}
	pick := func(f func(*cell) float64) float64 {
		var u, w float64
		if up != nil {
			u = f(up)
		}
		if down != nil {
			w = f(down)
		}
		return quarter(u, f(c), w)
	}
	// What lies within bounds stays there, at an edge of the layer too.
	share := func(f func(*cell) float64) float64 {
		d, v := pick(f), f(c)
		return math.Copysign(min(math.Abs(d), math.Abs(v), math.Abs(1-v)), d)
	}
	Ta, Tb := ev.faces(i)
	ea, _ := s.enthalpy(Ta, c.P)
	eb, _ := s.enthalpy(Tb, c.P)
	de := limited((c.e-ea)/2, (eb-c.e)/2)
	switch {
	case s.latent != 0 && up != nil && down != nil: // it bends at the solidus, faces would not know
		de = pick(func(c *cell) float64 { return c.e })
	case s.latent == 0:
		de = within(s.c*ev.quarter(i, up, down), 2*(c.e-ea), 2*(eb-c.e), de)
	}
	a.e, b.e = c.e-de, c.e+de
	d := pick(func(c *cell) float64 { return c.H })
	d = math.Copysign(min(math.Abs(d), math.Abs(c.H)), d)
	a.H, b.H = c.H-d, c.H+d
	d = share(func(c *cell) float64 { return c.x })
	a.x, b.x = c.x-d, c.x+d
	if s.react != nil {
		d = share(func(c *cell) float64 { return c.X })
		a.X, b.X = c.X-d, c.X+d
	}
	a.T, b.T = a.e/s.c, b.e/s.c
	a.P, b.P = c.P-ev.gravity*c.m/4, c.P+ev.gravity*c.m/4
	a.solid.T, b.solid.T = 0, 0
	ev.settle(&a)
	ev.settle(&b)
	return a, b
}

// faces are the temperatures at a cell's top and bottom.
func (ev *Evolution) faces(i int) (top, bottom float64) {
	half, c, n := ev.w.half, &ev.cells[i], len(ev.cells)
	top, bottom = ev.surfaceAt(ev.t), ev.base.Temperature
	if i > 0 {
		b := &ev.cells[i-1]
		top = (c.T*half[i-1] + b.T*half[i]) / (half[i] + half[i-1])
	}
	if i+1 < n {
		b := &ev.cells[i+1]
		bottom = (c.T*half[i+1] + b.T*half[i]) / (half[i] + half[i+1])
	} else if ev.base.HasHeatFlow {
		bottom = c.T + ev.base.HeatFlow*half[i]
	}
	return top, bottom
}

// neighbours are the cells beside one in its layer, nil where there is none.
func (ev *Evolution) neighbours(i int) (up, down *cell) {
	s := &ev.strata[ev.cells[i].layer]
	if i > s.lo {
		up = &ev.cells[i-1]
	}
	if i+1 < s.hi {
		down = &ev.cells[i+1]
	}
	return up, down
}

// limited is the mean of two slopes where they agree in sign, at most twice the smaller.
func limited(a, b float64) float64 {
	if a*b <= 0 {
		return 0
	}
	m := min(2*math.Abs(a), 2*math.Abs(b), math.Abs(a+b)/2)
	return math.Copysign(m, a)
}
