package growth

import "math"

// solve computes the flow that displacements x of the states drive: forces are
// carried up as tractions t = −Z v + τ, the top fixes its velocity, and velocities
// are carried down again.
func (f *flow) solve(x []float64) {
	s, m, k := f.s, f.m, f.k
	n := len(m.elems)
	tau := make([]response, n+1) // below element i−1's base = above element i
	inners := make([]*inner, n)
	at := len(x)
	pull := func(layer int) (fw, fu float64) { // force of interface `layer`
		if !s.active[layer] {
			return 0, 0
		}
		at--
		return s.forces[layer].buoyancy * x[at], s.forces[layer].viscous * k * x[at]
	}
	loads := make([]*[stages]float64, n)
	for i := n - 1; i >= 0; i-- {
		e, l := &m.elems[i], &s.links[i]
		if e.last {
			fw, fu := pull(e.layer + 1)
			tau[i+1].w += fw
			tau[i+1].u += fu
		}
		b := tau[i+1]
		tau[i] = response{l.x.ww*b.w + l.x.uw*b.u, l.x.wu*b.w + l.x.uu*b.u} // Xᵀ τ
		if e.gradient == nil {
			continue
		}
		in, p := new(inner), new([stages]float64)
		e.nodal(k, &s.factors[i], in)
		at -= stages
		for q := range p {
			p[q] = -s.c.Gravity * e.gradient[q] * x[at+q]
		}
		closed := *in
		closed.close(&s.joints[i])
		for q := range p {
			tau[i].w += closed.gw[q] * p[q]
			tau[i].u += closed.gu[q] * p[q]
		}
		inners[i], loads[i] = in, p
	}
	fw, fu := pull(0)
	top := response{tau[0].w + fw, tau[0].u + fu}
	c := s.surface()
	f.v = make([]response, n+1)
	f.t = make([]response, n)
	f.v[0] = response{c.ww*top.w + c.wu*top.u, c.wu*top.w + c.uu*top.u}
	f.points, f.diss = f.points[:0], make([]float64, len(s.c.Layers)+1)
	for i := 0; i < n; i++ {
		f.element(i, tau[i+1], inners[i], loads[i])
	}
	if s.c.Base == HalfSpace {
		v := f.v[n]
		f.diss[len(s.c.Layers)] = 2 * k * math.Sqrt(s.c.EtaS*s.c.EtaN) * (v.w*v.w + v.u*v.u)
	}
}

