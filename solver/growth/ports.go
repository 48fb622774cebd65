package growth

import "gonum.org/v1/gonum/floats"

// A port is a place where a force acts and a velocity is read: the vertical and, with
// a background, the horizontal direction at an active interface, and the vertical one
// at every Gauss point of an element that carries a field. The flow has no time
// derivative, so all of it is one symmetric matrix G, velocity per force, and
//
//	dy/dt = A y,   A = R + V G L,
//
// with L the forces that the states exert, V the states' rates per velocity, and R what
// needs no flow: diffusion, and the kinematic e_z.
type ports struct {
	n       int
	contact []int // first port of each interface; −1 where it is not active
	element []int // first of the eight ports of each element; −1 where it has none
	g       []float64
}

// layout numbers the ports of a mesh from the top.
func (s *Solver) layout(m *mesh) *ports {
	p := &ports{contact: make([]int, len(s.active)), element: make([]int, len(m.elems))}
	enter := func(c int) {
		p.contact[c] = -1
		if s.active[c] {
			p.contact[c] = p.n
			p.n++
			if s.c.ShearRate != 0 {
				p.n++
			}
		}
	}
	enter(0)
	for i := range m.elems {
		p.element[i] = -1
		if m.elems[i].field {
			p.element[i] = p.n
			p.n += stages
		}
		if m.elems[i].last {
			enter(m.elems[i].layer + 1)
		}
	}
	return p
}

// comply fills G at wavenumber k: the sweep upwards, then every port's response
// carried downwards. s.nodal keeps what the elements need.
func (s *Solver) comply(m *mesh, k float64, p *ports) {
	s.up(m, k)
	n := p.n
	if cap(s.g) < n*n {
		s.g = make([]float64, n*n)
	}
	p.g = s.g[:n*n]
	r := make([]response, n) // velocity here per unit force at each port above
	set := func(i, j int, v float64) { p.g[i*n+j], p.g[j*n+i] = v, v }
	c := s.surface()
	enter := func(contact int) {
		at := p.contact[contact]
		if at < 0 {
			return
		}
		for j := 0; j < at; j++ {
			set(j, at, r[j].w)
		}
		set(at, at, c.ww)
		r[at] = response{c.ww, c.wu}
		if s.c.ShearRate == 0 {
			return
		}
		for j := 0; j < at; j++ {
			set(j, at+1, r[j].u)
		}
		set(at, at+1, c.wu)
		set(at+1, at+1, c.uu)
		r[at+1] = response{c.wu, c.uu}
	}
	enter(0)
	done := 0
	if p.contact[0] >= 0 {
		done = 1
		if s.c.ShearRate != 0 {
			done = 2
		}
	}
	in := &s.inner
	for i := range m.elems {
		e, l := &m.elems[i], &s.links[i]
		at := p.element[i]
		if at >= 0 {
			e.nodal(k, &s.factors[i], in)
			in.close(&s.joints[i])
			for q := range stages {
				gw, gu := in.gw[q], in.gu[q]
				row := p.g[(at+q)*n:]
				for j := 0; j < at; j++ {
					row[j] = gw*r[j].w + gu*r[j].u
				}
				cw, cu := c.ww*gw+c.wu*gu, c.wu*gw+c.uu*gu // top velocity per force at q
				for b := 0; b <= q; b++ {
					set(at+b, at+q, in.th[q][b]+cw*in.gw[b]+cu*in.gu[b])
				}
			}
			for j := 0; j < at; j++ {
				for q := range stages {
					p.g[j*n+at+q] = p.g[(at+q)*n+j]
				}
			}
			for q := range stages {
				cw, cu := c.ww*in.gw[q]+c.wu*in.gu[q], c.wu*in.gw[q]+c.uu*in.gu[q]
				r[at+q] = response{l.x.ww*cw + l.x.wu*cu + in.lw[q], l.x.uw*cw + l.x.uu*cu + in.lu[q]}
			}
		}
		for j := 0; j < done; j++ {
			r[j] = l.carry(r[j])
		}
		c = l.through(c)
		if at >= 0 {
			done = at + stages
		}
		if e.last {
			if enter(e.layer + 1); p.contact[e.layer+1] >= 0 {
				done = p.contact[e.layer+1] + 1
				if s.c.ShearRate != 0 {
					done++
				}
			}
		}
	}
}

