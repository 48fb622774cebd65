package heat

import "math"

// edge is the heat flow at the surface or at a base of given temperature, second order
// in space: T is the parabola that has the wall's temperature T_w and the means T₀ and T₁ of
// the first two cells. With distances from the wall, T = T_w + a z + b z²,
//
//	T₀ − T_w = a d₀/2 + b d₀²/3    T₁ − T_w = a (d₀ + d₁/2) + b (d₀² + d₀d₁ + d₁²/3)
//
// so that κ_w a leaves through the wall and κ (a + 2 b d₀) comes through the face between
// the two cells. Where the cells are of different rock, or too few, the flow through the wall is
// that of half a cell's resistance, with the bend that the heat made in it gives T.
type edge struct {
	out0, out1   float64 // W/m²/K: flow to the wall, out0 (T₀ − T_w) − out1 (T₁ − T_w) + outward
	from0, from1 float64 // flow from the second cell to the first, from0 (T₀ − T_w) + from1 (T₁ − T_w) + inward
	outward      float64 // W/m²
	inward       float64
}

func (e *edge) out(T0, T1, Tw float64) float64  { return e.out0*(T0-Tw) - e.out1*(T1-Tw) + e.outward }
func (e *edge) from(T0, T1, Tw float64) float64 { return e.from0*(T0-Tw) + e.from1*(T1-Tw) + e.inward }

// Cells beside each other may differ this much for the face between them to be of the
// parabola: beyond it a cell could cool its warmer neighbour.
const uneven = 2.0

// straight is an edge of half-resistances h0 and h1 and bends b0 and b1.
func straight(h0, h1, b0, b1 float64) edge {
	g := 1 / (h0 + h1)
	return edge{out0: 1 / h0, from0: -g, from1: g, outward: b0 / h0, inward: (b1 - b0) * g}
}

// curve makes an edge that of cells d0 and d1 thick, of conductivity k0 and k1, kw at the
// wall; where the wall's temperature is outside the conductivity's range it stays as it is.
func (e *edge) curve(d0, d1, k0, k1, kw float64) {
	if !(kw > 0) || math.IsInf(kw, 1) {
		return
	}
	a1 := d0 + d1/2
	b0, b1 := d0*d0/3, d0*d0+d0*d1+d1*d1/3
	det := d0 * (d0 + d1) * (d0 + d1) / 6
	e.out0, e.out1, e.outward = kw*b1/det, kw*b0/det, 0
	if d0 <= uneven*d1 && d1 <= uneven*d0 {
		k := (d1*k0 + d0*k1) / (d0 + d1)
		e.from0, e.from1, e.inward = k*(b1-2*d0*a1)/det, k*(2*d0*d0/3)/det, 0
	}
}

// edges fills those of a stage at the time t, from its half-resistances.
func (ev *Evolution) edges(s *stage, T []float64, t float64) {
	w, n := &ev.w, len(ev.cells)
	if n < 2 {
		w.top = edge{out0: 1 / w.half[0], outward: w.bend[0] / w.half[0]}
		w.foot = w.top
		return
	}
	between := func(i, j int, Tw, Pw float64) edge {
		a, b := ev.cells[i].layer, ev.cells[j].layer
		e := straight(w.half[i], w.half[j], w.bend[i], w.bend[j])
		if a == b && n >= 4 {
			k := &ev.strata[a].k
			k0, k1 := k.Value(T[i], s.P[i]), k.Value(T[j], s.P[j])
			e.curve(2*w.half[i]*k0, 2*w.half[j]*k1, k0, k1, k.Value(Tw, Pw))
		}
		return e
	}
	w.top = between(0, 1, ev.surfaceAt(t), 0)
	if !ev.base.HasHeatFlow {
		w.foot = between(n-1, n-2, ev.base.Temperature, s.P[n-1]+ev.gravity*s.M[n-1]/(2*s.area))
	}
}

