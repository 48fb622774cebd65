package growth

import "math"

// mesh is a division of the column that serves every k of a band.
type mesh struct {
	elems  []element
	spare  []element // of the mesh before, whose elements may serve again
	old    int       // next of spare to look at
	low    float64   // smallest k it serves
	high   float64   // largest k it serves
	states int       // size of A: interfaces and fields
	parts  int       // into which heat elements are cut beyond the rule; 0 as 1
}

// rule turns a tolerance into the mesh rule's numbers: an element may span
// c = 5 (tol/1e-8)^(1/16) units of ln η and of kh, and what is further than D/k from
// every interface is felt by none. The order 16 makes tolerance nearly free.
type rule struct{ span, depth float64 }

func ruleFor(tol float64) rule {
	return rule{5 * math.Pow(tol/1e-8, 1.0/(2*stages)), 3 + math.Log(1/tol)/2}
}

// finer halves every element and looks e⁻² deeper: the error falls by 2^16, so the
// change against the coarser mesh is the coarser one's error.
func (r rule) finer() rule { return rule{r.span / 2, r.depth + 2} }

// segment is a stretch of one layer where the viscosity is smooth.
type segment struct {
	layer       int
	top, bottom float64
	lower       bool // bottom is an interface
	// slope holds the largest |d ln η/dz| of η_S and η_N over each of its equal parts
	slope [slopeParts]float64
}

// slopeParts is how finely a segment's viscosity is looked at to place elements.
const slopeParts = 24

// survey fills the slopes of a segment from differences of ln η.
func (g *segment) survey(f func(float64) (float64, float64)) {
	h := (g.bottom - g.top) / slopeParts
	var ps, pn float64
	for i := 0; i <= slopeParts; i++ {
		es, en := f(g.top + h*float64(i))
		ls, ln := math.Log(es), math.Log(en)
		if i > 0 {
			g.slope[i-1] = math.Max(math.Abs(ls-ps), math.Abs(ln-pn)) / h
		}
		ps, pn = ls, ln
	}
}

// swing returns h times the largest slope of ln η over [a, b]: the end-to-end change
// would miss a viscosity that rises and falls again.
func (g *segment) swing(a, b float64) float64 {
	part := slopeParts / (g.bottom - g.top)
	i := min(max(int((a-g.top)*part), 0), slopeParts-1)
	j := min(max(int(math.Ceil((b-g.top)*part)), i+1), slopeParts)
	var s float64
	for _, x := range g.slope[i:j] {
		s = math.Max(s, x)
	}
	return s * (b - a)
}

// variation is the sum of all changes of ln η, up and down.
func (g *segment) variation() float64 {
	var s float64
	for _, x := range g.slope {
		s += x
	}
	return s * (g.bottom - g.top) / slopeParts
}

// divide fills m with a mesh for the band [low, high].
func (s *Solver) divide(m *mesh, low, high float64, r rule) {
	m.low, m.high = low, high
	s.stretch(low, max(1, m.parts))
	m.spare, m.elems = m.elems, m.spare[:0]
	if m.elems == nil {
		m.elems = make([]element, 0, 48)
	}
	m.old = 0
	for i := range s.segments {
		g := &s.segments[i]
		s.split(m, g, g.top, g.bottom, r)
		if g.lower {
			m.elems[len(m.elems)-1].last = true
		}
	}
	m.states = s.interfaces
	for i := range m.elems {
		if m.elems[i].gradient != nil {
			m.states += stages
		}
	}
}

// split adds elements for [a, b] of a segment, top first.
func (s *Solver) split(m *mesh, g *segment, a, b float64, r rule) {
	h, layer := b-a, g.layer
	top, bottom := s.depths[layer], s.depths[layer+1]
	graded := s.fields && s.fieldIn(layer)
	near := math.Min(a-top, bottom-b)
	if near < 0 {
		near = 0
	}
	if !graded && near > 0 {
		es, en := s.c.Layers[layer].Viscosity((a + b) / 2)
		// a power-law field decays as exp(−kd/√n̂)
		if m.low*near > r.depth*math.Max(1, math.Sqrt(es/en)) {
			s.addOpaque(m, layer, a, b)
			return
		}
	}
	visc := g.swing(a, b) / r.span
	reach := r.span * (1 + m.high*near/4)
	if graded {
		reach = r.span
	}
	wave := m.high * h / reach
	if visc+wave <= 1 || h < 1e-9*s.depths[len(s.depths)-1] {
		s.add(m, layer, a, b)
		return
	}
	if visc >= wave || graded {
		n := int(math.Ceil(visc + wave))
		if n < 2 {
			n = 2
		}
		n = min(n, 64)
		for i := 0; i < n; i++ {
			s.split(m, g, a+h*float64(i)/float64(n), a+h*float64(i+1)/float64(n), r)
		}
		return
	}
	// wavelength-limited: one piece at the nearer interface, growing away from it
	da, db := a-top, bottom-b
	if math.Abs(da-db) <= h*1e-9 { // the middle of the layer: halve
		s.split(m, g, a, a+h/2, r)
		s.split(m, g, a+h/2, b, r)
		return
	}
	piece := r.span * (1 + m.high*math.Min(da, db)/4) / m.high * math.Max(0.25, 1-visc*0.5)
	if piece >= 0.75*h {
		piece = h / 2
	}
	if da < db {
		s.split(m, g, a, a+piece, r)
		s.split(m, g, a+piece, b, r)
	} else {
		s.split(m, g, a, b-piece, r)
		s.split(m, g, b-piece, b, r)
	}
}

// clear forgets the mesh, so that none of its elements serves another column.
func (m *mesh) clear() {
	m.elems, m.spare = m.elems[:0], m.spare[:0]
	m.low, m.high = 0, 0
}

// next returns an element at the end of m without losing its storage.
func (m *mesh) next() *element {
	if len(m.elems) < cap(m.elems) {
		m.elems = m.elems[:len(m.elems)+1]
	} else {
		m.elems = append(m.elems, element{})
	}
	return &m.elems[len(m.elems)-1]
}

// again returns the element [a, a + h] of the mesh before, nil where it had none. Both
// meshes run from the top down.
func (m *mesh) again(a, h float64) *element {
	for m.old < len(m.spare) && m.spare[m.old].z < a {
		m.old++
	}
	if m.old < len(m.spare) {
		if e := &m.spare[m.old]; e.z == a && e.h == h && !e.opaque {
			return e
		}
	}
	return nil
}

func (s *Solver) add(m *mesh, layer int, a, b float64) {
	h := b - a
	same := m.again(a, h)
	e := m.next()
	if same != nil {
		*e = *same
		e.last = false
		return
	}
	*e = element{z: a, h: h, layer: layer}
	l := &s.c.Layers[layer]
	for i := range nodeC {
		e.etaS[i], e.etaN[i] = l.Viscosity(a + h*nodeC[i])
	}
	e.build()
	e.field = s.fields && s.fieldIn(layer)
	if l.Gradient != nil {
		e.gradient = new([stages]float64)
		for i := range nodeC {
			e.gradient[i] = h * nodeB[i] * l.Gradient(a+h*nodeC[i])
		}
	}
}

// addOpaque adds a stretch that no interface feels: each side sees a half-space.
func (s *Solver) addOpaque(m *mesh, layer int, a, b float64) {
	e := m.next()
	*e = element{z: a, h: b - a, layer: layer, opaque: true}
	es, en := s.c.Layers[layer].Viscosity(a)
	e.zTop = 2 * math.Sqrt(es*en)
	es, en = s.c.Layers[layer].Viscosity(b)
	e.zBase = 2 * math.Sqrt(es*en)
}
