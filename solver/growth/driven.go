package growth

import (
	"errors"
	"fmt"
	"math"
)

// Driven is the flow that given displacements of the interfaces drive in a column whose
// viscosities are set node by node, as rock needs that is softened by that flow itself.
// Set EtaS, EtaN (and Above, Below where the column is strained), then Sweep, then
// Flow. A half-space is followed 14/k down, in nodes of layer len(Layers). Not for
// several goroutines at once.
type Driven struct {
	Depth      []float64 // of each node, m, from the top down
	Layer      []int     // of each node
	Weight     []float64 // of each node in an integral over depth, m
	EtaS, EtaN []float64 // of each node, Pa s, > 0
	// Above and Below are η_S on the two sides of each interface, for [S] = −4kξd[η_S];
	// 0 outside the column.
	Above, Below []float64

	// Results of Flow: s = U' − kW and W' at the nodes, W and W' at the interfaces, 1/s
	// and m/s, and the shear stress S on their two sides, Pa.
	Shear, Normal            []float64
	W, NormalAt              []float64
	StressAbove, StressBelow []float64

	// Interface is the state of each interface in Matrix, −1 where it cannot move.
	Interface []int

	s      *Solver
	m      mesh
	k      float64
	layers int // without the half-space's
	tau    []response
}

// drivenReach is how far, in 1/k, a half-space of softening rock is followed, and how
// far from every interface rock is left out: 25 instead changes rates by less than 1e-8 in
// Newtonian rock and by up to 5e-5 where n = 5 throughout (measured).
const drivenReach = 14

// NewDriven makes a mesh that serves wavelengths from one to another, in m. An element
// spans at most span of ln η at the column's own viscosities, and of kh near
// interfaces; 2.5 is good to 1e-6 (tested).
// Columns with fields inside layers are refused.
func NewDriven(c *Column, from, to, span float64) (*Driven, error) {
	if !(positive(from) && positive(to) && from <= to) {
		return nil, fmt.Errorf("%w: %g to %g m", ErrWavelength, from, to)
	}
	if !(span > 0.01 && span <= 5) {
		return nil, fmt.Errorf("growth: span %g; must be between 0.01 and 5", span)
	}
	own := *c
	layers := len(c.Layers)
	if c.Base == HalfSpace {
		own.Layers = append(append([]Layer(nil), c.Layers...), Layer{Thickness: drivenReach * to / (2 * math.Pi),
			Viscosity: func(float64) (float64, float64) { return c.EtaS, c.EtaN }})
		own.Jumps = append(append([]float64(nil), c.Jumps...), 0)
	}
	s, err := NewSolver(&own, 0)
	if err != nil {
		return nil, err
	}
	if s.fields {
		return nil, errors.New("growth: a density gradient or temperature inside layers cannot be driven node by node")
	}
	s.c, s.nodal, s.interfaces = &own, true, 0
	d := &Driven{s: s, layers: layers}
	for i := range s.active {
		s.active[i] = i <= layers && s.movable(i)
		if i <= layers {
			d.Interface = append(d.Interface, -1)
		}
		if s.active[i] {
			d.Interface[i] = s.interfaces
			s.interfaces++
		}
	}
	s.divide(&d.m, 2*math.Pi/to, 2*math.Pi/from, rule{span, drivenReach})
	s.room(&d.m)
	for i := range d.m.elems {
		e := &d.m.elems[i]
		if e.opaque {
			continue
		}
		for q := range stages {
			d.Depth = append(d.Depth, e.z+e.h*nodeC[q])
			d.Layer = append(d.Layer, e.layer)
			d.Weight = append(d.Weight, e.h*nodeB[q])
			d.EtaS, d.EtaN = append(d.EtaS, e.etaS[q]), append(d.EtaN, e.etaN[q])
		}
	}
	n := len(d.Depth)
	d.Shear, d.Normal = make([]float64, n), make([]float64, n)
	for _, p := range []*[]float64{&d.Above, &d.Below, &d.W, &d.NormalAt, &d.StressAbove, &d.StressBelow} {
		*p = make([]float64, layers+1)
	}
	for i := range layers + 1 {
		if i > 0 {
			d.Above[i], _ = own.Layers[i-1].Viscosity(s.depths[i])
		}
		if i < len(own.Layers) {
			d.Below[i], _ = own.Layers[i].Viscosity(s.depths[i])
		}
	}
	d.tau = make([]response, len(d.m.elems)+1)
	return d, nil
}

