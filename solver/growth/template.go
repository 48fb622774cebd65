package growth

import (
	"errors"
	"fmt"
	"math"
)

// Template gives the evolution matrix of one column at many wavelengths, with states
// that are the same in another column of the same layers: every movable interface and,
// in a layer with parts, the displacements at the Gauss points of so many elements of
// equal thickness. A history of a column that changes can therefore be carried from
// one to the next. One goroutine at a time.
type Template struct {
	t     *Solver
	parts []int
}

// NewTemplate checks c and prepares it to a relative tolerance tol (DefaultTolerance
// where 0). Errors: those of NewSolver, and a column whose temperature is perturbed.
func NewTemplate(c *Column, tol float64) (*Template, error) {
	if c.Diffusion != nil {
		return nil, errors.New("growth: a template with diffusing temperature is not offered")
	}
	s, err := NewSolver(c, tol)
	if err != nil {
		return nil, err
	}
	s.interfaces = 0
	for i := range s.active {
		if s.active[i] = s.movable(i); s.active[i] {
			s.interfaces++
		}
	}
	return &Template{t: s, parts: make([]int, len(c.Layers))}, nil
}

// Twin returns a template of the same column with storage of its own, until Release.
func (p *Template) Twin() *Template {
	return &Template{t: p.t.twin(), parts: make([]int, len(p.parts))}
}

// Release gives a twin's storage to the next one; the twin is finished.
func (p *Template) Release() { p.t.release() }

// Range is that of Solver.
func (p *Template) Range() (from, to float64) { return p.t.Range() }

// Parts returns how many equal elements each layer with a gradient needs at a
// wavelength in m, 0 for other layers: the mesh rule with twice its margin, for what
// the column may still become.
func (p *Template) Parts(wavelength float64) []int {
	k, n := 2*math.Pi/wavelength, make([]int, len(p.parts))
	for i := range p.t.c.Layers {
		if p.t.c.Layers[i].Gradient == nil {
			continue
		}
		var swing float64
		for j := range p.t.segments {
			if g := &p.t.segments[j]; g.layer == i {
				swing = math.Max(swing, g.swing(g.top, g.bottom)/(g.bottom-g.top))
			}
		}
		h := p.t.c.Layers[i].Thickness
		n[i] = min(max(1, int(math.Ceil(2*(swing+k)*h/p.t.rule.span))), 12)
	}
	return n
}

// States returns the number of states with so many parts in each layer.
func (p *Template) States(parts []int) int {
	n := p.t.interfaces
	for i, l := range p.t.c.Layers {
		if l.Gradient != nil {
			n += stages * parts[i]
		}
	}
	return n
}

// Movable says whether the surface and the base of the column can move: whether they
// are states.
func (p *Template) Movable() (surface, base bool) {
	return p.t.movable(0), p.t.movable(len(p.t.c.Layers))
}

// Matrix returns A of dy/dt = A y at a wavelength in m, row-major, valid until the next
// call. States run from the surface down; a layer with a gradient and n parts has 8 n
// between its two interfaces. Wavelengths asked in order share meshes.
func (p *Template) Matrix(wavelength float64, parts []int) (a []float64, n int, err error) {
	if !positive(wavelength) {
		return nil, 0, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	if len(parts) != len(p.parts) {
		return nil, 0, fmt.Errorf("growth: parts of %d layers, the column has %d", len(parts), len(p.parts))
	}
	t, k := p.t, 2*math.Pi/wavelength
	same := k >= t.mesh.low && k <= t.mesh.high
	for i, q := range parts {
		if t.c.Layers[i].Gradient == nil {
			continue
		}
		if q < 1 {
			return nil, 0, fmt.Errorf("growth: layer %d has a gradient and %d parts", i, q)
		}
		same = same && q == p.parts[i]
	}
	if !same {
		low, high := t.bandOf(k)
		copy(p.parts, parts)
		p.divide(low, high)
		t.room(&t.mesh)
	}
	t.assemble(&t.mesh, k)
	n = t.mesh.states
	a = t.a[:n*n]
	for _, v := range a {
		if !finite(v) {
			return nil, 0, fmt.Errorf("growth: the evolution matrix at a wavelength of %g m is not finite", wavelength)
		}
	}
	return a, n, nil
}

// divide meshes the column for a band: layers with a gradient in equal parts, the
// others by the mesh rule.
func (p *Template) divide(low, high float64) {
	t := p.t
	m := &t.mesh
	m.low, m.high = low, high
	m.spare, m.elems = m.elems, m.spare[:0]
	m.old = 0
	m.states = t.interfaces
	for j := range t.segments {
		g := &t.segments[j]
		i := g.layer
		if t.c.Layers[i].Gradient == nil {
			t.split(m, g, g.top, g.bottom, t.rule)
		} else if g.lower {
			top, h := t.depths[i], t.c.Layers[i].Thickness
			for q := range p.parts[i] {
				a, b := top+h*float64(q)/float64(p.parts[i]), top+h*float64(q+1)/float64(p.parts[i])
				if q == p.parts[i]-1 {
					b = t.depths[i+1]
				}
				t.add(m, i, a, b)
				m.states += stages
			}
		}
		if g.lower {
			m.elems[len(m.elems)-1].last = true
		}
	}
}