// entry is one coefficient of a sparse row or column.
type entry struct {
	at int
	v  float64
}

// coupling is L by state and V by state, sparse, and R.
type coupling struct {
	n    int
	heat int       // how many states are displacements; temperatures follow
	load [][]entry // of each state: port, force per unit of the state
	rate [][]entry // of each state: port, rate of the state per unit velocity; of a temperature, before M⁻¹
	mass *banded   // M of the temperatures; nil without
	ez   []float64 // R of the displacements, on the diagonal
	rest []float64 // R in the rows of the temperatures, n × n, before M⁻¹; nil without
	what []int     // of each displacement: its interface, or −1 − layer of a gradient
}

// add adds a displacement.
func (c *coupling) add(what int, ez float64, load, rate []entry) {
	c.load, c.rate = append(c.load, load), append(c.rate, rate)
	c.ez, c.what = append(c.ez, ez), append(c.what, what)
	c.n++
}

// enter adds interface i, where it is a state.
func (s *Solver) enter(c *coupling, i int, k float64, p *ports) {
	at := p.contact[i]
	if at < 0 {
		return
	}
	f := s.forces[i]
	load := []entry{{at, f.buoyancy}}
	if s.c.ShearRate != 0 {
		load = append(load, entry{at + 1, f.viscous * k})
	}
	c.add(i, s.c.VerticalStrain, load, []entry{{at, 1}})
}

// couple lays out the states of a mesh: interfaces and, inside layers with a density
// gradient, displacements at Gauss points, in the order of the ports; then the
// coefficients of the temperature perturbation.
func (s *Solver) couple(m *mesh, k float64, p *ports) *coupling {
	c := &coupling{}
	s.enter(c, 0, k, p)
	for i := range m.elems {
		e := &m.elems[i]
		if e.gradient != nil {
			for q, g := range e.gradient {
				at := p.element[i] + q
				c.add(-1-e.layer, s.c.VerticalStrain, []entry{{at, -s.c.Gravity * g}}, []entry{{at, 1}})
			}
		}
		if e.last {
			s.enter(c, e.layer+1, k, p)
		}
	}
	c.heat = c.n
	if s.c.Diffusion != nil {
		s.coupleHeat(m, k, p, c)
	}
	return c
}

// assembleFields fills A through ports.
func (s *Solver) assembleFields(m *mesh, k float64) {
	p := s.layout(m)
	s.comply(m, k, p)
	c := s.couple(m, k, p)
	s.evolve(c, p)
	m.states = c.n
}

// evolve fills A from G and what couples the states to it.
func (s *Solver) evolve(c *coupling, p *ports) {
	s.grow(c.n)
	n := c.n
	a := s.a[:n*n]
	clear(a)
	copy(a, c.rest)
	gl := make([]float64, p.n) // a column of G L
	for j := range n {
		clear(gl)
		for _, l := range c.load[j] {
			floats.AddScaled(gl, l.v, p.g[l.at*p.n:(l.at+1)*p.n])
		}
		for i := range n {
			v := a[i*n+j]
			for _, r := range c.rate[i] {
				v += r.v * gl[r.at]
			}
			a[i*n+j] = v
		}
		s.loads[j] = force{}
		if len(c.load[j]) > 0 {
			s.loads[j].buoyancy = c.load[j][0].v
		}
	}
	for j, ez := range c.ez {
		a[j*n+j] += ez
	}
	if c.mass != nil {
		c.mass.solve(a[c.heat*n:], n)
	}
}
