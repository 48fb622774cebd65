package growth

import "math"

// flow is a column meshed and factored at one k, so that the velocity inside it can be
// recovered for any forces on its ports.
type flow struct {
	s      *Solver
	m      *mesh
	k      float64
	p      *ports
	c      *coupling
	matrix []float64 // A(k)
	n      int       // states
}

// newFlow makes a flow at k on its own mesh.
func (s *Solver) newFlow(k float64) *flow {
	t := s.with(new(workspace)) // the solver's mesh and matrices stay as they are
	t.nodal = true
	f := &flow{s: t, m: &mesh{}, k: k}
	low, high, r := k, k, t.rule
	if k >= s.mesh.low && k <= s.mesh.high { // the mesh that the rate was found on
		low, high, r, f.m.parts = s.mesh.low, s.mesh.high, s.bandRule, s.mesh.parts
	}
	t.divide(f.m, low, high, r)
	t.room(f.m)
	t.assemble(f.m, k)
	f.p = t.layout(f.m)
	f.c = t.couple(f.m, k, f.p)
	f.n = f.m.states
	f.matrix = t.a[:f.n*f.n]
	return f
}

// field is the flow that one set of forces drives.
type field struct {
	velocity []float64    // at every port, m/s
	contact  []fieldPoint // at each interface, on its upper side (the surface: its lower)
	points   []fieldPoint // from the top down: each element's top, Gauss points, base
	loss     []float64    // ∫ η_S s² + 4 η_N W'² of each layer, half-space last
}

// fieldPoint is the flow at one depth.
type fieldPoint struct {
	z, w, u, shear, normal float64 // m, m/s, m/s, Pa, Pa
	etaS, etaN             float64 // Pa s
	layer                  int
	weight                 float64 // quadrature weight, m; 0 at the ends of elements
}

// rates returns s = U' − kW and kU of a point.
func (p *fieldPoint) rates(k float64) (s, ku float64) { return p.shear / p.etaS, k * p.u }

// forces adds the forces of states x, or, with rate, the transposed rates of x.
func (f *flow) forces(x []float64, by [][]entry) []float64 {
	out := make([]float64, f.p.n)
	for j, list := range by {
		for _, l := range list {
			out[l.at] += l.v * x[j]
		}
	}
	return out
}

// solve computes the flow that forces on the ports drive: they are carried up as
// tractions t = −Z v + τ, the top fixes its velocity, and velocities are carried down.
func (f *flow) solve(force []float64) *field {
	s, m := f.s, f.m
	n := len(m.elems)
	out := &field{velocity: make([]float64, f.p.n), contact: make([]fieldPoint, len(s.active)), loss: make([]float64, len(s.c.Layers)+1)}
	tau := make([]response, n+1) // at the top of element i, forces above it left out
	inners := make([]*inner, n)
	at := func(contact int) response {
		i := f.p.contact[contact]
		switch {
		case i < 0:
			return response{}
		case s.c.ShearRate == 0:
			return response{force[i], 0}
		}
		return response{force[i], force[i+1]}
	}
	for i := n - 1; i >= 0; i-- {
		e, l := &m.elems[i], &s.links[i]
		if e.last {
			g := at(e.layer + 1)
			tau[i+1].w += g.w
			tau[i+1].u += g.u
		}
		b := tau[i+1]
		tau[i] = response{l.x.ww*b.w + l.x.uw*b.u, l.x.wu*b.w + l.x.uu*b.u} // Xᵀ τ
		if p := f.p.element[i]; p >= 0 {
			in := new(inner)
			e.nodal(f.k, &s.factors[i], in)
			inners[i] = in
			closed := *in
			closed.close(&s.joints[i])
			for q := range stages {
				tau[i].w += closed.gw[q] * force[p+q]
				tau[i].u += closed.gu[q] * force[p+q]
			}
		}
	}
	g, c := at(0), s.surface()
	top := response{tau[0].w + g.w, tau[0].u + g.u}
	v := response{c.ww*top.w + c.wu*top.u, c.wu*top.w + c.uu*top.u}
	meet := func(contact int, v response) {
		if i := f.p.contact[contact]; i >= 0 {
			out.velocity[i] = v.w
			if s.c.ShearRate != 0 {
				out.velocity[i+1] = v.u
			}
		}
	}
	meet(0, v)
	for i := 0; i < n; i++ {
		var nodes []float64
		if p := f.p.element[i]; p >= 0 {
			nodes = force[p : p+stages]
		}
		first := len(out.points)
		v = f.element(out, i, v, tau[i+1], inners[i], nodes)
		if i == 0 {
			out.contact[0] = out.points[first]
		}
		if p := f.p.element[i]; p >= 0 {
			for q := range stages {
				out.velocity[p+q] = out.points[first+1+q].w
			}
		}
		if e := &m.elems[i]; e.last {
			out.contact[e.layer+1] = out.points[len(out.points)-1]
			meet(e.layer+1, v)
		}
	}
	if s.c.Base == HalfSpace {
		out.loss[len(s.c.Layers)] = 2 * f.k * math.Sqrt(s.c.EtaS*s.c.EtaN) * (v.w*v.w + v.u*v.u)
	}
	return out
}

