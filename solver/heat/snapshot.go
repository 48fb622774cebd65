package heat

import (
	"fmt"
	"math"

	"keelfall/column"
)

// Snapshot returns the column now and its temperature and pressure, as package state
// uses them; they share nothing with the evolution that it changes.
//
// Layers have their present thickness; rock of the base that came in is a layer called
// "asthenosphere" under a half-space, and left out under an inviscid base, where it is
// fluid (the base's temperature is then that at the foot of the rock). A density that
// depends on the place in the layer or on the reacted share is a column.Varying where
// those are no longer what they were. Heat production is that of the layer now, fitted
// through its first and last parcels; a given geotherm is the present one, by points.
//
// T is a monotone cubic through the cells' middles and the layers' edges, with the slope
// that the heat flow asks for at the edges; P is a cubic with the slopes ρg. Pressures at
// cells' middles and edges are exact, of the mass above.
func (ev *Evolution) Snapshot() (*column.Column, *Profile, error) {
	c := *ev.column
	c.Base = ev.base
	c.Surface.Temperature = ev.surfaceAt(ev.t)
	c.Layers, c.Geotherm = nil, nil
	p := &Profile{HasTemperature: true}
	var top, P float64
	for j := range ev.strata {
		s := &ev.strata[j]
		if s.below && j == len(ev.strata)-1 && ev.base.Boundary == column.Inviscid {
			Ta, _ := ev.facesOf(s.lo)
			c.Base.HasTemperature, c.Base.HasHeatFlow, c.Base.Temperature = true, false, Ta
			continue
		}
		l := ev.curves(j, top, P)
		c.Layers = append(c.Layers, ev.layer(j, l.Bottom-l.Top))
		last := l.Nodes[len(l.Nodes)-1]
		top, P = last.Depth, last.P
		p.Layers = append(p.Layers, l)
		for i, n := range l.Nodes {
			if i > 0 || j == 0 {
				c.Geotherm = append(c.Geotherm, column.Point{Depth: n.Depth, Temperature: n.T})
			}
		}
	}
	if len(p.Layers) == 0 {
		return nil, nil, fmt.Errorf("heat: at %s nothing is left of the column but rock of the base, which is fluid", inMyr(ev.t))
	}
	p.SurfaceFlow = p.Layers[0].Nodes[0].Flow
	last := p.Layers[len(p.Layers)-1].Nodes
	p.BaseFlow = last[len(last)-1].Flow
	if err := c.Validate(); err != nil {
		return nil, nil, fmt.Errorf("heat: at %s: %w", inMyr(ev.t), err)
	}
	return &c, p, ev.err
}

// curves is the profile of one stratum.
func (ev *Evolution) curves(j int, top, P float64) Layer {
	s := &ev.strata[j]
	n := s.hi - s.lo
	l := Layer{Top: top, Nodes: make([]Node, n+2), Worn: s.worn}
	slope := make([]float64, n+2)
	gradient := make([]float64, n+2)
	z := top
	for i := s.lo; i < s.hi; i++ {
		c := &ev.cells[i]
		d := ev.thickness(c)
		l.Nodes[i-s.lo+1] = Node{Depth: z + d/2, T: c.T, P: P + ev.gravity*c.m/2}
		gradient[i-s.lo+1] = ev.gravity * ev.rho(c)
		if i == s.lo {
			T, _ := ev.facesOf(i)
			l.Nodes[0] = Node{Depth: z, T: T, P: P}
			gradient[0] = gradient[1]
		}
		z += d
		P += ev.gravity * c.m
	}
	_, T := ev.facesOf(s.hi - 1)
	l.Nodes[n+1] = Node{Depth: z, T: T, P: P}
	gradient[n+1] = gradient[n]
	l.Bottom = z
	monotone(l.Nodes, slope)
	x := l.Nodes
	// The flow through a face is that of the half cell beside it.
	for _, e := range [][2]int{{0, 1}, {n + 1, n}} {
		at, c := x[e[0]], x[e[1]]
		slope[e[0]] *= s.k.Value(c.T, c.P) / s.k.Value(at.T, at.P)
	}
	if j == 0 {
		slope[0] = ev.SurfaceFlow() / s.k.Value(x[0].T, x[0].P)
	}
	if j == len(ev.strata)-1 {
		slope[n+1] = ev.baseFlow() / s.k.Value(x[n+1].T, x[n+1].P)
	}
	for i := range x {
		x[i].Flow = s.k.Value(x[i].T, x[i].P) * slope[i]
		if i > 0 {
			h := x[i].Depth - x[i-1].Depth
			t, q := cubic(x[i-1].T, h*slope[i-1], x[i].T, h*slope[i]), cubic(x[i-1].P, h*gradient[i-1], x[i].P, h*gradient[i])
			l.spans = append(l.spans, span{z: x[i-1].Depth, h: h, t: [6]float64{t[0], t[1], t[2], t[3]}, p: q})
		}
	}
	return l
}

// monotone fills the slopes of T at nodes: the derivative of the parabola through three
// of them, limited so that the cubic between two nodes does not leave their values
// (Fritsch & Carlson 1980, SIAM J. Numer. Anal. 17); at the ends the straight one.
func monotone(x []Node, slope []float64) {
	n := len(x)
	secant := func(i int) float64 { return (x[i+1].T - x[i].T) / (x[i+1].Depth - x[i].Depth) }
	for i := 1; i+1 < n; i++ {
		h0, h1 := x[i].Depth-x[i-1].Depth, x[i+1].Depth-x[i].Depth
		s0, s1 := secant(i-1), secant(i)
		slope[i] = (h1*s0 + h0*s1) / (h0 + h1)
		if s0*s1 > 0 {
			slope[i] = math.Copysign(min(abs(slope[i]), 3*abs(s0), 3*abs(s1)), s0)
		} else {
			slope[i] = 0
		}
	}
	if n < 3 {
		for i := range slope {
			slope[i] = secant(0)
		}
		return
	}
	slope[0], slope[n-1] = secant(0), secant(n-2)
}

// layer is a stratum as a layer of the present thickness.
func (ev *Evolution) layer(j int, thickness float64) column.Layer {
	s := &ev.strata[j]
	l := column.Layer{Name: s.name, Thickness: thickness, Root: s.root, Rock: s.rock}
	l.Density = ev.varying(j, thickness)
	first, last := &ev.cells[s.lo], &ev.cells[s.hi-1]
	a, b := first.H*ev.rho(first), last.H*ev.rho(last)
	h := column.HeatProduction{Top: a}
	if s.hi-s.lo > 1 && s.rock.HeatProduction.DecayLength > 0 && a > b && b > 0 {
		da, db := ev.thickness(first), ev.thickness(last)
		h.DecayLength = (thickness - (da+db)/2) / math.Log(a/b)
		h.Top = a * math.Exp(da/2/h.DecayLength)
	} else if s.hi-s.lo > 1 { // the mean
		var made float64
		for i := s.lo; i < s.hi; i++ {
			made += ev.cells[i].H * ev.cells[i].m
		}
		h.Top = made / thickness
	}
	l.HeatProduction = h
	return l
}
