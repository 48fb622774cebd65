package growth

import "math"

// sym2 is a symmetric 2 × 2 matrix on (W, U).
type sym2 struct{ ww, wu, uu float64 }

// mat2 is a 2 × 2 matrix on (W, U), row first.
type mat2 struct{ ww, wu, uw, uu float64 }

// link is an element joined to everything below it: v_b = X v_t + P f_b.
type link struct {
	x mat2
	p sym2
}

// response is one load's response (velocity per unit force) carried down the column.
type response struct{ w, u float64 }

// joint is how an element's base answers: t_b = −T (Φ v_t), v_b = M (Φ v_t). Above
// an impedance Z, M = (I + ΨZ)⁻¹ and T = ZM; a rigid wall has M = 0 and T = Ψ⁻¹; a
// free-slip wall holds W = 0 and S = 0.
func joint(t *triple, z sym2, wall Boundary) (m mat2, tt sym2) {
	switch wall {
	case Rigid:
		inv := 1 / (t.sww*t.suu - t.swu*t.swu)
		return mat2{}, sym2{t.suu * inv, -t.swu * inv, t.sww * inv}
	case FreeSlip:
		d := 1 / t.sww
		return mat2{uw: -t.swu * d, uu: 1}, sym2{ww: d}
	}
	a, b := 1+t.sww*z.ww+t.swu*z.wu, t.sww*z.wu+t.swu*z.uu
	c, d := t.swu*z.ww+t.suu*z.wu, 1+t.swu*z.wu+t.suu*z.uu
	inv := 1 / (a*d - b*c)
	m = mat2{d * inv, -b * inv, -c * inv, a * inv}
	tt = sym2{z.ww*m.ww + z.wu*m.uw, z.ww*m.wu + z.wu*m.uu, z.wu*m.wu + z.uu*m.uu}
	return m, tt
}

// up sweeps from the base to the top and leaves each element's link and the
// impedance of all that lies below the column's top, t = −Z v.
func (s *Solver) up(m *mesh, k float64) {
	z := sym2{}
	if s.c.Base == HalfSpace {
		q := 2 * k * math.Sqrt(s.c.EtaS*s.c.EtaN) // 2η_S k/√n̂: exact for a power law too (derived)
		z = sym2{q, 0, q}
	}
	wall := s.c.Base // only the last element touches it
	var tr triple
	for i := len(m.elems) - 1; i >= 0; i-- {
		f := &s.factor
		if s.nodal {
			f = &s.factors[i]
		}
		m.elems[i].condense(k, f, &tr)
		mm, tt := joint(&tr, z, wall)
		wall = HalfSpace
		l := &s.links[i]
		l.x = mat2{
			mm.ww*tr.pww + mm.wu*tr.puw, mm.ww*tr.pwu + mm.wu*tr.puu,
			mm.uw*tr.pww + mm.uu*tr.puw, mm.uw*tr.pwu + mm.uu*tr.puu,
		}
		l.p = sym2{mm.ww*tr.sww + mm.wu*tr.swu, mm.ww*tr.swu + mm.wu*tr.suu, mm.uw*tr.swu + mm.uu*tr.suu}
		// Z ← Q + Φᵀ T Φ
		tww, twu := tt.ww*tr.pww+tt.wu*tr.puw, tt.ww*tr.pwu+tt.wu*tr.puu
		tuw, tuu := tt.wu*tr.pww+tt.uu*tr.puw, tt.wu*tr.pwu+tt.uu*tr.puu
		z = sym2{
			tr.qww + tr.pww*tww + tr.puw*tuw,
			tr.qwu + tr.pww*twu + tr.puw*tuu,
			tr.quu + tr.pwu*twu + tr.puu*tuu,
		}
		if s.nodal {
			s.joints[i] = jointAt{tr, mm, tt}
		}
	}
	s.z = z
}

// jointAt is kept for elements that carry loads inside, and to recover fields.
type jointAt struct {
	triple
	m mat2
	t sym2
}

// surface returns the compliance of the top: C = Z⁻¹ free, 0 rigid, diag(0, 1/Z_UU) slip.
func (s *Solver) surface() sym2 {
	z := s.z
	switch s.c.Top {
	case Free:
		det := z.ww*z.uu - z.wu*z.wu
		return sym2{z.uu / det, -z.wu / det, z.ww / det}
	case FreeSlip:
		return sym2{0, 0, 1 / z.uu}
	}
	return sym2{}
}

// through carries a compliance to the base of an element: C ← P + X C Xᵀ.
func (l *link) through(c sym2) sym2 {
	x := &l.x
	aww, awu := x.ww*c.ww+x.wu*c.wu, x.ww*c.wu+x.wu*c.uu
	auw, auu := x.uw*c.ww+x.uu*c.wu, x.uw*c.wu+x.uu*c.uu
	return sym2{
		l.p.ww + aww*x.ww + awu*x.wu,
		l.p.wu + aww*x.uw + awu*x.uu,
		l.p.uu + auw*x.uw + auu*x.uu,
	}
}

// assemble fills A(k) of dξ/dt = A ξ, row-major: growth by the forces that unit
// displacements exert, f = (−g[ρ], 4 k d [η]), plus the kinematic e_z. States are the
// active interfaces from the top; where fields inside layers are states too, the work
// goes through ports (ports.go).
func (s *Solver) assemble(m *mesh, k float64) {
	if s.fields {
		s.assembleFields(m, k)
		return
	}
	s.up(m, k)
	c := s.surface()
	n := m.states
	s.grow(n)
	a := s.a[:n*n]
	shear := s.c.ShearRate != 0
	at := 0 // next state
	cw, cu := s.cw[:n], s.cu[:n]
	if s.active[0] {
		s.port(a, n, at, c, s.forces[0], k, shear)
		at++
	}
	for i := range m.elems {
		e, l := &m.elems[i], &s.links[i]
		c = l.through(c)
		for j := 0; j < at; j++ {
			cw[j] = l.carry(cw[j])
		}
		if shear {
			for j := 0; j < at; j++ {
				cu[j] = l.carry(cu[j])
			}
		}
		if e.last && s.active[e.layer+1] {
			s.port(a, n, at, c, s.forces[e.layer+1], k, shear)
			at++
		}
	}
	for i := 0; i < n; i++ {
		a[i*n+i] += s.c.VerticalStrain
	}
}

// force is what a unit displacement of an interface exerts there.
type force struct {
	buoyancy float64 // −g [ρ], Pa/m
	viscous  float64 // 4 d [η], to be multiplied by k, Pa
}

// port enters interface number at: its response to every earlier load (row) and, by
// reciprocity, the earlier states' response to its own load (column).
func (s *Solver) port(a []float64, n, at int, c sym2, f force, k float64, shear bool) {
	fw, fu := f.buoyancy, f.viscous*k
	for j := 0; j < at; j++ {
		p := s.loads[j] // of state j
		wj := s.cw[j].w // W here for a vertical force at j = W at j for one here
		a[j*n+at] = wj * fw
		a[at*n+j] = wj * p.buoyancy
		if shear {
			a[j*n+at] += s.cw[j].u * fu              // W at j for a horizontal force here
			a[at*n+j] += s.cu[j].w * (p.viscous * k) // W here for a horizontal force at j
		}
	}
	a[at*n+at] = c.ww * fw
	if shear {
		a[at*n+at] += c.wu * fu
	}
	s.loads[at] = f
	s.cw[at], s.cu[at] = response{c.ww, c.wu}, response{c.wu, c.uu}
}