// element records the flow inside element i and returns the velocity at its base.
func (f *flow) element(out *field, i int, v, tau response, in *inner, p []float64) response {
	s, k := f.s, f.k
	e, jt, fac := &f.m.elems[i], &s.joints[i], &s.factors[i]
	q := response{jt.pww*v.w + jt.pwu*v.u, jt.puw*v.w + jt.puu*v.u} // Φ v + Λ p
	for j := range p {
		q.w += in.lw[j] * p[j]
		q.u += in.lu[j] * p[j]
	}
	tb := response{ // Mᵀ τ − T (Φ v + Λ p)
		-jt.t.ww*q.w - jt.t.wu*q.u + jt.m.ww*tau.w + jt.m.uw*tau.u,
		-jt.t.wu*q.w - jt.t.uu*q.u + jt.m.wu*tau.w + jt.m.uu*tau.u,
	}
	r := response{q.w + jt.sww*tau.w + jt.swu*tau.u, q.u + jt.swu*tau.w + jt.suu*tau.u}
	vb := response{jt.m.ww*r.w + jt.m.wu*r.u, jt.m.uw*r.w + jt.m.uu*r.u}
	tt := response{ // Φᵀ t_b − Q v + Γᵀ p
		jt.pww*tb.w + jt.puw*tb.u - jt.qww*v.w - jt.qwu*v.u,
		jt.pwu*tb.w + jt.puu*tb.u - jt.qwu*v.w - jt.quu*v.u,
	}
	for j := range p {
		tt.w += in.gw[j] * p[j]
		tt.u += in.gu[j] * p[j]
	}
	end := func(z float64, v, t response) {
		es, en := s.c.Layers[e.layer].Viscosity(z)
		out.points = append(out.points, fieldPoint{z: z, w: v.w, u: v.u, shear: t.u, normal: t.w, etaS: es, etaN: en, layer: e.layer})
	}
	end(e.z, v, tt)
	if e.opaque {
		out.loss[e.layer] += k * (e.zTop*(v.w*v.w+v.u*v.u) + e.zBase*(vb.w*vb.w+vb.u*vb.u))
		end(e.z+e.h, vb, tb)
		return vb
	}
	x, h := k*e.h, e.h
	var y [stages]float64
	for j := range y {
		y[j] = -fac.nw[j]*v.w - fac.nu[j]*v.u + h*(fac.bw[j]*tb.w+fac.bu[j]*tb.u)
		for r := range p {
			y[j] += h * p[r] * in.rows[r][j]
		}
		y[j] *= fac.d[j]
	}
	for j := stages - 1; j >= 0; j-- {
		for r := j + 1; r < stages; r++ {
			y[j] -= fac.l[r*(r+1)/2+j] * y[r]
		}
	}
	var pt [stages]fieldPoint
	for j := range pt {
		c := nodeC[j]
		var ay, a2y float64
		for r := range y {
			ay += butcher[j][r] * y[r]
			a2y += butcher2[j][r] * y[r]
		}
		rate := (y[j] + x*x*a2y + x*x*x*c*c/2*v.w - x*x*x*x*c*c*c/6*v.u) / h // U' − kW
		u := ay + x*c*v.w + (1-x*x*c*c/2)*v.u
		w := -x*a2y + (1-x*x*c*c/2)*v.w + (-x*c+x*x*x*c*c*c/6)*v.u
		pt[j] = fieldPoint{z: e.z + h*c, w: w, u: u, shear: e.etaS[j] * rate, etaS: e.etaS[j], etaN: e.etaN[j], layer: e.layer, weight: h * nodeB[j]}
		out.loss[e.layer] += pt[j].weight * (e.etaS[j]*rate*rate + 4*e.etaN[j]*k*k*u*u)
	}
	for j := range pt { // Σ = Σ_top + ∫ (−kS) − forces passed
		pt[j].normal = tt.w
		for r := range pt {
			g := -k * pt[r].shear * h
			if p != nil {
				g -= p[r] / nodeB[r]
			}
			pt[j].normal += butcher[j][r] * g
		}
	}
	out.points = append(out.points, pt[:]...)
	end(e.z+h, vb, tb)
	return vb
}