// Sweep condenses the column at the viscosities that are set and returns the matrix A
// of dξ/dt = A ξ (row-major, the states that Interface names), the Driven's own until
// the next Sweep.
func (d *Driven) Sweep(k float64) ([]float64, error) {
	s := d.s
	at := 0
	for i := range d.m.elems {
		e := &d.m.elems[i]
		if e.opaque {
			up, down := max(at-1, 0), min(at, len(d.EtaS)-1)
			e.zTop = 2 * math.Sqrt(d.EtaS[up]*d.EtaN[up])
			e.zBase = 2 * math.Sqrt(d.EtaS[down]*d.EtaN[down])
			continue
		}
		copy(e.etaS[:], d.EtaS[at:at+stages])
		copy(e.etaN[:], d.EtaN[at:at+stages])
		e.build()
		at += stages
	}
	s.c.EtaS, s.c.EtaN = d.EtaS[at-1], d.EtaN[at-1] // below the nodes of a half-space
	for i := range d.Above {
		s.forces[i].viscous = 4 * s.c.ShearRate * (d.Below[i] - d.Above[i])
	}
	d.k = k
	s.assemble(&d.m, k)
	n := d.m.states
	for _, a := range s.a[:n*n] {
		if !finite(a) {
			return nil, fmt.Errorf("growth: wavelength %g m: the evolution matrix is not finite", 2*math.Pi/k)
		}
	}
	return s.a[:n*n], nil
}

// Flow computes the flow that displacements ξ (m, of each interface) drive, after Sweep.
func (d *Driven) Flow(xi []float64) {
	s, m, k := d.s, &d.m, d.k
	force := func(i int) response {
		if i > d.layers || !s.active[i] {
			return response{}
		}
		return response{s.forces[i].buoyancy * xi[i], s.forces[i].viscous * k * xi[i]}
	}
	n := len(m.elems)
	d.tau[n] = response{}
	for i := n - 1; i >= 0; i-- {
		if e := &m.elems[i]; e.last {
			f := force(e.layer + 1)
			d.tau[i+1].w += f.w
			d.tau[i+1].u += f.u
		}
		x, b := &s.links[i].x, d.tau[i+1]
		d.tau[i] = response{x.ww*b.w + x.uw*b.u, x.wu*b.w + x.uu*b.u} // Xᵀ τ
	}
	f, c := force(0), s.surface()
	top := response{d.tau[0].w + f.w, d.tau[0].u + f.u}
	v := response{c.ww*top.w + c.wu*top.u, c.wu*top.w + c.uu*top.u}
	d.W[0], d.NormalAt[0] = v.w, -k*v.u
	at, first := 0, true
	for i := range n {
		e := &m.elems[i]
		vb, tt, tb := d.element(i, at, v)
		if first && e.layer <= d.layers {
			d.StressBelow[e.layer] = tt.u
		}
		if !e.opaque {
			at += stages
		}
		first = e.last
		if v = vb; e.last && e.layer < d.layers {
			j := e.layer + 1
			d.W[j], d.NormalAt[j], d.StressAbove[j] = v.w, -k*v.u, tb.u
		}
	}
}

// element fills the nodes of element i, the first of them node at, from the velocity at
// its top, and returns the velocity at its base and the tractions at both ends.
func (d *Driven) element(i, at int, v response) (vb, tt, tb response) {
	s := d.s
	e, jt, fac, tau := &d.m.elems[i], &s.joints[i], &s.factors[i], d.tau[i+1]
	q := response{jt.pww*v.w + jt.pwu*v.u, jt.puw*v.w + jt.puu*v.u} // Φ v
	tb = response{                                                  // Mᵀ τ − T Φ v
		-jt.t.ww*q.w - jt.t.wu*q.u + jt.m.ww*tau.w + jt.m.uw*tau.u,
		-jt.t.wu*q.w - jt.t.uu*q.u + jt.m.wu*tau.w + jt.m.uu*tau.u,
	}
	r := response{q.w + jt.sww*tau.w + jt.swu*tau.u, q.u + jt.swu*tau.w + jt.suu*tau.u}
	vb = response{jt.m.ww*r.w + jt.m.wu*r.u, jt.m.uw*r.w + jt.m.uu*r.u}
	tt = response{ // Φᵀ t_b − Q v
		jt.pww*tb.w + jt.puw*tb.u - jt.qww*v.w - jt.qwu*v.u,
		jt.pwu*tb.w + jt.puu*tb.u - jt.qwu*v.w - jt.quu*v.u,
	}
	if e.opaque {
		return vb, tt, tb
	}
	x, h := d.k*e.h, e.h
	var y [stages]float64
	for j := range y {
		y[j] = fac.d[j] * (-fac.nw[j]*v.w - fac.nu[j]*v.u + h*(fac.bw[j]*tb.w+fac.bu[j]*tb.u))
	}
	for j := stages - 1; j >= 0; j-- {
		for r := j + 1; r < stages; r++ {
			y[j] -= fac.l[r*(r+1)/2+j] * y[r]
		}
	}
	for j := range y {
		c := nodeC[j]
		ay, a2y := dot8(&butcher[j], &y), dot8(&butcher2[j], &y)
		d.Shear[at+j] = (y[j] + x*x*a2y + x*x*x*c*c/2*v.w - x*x*x*x*c*c*c/6*v.u) / h
		d.Normal[at+j] = -d.k * (ay + x*c*v.w + (1-x*x*c*c/2)*v.u)
	}
	return vb, tt, tb
}