// conducts enters the edges into the linear system, in place of what is there of the
// faces next to them.
func (ev *Evolution) conducts(t, ga float64) {
	w, n := &ev.w, len(ev.cells)
	enter := func(e *edge, i, j int, out, back *float64, Tw float64) {
		w.di[i] += ga * e.out0
		w.rhs[i] += ga * ((e.out0-e.out1)*Tw - e.outward)
		if n < 2 {
			return
		}
		g := ga / (w.half[i] + w.half[j])
		w.di[i] -= g + ga*e.from0
		*out += g - ga*(e.from1+e.out1)
		q := ga*(e.inward-(e.from0+e.from1)*Tw) - g*(w.bend[j]-w.bend[i])
		w.rhs[i] += q
		w.di[j] += ga*e.from1 - g
		*back += g + ga*e.from0
		w.rhs[j] -= q
	}
	enter(&w.top, 0, min(1, n-1), &w.up[0], &w.lo[min(1, n-1)], ev.surfaceAt(t))
	if ev.base.HasHeatFlow {
		w.rhs[n-1] += ga * ev.base.HeatFlow
		return
	}
	enter(&w.foot, n-1, max(n-2, 0), &w.lo[n-1], &w.up[max(n-2, 0)], ev.base.Temperature)
}

// through are the heat flows through the surface and the base at cells' temperatures T.
func (ev *Evolution) through(T []float64, t float64) (surface, base float64) {
	w, n := &ev.w, len(ev.cells)
	surface = w.top.out(T[0], T[min(1, n-1)], ev.surfaceAt(t))
	if ev.base.HasHeatFlow {
		return surface, ev.base.HeatFlow
	}
	return surface, -w.foot.out(T[n-1], T[max(n-2, 0)], ev.base.Temperature)
}

// SurfaceFlow returns the heat conducted out at the surface now, W/m². Through a layer that
// has just begun to settle it is that of the rock below: a few millimetres take seconds.
func (ev *Evolution) SurfaceFlow() float64 {
	if s := &ev.strata[0]; s.hi-s.lo == 1 && len(ev.cells) > 2 && ev.thickness(&ev.cells[0]) < 2*sliver {
		return ev.edgeNow(1, 2, ev.surfaceAt(ev.t), 0)
	}
	return ev.edgeNow(0, 1, ev.surfaceAt(ev.t), 0)
}

// baseFlow is the heat conducted in at the base now, W/m².
func (ev *Evolution) baseFlow() float64 {
	if ev.base.HasHeatFlow {
		return ev.base.HeatFlow
	}
	n := len(ev.cells)
	c := &ev.cells[n-1]
	return -ev.edgeNow(n-1, n-2, ev.base.Temperature, c.P+ev.gravity*c.m/2)
}

// edgeNow is the flow from cell i, beside j, to a wall.
func (ev *Evolution) edgeNow(i, j int, Tw, Pw float64) float64 {
	a := &ev.cells[i]
	e := edge{out0: 2 * ev.conductance(a), outward: a.H * a.m / 3}
	if len(ev.cells) < 4 || ev.cells[j].layer != a.layer {
		return e.out(a.T, 0, Tw)
	}
	b, k := &ev.cells[j], &ev.strata[a.layer].k
	e.curve(ev.thickness(a), ev.thickness(b), k.Value(a.T, a.P), k.Value(b.T, b.P), k.Value(Tw, Pw))
	return e.out(a.T, b.T, Tw)
}

// quarter is the difference of T over a quarter of cell i at its middle, of the parabola
// that has the means of the cell and of the two beside it, or of a wall's temperature
// and the cell next to it. Where there is no such parabola it is NaN.
func (ev *Evolution) quarter(i int, up, down *cell) float64 {
	c := &ev.cells[i]
	d := ev.thickness(c)
	wall := func(o *cell, Tw float64) float64 {
		var p edge
		p.curve(d, ev.thickness(o), 1, 1, 1)
		a := p.out(c.T, o.T, Tw)
		return d / 4 * (a + ((c.T-Tw)-a*d/2)*3/d)
	}
	switch {
	case up != nil && down != nil:
		a, b := ev.thickness(up), ev.thickness(down)
		ha, hb := (a+d)/2, (b+d)/2
		qa, qb := ha*ha+(a*a-d*d)/12, hb*hb+(b*b-d*d)/12
		return d / 4 * ((down.T-c.T)*qa - (up.T-c.T)*qb) / (hb*qa + ha*qb)
	case i == 0 && down != nil:
		return wall(down, ev.surfaceAt(ev.t))
	case i == len(ev.cells)-1 && up != nil && !ev.base.HasHeatFlow:
		return -wall(up, ev.base.Temperature)
	}
	return math.NaN()
}

// within is x where it has the sign of a and b and is no more than either, 0 where they
// differ in sign, and other where x is no number.
func within(x, a, b, other float64) float64 {
	switch {
	case math.IsNaN(x):
		return other
	case a*b <= 0 || x*a <= 0:
		return 0
	}
	return math.Copysign(min(math.Abs(x), math.Abs(a), math.Abs(b)), x)
}