// element carries the velocity through element i and records the flow inside it.
func (f *flow) element(i int, tau response, in *inner, p *[stages]float64) {
	s, k := f.s, f.k
	e, jt := &f.m.elems[i], &s.joints[i]
	fac := &s.factors[i]
	v := f.v[i]
	q := response{jt.pww*v.w + jt.pwu*v.u, jt.puw*v.w + jt.puu*v.u} // Φ v + Λ p
	if p != nil {
		for j := range p {
			q.w += in.lw[j] * p[j]
			q.u += in.lu[j] * p[j]
		}
	}
	tb := response{
		-jt.t.ww*q.w - jt.t.wu*q.u + jt.m.ww*tau.w + jt.m.uw*tau.u,
		-jt.t.wu*q.w - jt.t.uu*q.u + jt.m.wu*tau.w + jt.m.uu*tau.u,
	}
	r := response{q.w + jt.sww*tau.w + jt.swu*tau.u, q.u + jt.swu*tau.w + jt.suu*tau.u}
	f.v[i+1] = response{jt.m.ww*r.w + jt.m.wu*r.u, jt.m.uw*r.w + jt.m.uu*r.u}
	f.t[i] = tb
	tt := response{ // Φᵀ t_b − Q v + Γᵀ p
		jt.pww*tb.w + jt.puw*tb.u - jt.qww*v.w - jt.qwu*v.u,
		jt.pwu*tb.w + jt.puu*tb.u - jt.qwu*v.w - jt.quu*v.u,
	}
	if p != nil {
		for j := range p {
			tt.w += in.gw[j] * p[j]
			tt.u += in.gu[j] * p[j]
		}
	}
	end := func(z float64, v, t response) {
		es, en := s.c.Layers[e.layer].Viscosity(z)
		f.points = append(f.points, fieldPoint{z: z, w: v.w, u: v.u, shear: t.u, normal: t.w,
			strain: invariant(t.u/es, k*v.u), layer: e.layer})
		_ = en
	}
	end(e.z, v, tt)
	if e.opaque {
		b := f.v[i+1]
		f.diss[e.layer] += k * (e.zTop*(v.w*v.w+v.u*v.u) + e.zBase*(b.w*b.w+b.u*b.u))
		end(e.z+e.h, b, tb)
		return
	}
	x, h := k*e.h, e.h
	var y [stages]float64
	for j := range y {
		y[j] = -fac.nw[j]*v.w - fac.nu[j]*v.u + h*(fac.bw[j]*tb.w+fac.bu[j]*tb.u)
		if p != nil {
			for r := range p {
				y[j] += h * p[r] * in.rows[r][j]
			}
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
		loss := e.etaS[j]*rate*rate + 4*e.etaN[j]*k*k*u*u
		pt[j] = fieldPoint{z: e.z + h*c, w: w, u: u, shear: e.etaS[j] * rate,
			strain: invariant(rate, k*u), layer: e.layer, weight: h * nodeB[j], loss: loss}
		f.diss[e.layer] += pt[j].weight * loss
	}
	for j := range pt { // Σ = Σ_top + ∫ (−kS − gδρ)
		pt[j].normal = tt.w
		for r := range pt {
			g := -k * pt[r].shear * h
			if p != nil {
				g -= p[r] / nodeB[r]
			}
			pt[j].normal += butcher[j][r] * g
		}
	}
	f.points = append(f.points, pt[:]...)
	end(e.z+h, f.v[i+1], tb)
}

// invariant returns the largest second invariant over a wavelength of the strain rate
// ε_xx = kU cos kx, ε_xz = ½ s sin kx: the larger of |kU| and |s|/2.
func invariant(s, ku float64) float64 { return math.Max(math.Abs(s)/2, math.Abs(ku)) }

// describe fills m from the flow of the real displacements x.
func (f *flow) describe(m *Mode, x []float64) {
	s := f.s
	layers := len(s.c.Layers)
	m.Displacement = make([]float64, layers+1)
	w := make([]float64, layers+1)  // W at each interface
	du := make([]float64, layers+1) // W' = −kU there
	sh := make([]float64, layers+1) // S there, above it
	w[0], du[0] = f.v[0].w, -f.k*f.v[0].u
	for i := range f.m.elems {
		if e := &f.m.elems[i]; e.last {
			j := e.layer + 1
			w[j], du[j], sh[j] = f.v[i+1].w, -f.k*f.v[i+1].u, f.t[i].u
		}
	}
	// displacements: states as given, passive contacts carried by the flow
	at := 0
	take := func(i int) {
		if s.active[i] {
			m.Displacement[i] = x[at]
			at++
		} else if q := m.Growth - s.c.VerticalStrain; q != 0 {
			m.Displacement[i] = w[i] / q
		}
	}
	take(0)
	m.GradientWork = make([]float64, layers)
	for i := range f.m.elems {
		e := &f.m.elems[i]
		if e.gradient != nil {
			at += stages
		}
		if e.last {
			take(e.layer + 1)
		}
	}
	m.WorkShare = make([]float64, layers+1)
	var loss, work float64
	for _, d := range f.diss {
		loss += d
	}
	for i := range m.WorkShare {
		if s.active[i] {
			m.WorkShare[i] = s.forces[i].buoyancy * m.Displacement[i] * w[i]
			work += m.WorkShare[i]
		}
	}
	f.gradientWork(m, x)
	for _, g := range m.GradientWork {
		work += g
	}
	m.Residual = 0
	if loss > 0 && s.c.ShearRate == 0 {
		m.Residual = math.Abs(work/loss - 1)
	}
	if loss > 0 {
		for i := range m.WorkShare {
			m.WorkShare[i] /= loss
		}
		for i := range m.GradientWork {
			m.GradientWork[i] /= loss
		}
		m.DissipationShare = make([]float64, layers+1)
		for i, d := range f.diss {
			m.DissipationShare[i] = d / loss
		}
		if s.c.ShearRate == 0 {
			f.sensitivities(m, w, du, sh, loss)
		}
	}
	m.StrainRate = make([]float64, layers)
	for _, p := range f.points {
		m.Depth = append(m.Depth, p.z)
		m.W, m.U = append(m.W, p.w), append(m.U, p.u)
		m.Shear, m.Normal = append(m.Shear, p.shear), append(m.Normal, p.normal)
		m.Layer = append(m.Layer, p.layer)
		m.StrainRate[p.layer] = math.Max(m.StrainRate[p.layer], p.strain)
	}
}

// gradientWork sums −g ρ_c ζ W over each graded layer.
func (f *flow) gradientWork(m *Mode, x []float64) {
	at, pt := 0, 0
	if f.s.active[0] {
		at++
	}
	for i := range f.m.elems {
		e := &f.m.elems[i]
		if e.opaque {
			pt += 2
		} else {
			if e.gradient != nil {
				for q := range stages {
					m.GradientWork[e.layer] -= f.s.c.Gravity * e.gradient[q] * x[at+q] * f.points[pt+1+q].w
				}
				at += stages
			}
			pt += stages + 2
		}
		if e.last && f.s.active[e.layer+1] {
			at++
		}
	}
}

// sensitivities fills the exact derivatives of a simple mode's rate, all for d = 0:
//
//	∂ln q/∂ln η_ℓ = −D_ℓ/ΣD        ∂q/∂ρ_ℓ = g (W_bottom² − W_top²)/ΣD
//	∂q/∂z_i = {−2g[ρ]_i W_i W_i' − q(S_i² [1/η_S]_i − 4[η_N]_i W_i'²)}/ΣD
//
// and, for a layer that thickens while everything below moves down with it (its own
// profile stretched: u = 0 above it, 0 to 1 across it, 1 below),
//
//	∂q/∂h = Σ u_i ∂q/∂z_i + (q/ΣD) ∫ D(z) u (ln η)' dz − (2g/ΣD) ∫ ρ_c W W' u dz.
//
// D(z) is the dissipation density. Density jumps are held as they are. (Derived.)
func (f *flow) sensitivities(m *Mode, w, du, sh []float64, loss float64) {
	s, c := f.s, f.s.c
	layers := len(c.Layers)
	q := m.Growth
	if q == 0 {
		return
	}
	m.DlnqDlnEta = make([]float64, layers+1)
	m.DqDrho = make([]float64, layers+1)
	m.DqDh = make([]float64, layers)
	for i := range m.DlnqDlnEta {
		m.DlnqDlnEta[i] = -f.diss[i] / loss
		var bottom, top float64
		if i < layers {
			bottom = w[i+1] * w[i+1]
		}
		top = w[i] * w[i]
		m.DqDrho[i] = c.Gravity * (bottom - top) / loss
	}
	moved := make([]float64, layers+1) // ∂q/∂z_i
	for i := 1; i <= layers; i++ {
		if i == layers && c.Base != HalfSpace && c.Base != Inviscid {
			continue // a wall: handled below as the layer's own stretching
		}
		as, an := c.Layers[i-1].Viscosity(s.depths[i])
		inv, jump := -1/as, -an
		if i < layers {
			bs, bn := c.Layers[i].Viscosity(s.depths[i])
			inv, jump = inv+1/bs, jump+bn
		} else if c.Base == HalfSpace {
			inv, jump = inv+1/c.EtaS, jump+c.EtaN
		} else {
			inv = 0 // inviscid below: S = 0 at the base
		}
		moved[i] = (-2*c.Gravity*c.Jumps[i]*w[i]*du[i] - q*(sh[i]*sh[i]*inv-4*jump*du[i]*du[i])) / loss
	}
	if c.Base == Rigid || c.Base == FreeSlip {
		return // moving a wall is not an interface's derivative: thickness left out
	}
	own := make([]float64, layers)  // the part inside a layer as it stretches
	rest := make([]float64, layers) // the part inside a layer moved rigidly
	for _, p := range f.points {
		if p.weight == 0 {
			continue
		}
		l := &c.Layers[p.layer]
		d := 1e-6 * l.Thickness
		a, _ := l.Viscosity(p.z - d)
		b, _ := l.Viscosity(p.z + d)
		slope := math.Log(b/a) / (2 * d)
		g := q / loss * p.weight * p.loss * slope
		if l.Gradient != nil {
			g += 2 * c.Gravity / loss * p.weight * l.Gradient(p.z) * p.w * f.k * p.u
		}
		own[p.layer] += g * (p.z - s.depths[p.layer]) / l.Thickness
		rest[p.layer] += g
	}
	for i := range m.DqDh {
		m.DqDh[i] = own[i]
		for j := i + 1; j <= layers; j++ {
			m.DqDh[i] += moved[j]
			if j < layers {
				m.DqDh[i] += rest[j]
			}
		}
	}
}
