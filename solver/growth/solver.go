package growth

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"sync"
)

// DefaultTolerance is the relative tolerance of the leading growth rate.
const DefaultTolerance = 1e-8

// MaxInterfaces is the largest number of layers the solver takes: the cost of one
// wavenumber grows with its cube.
const MaxInterfaces = 400

// ErrWavelength says that a wavelength is not a positive number.
var ErrWavelength = errors.New("growth: a wavelength must be positive and finite")

// Solver holds a checked column, its current mesh and all working storage, so that a
// wavenumber costs no allocation. One goroutine at a time.
type Solver struct {
	c          *Column
	tol        float64
	rule       rule
	depths     []float64 // of the interfaces, surface first
	segments   []segment
	forces     []force // of each interface per unit displacement
	active     []bool  // interfaces that are states: movable, and exerting a force when moved
	interfaces int     // how many are active
	fields     bool    // some layer carries a field: a density gradient, temperature
	nodal      bool    // keep what elements need to recover the flow inside them
	below      bool    // the last layer is 8/k of half-space, for temperature

	*workspace
}

// workspace is what a solver writes to.
type workspace struct {
	mesh, fine mesh
	bandError  float64 // of mesh, relative
	bandRule   rule    // mesh was made with
	ends       [2]rateAt
	second     float64 // real part of the second mode, from leading

	factor  factor
	factors []factor // one an element, where nodal
	joints  []jointAt
	links   []link
	inner   inner
	z       sym2
	a, t    []float64
	g, rest []float64 // of columns with fields
	cw, cu  []response
	loads   []force
	re, im  []float64
}

var workspaces sync.Pool

func takeWorkspace() *workspace {
	if w, ok := workspaces.Get().(*workspace); ok {
		return w
	}
	return new(workspace)
}

// release gives the solver's storage to the next one; the solver is finished.
func (s *Solver) release() {
	w := s.workspace
	s.workspace = nil
	w.mesh.clear()
	w.fine.clear()
	workspaces.Put(w)
}

// twin returns a solver of the same column with storage of its own.
func (s *Solver) twin() *Solver {
	return s.with(takeWorkspace())
}

// with returns a solver of the same column that writes to w, and may mesh and extend
// the column for itself.
func (s *Solver) with(w *workspace) *Solver {
	t := *s
	t.workspace = w
	if s.below {
		c := *s.c
		c.Layers = slices.Clone(c.Layers)
		t.c, t.depths, t.segments = &c, slices.Clone(s.depths), slices.Clone(s.segments)
	}
	return &t
}

// fieldIn says whether a layer carries a field.
func (s *Solver) fieldIn(layer int) bool {
	return s.c.Diffusion != nil || s.c.Layers[layer].Gradient != nil
}

// extended returns the column with a stretch of its half-space as a last layer, so that
// temperature can be perturbed there; stretch sets its thickness.
func (c *Column) extended() *Column {
	e := *c
	below := func(float64) (float64, float64) { return c.EtaS, c.EtaN }
	e.Layers = append(slices.Clone(c.Layers), Layer{Thickness: 1, Viscosity: below})
	e.Jumps = append(slices.Clone(c.Jumps), 0)
	d := *c.Diffusion
	none := d.HalfSpace
	none.Excess = func(float64) float64 { return 0 }
	d.Layers = append(slices.Clone(d.Layers), none)
	e.Diffusion = &d
	return &e
}

// stretch makes the added layer 8/k thick and cuts it where heat needs elements: short
// ones at its top, where temperature diffuses over less than the column's depth, each
// four times as long as the one above, and each in so many parts.
func (s *Solver) stretch(k float64, parts int) {
	if !s.below {
		return
	}
	last := len(s.c.Layers) - 1
	h, top := 8/k, s.depths[last]
	s.c.Layers[last].Thickness = h
	s.depths[last+1] = top + h
	for len(s.segments) > 0 && s.segments[len(s.segments)-1].layer == last {
		s.segments = s.segments[:len(s.segments)-1]
	}
	length := math.Min(0.08, 0.15*top/h)
	cut := func(from, to float64) {
		s.segments = append(s.segments, segment{layer: last, top: top + h*from, bottom: top + h*to, lower: to == 1})
	}
	for z := 0.0; z < 1; length *= 4 {
		next := math.Min(1, z+length)
		if 1-next < 0.5*length {
			next = 1
		}
		for i := range parts {
			from, to := z+(next-z)*float64(i)/float64(parts), z+(next-z)*float64(i+1)/float64(parts)
			if i == parts-1 {
				to = next
			}
			cut(from, to)
		}
		z = next
	}
}

// NewSolver checks c and prepares to solve it to a relative tolerance tol of the
// leading rate (DefaultTolerance where tol is 0; sensible from 1e-4 to 1e-12).
// c must not change while the Solver is used.
func NewSolver(c *Column, tol float64) (*Solver, error) { return newSolver(c, tol, new(workspace)) }

func newSolver(c *Column, tol float64, w *workspace) (*Solver, error) {
	if tol == 0 {
		tol = DefaultTolerance
	}
	if !(tol > 1e-14 && tol < 0.1) {
		return nil, fmt.Errorf("growth: tolerance %g is not between 1e-14 and 0.1", tol)
	}
	if err := c.check(); err != nil {
		return nil, err
	}
	s := &Solver{c: c, tol: tol, rule: ruleFor(tol), workspace: w}
	if c.Diffusion != nil && c.Base == HalfSpace {
		s.c, s.below = c.extended(), true
		c = s.c
	}
	s.depths = make([]float64, len(c.Layers)+1)
	for i := range c.Layers {
		l := &c.Layers[i]
		top := s.depths[i]
		bottom := top + l.Thickness
		s.depths[i+1] = bottom
		s.fields = s.fields || l.Gradient != nil || c.Diffusion != nil
		a := top
		for _, z := range l.Kinks {
			if z > a && z < bottom {
				s.segments = append(s.segments, segment{layer: i, top: a, bottom: z})
				a = z
			}
		}
		s.segments = append(s.segments, segment{layer: i, top: a, bottom: bottom, lower: true})
	}
	for i := range s.segments {
		g := &s.segments[i]
		g.survey(c.Layers[g.layer].Viscosity)
	}
	s.nodal = s.fields
	s.forces = make([]force, len(c.Layers)+1)
	for i := range s.forces {
		var above, below float64 // secant viscosities, nothing outside the column
		if i > 0 {
			above, _ = c.Layers[i-1].Viscosity(s.depths[i])
		}
		if i < len(c.Layers) {
			below, _ = c.Layers[i].Viscosity(s.depths[i])
		} else if c.Base == HalfSpace {
			below = c.EtaS
		}
		s.forces[i] = force{-c.Gravity * c.Jumps[i], 4 * c.ShearRate * (below - above)}
	}
	s.active = make([]bool, len(s.forces))
	for i, f := range s.forces {
		// an inviscid base ties temperature to its displacement, whatever its density
		tied := c.Diffusion != nil && c.Base == Inviscid && i == len(c.Layers)
		if s.active[i] = s.movable(i) && (tied || f != (force{})); s.active[i] {
			s.interfaces++
		}
	}
	return s, nil
}

// check refuses what cannot be solved, with the numbers.
func (c *Column) check() error {
	switch {
	case len(c.Layers) == 0:
		return errors.New("growth: a column needs at least one layer")
	case len(c.Layers) > MaxInterfaces:
		return fmt.Errorf("growth: %d layers; at most %d: merge those with the same rock", len(c.Layers), MaxInterfaces)
	case len(c.Jumps) != len(c.Layers)+1:
		return fmt.Errorf("growth: %d density jumps for %d layers; needs one more than layers", len(c.Jumps), len(c.Layers))
	case !(c.Gravity >= 0) || math.IsInf(c.Gravity, 0):
		return fmt.Errorf("growth: gravity %g m/s²; must be zero or more", c.Gravity)
	case c.Top != Free && c.Top != FreeSlip && c.Top != Rigid:
		return fmt.Errorf("growth: boundary %d cannot be a top", c.Top)
	case c.Base < FreeSlip || c.Base > Inviscid:
		return fmt.Errorf("growth: boundary %d cannot be a base", c.Base)
	case c.Base == HalfSpace && !(positive(c.EtaS) && positive(c.EtaN)):
		return fmt.Errorf("growth: half-space viscosities %g, %g Pa s; must be positive", c.EtaS, c.EtaN)
	}
	for i, j := range c.Jumps {
		if math.IsNaN(j) || math.IsInf(j, 0) {
			return fmt.Errorf("growth: density jump %d is %g kg/m³", i, j)
		}
	}
	if !finite(c.ShearRate) || !finite(c.VerticalStrain) {
		return fmt.Errorf("growth: background rates d %g, e_z %g 1/s", c.ShearRate, c.VerticalStrain)
	}
	var z float64
	for i := range c.Layers {
		l := &c.Layers[i]
		if !positive(l.Thickness) {
			return fmt.Errorf("growth: layer %d is %g m thick; must be positive", i, l.Thickness)
		}
		if l.Viscosity == nil {
			return fmt.Errorf("growth: layer %d has no viscosity", i)
		}
		for q := 0; q <= 4; q++ {
			d := z + l.Thickness*float64(q)/4
			if es, en := l.Viscosity(d); !positive(es) || !positive(en) {
				return fmt.Errorf("growth: layer %d at %g m: viscosities %g, %g Pa s; must be positive", i, d, es, en)
			}
		}
		if !slices.IsSorted(l.Kinks) {
			return fmt.Errorf("growth: layer %d: kinks are not in order of depth", i)
		}
		z += l.Thickness
	}
	return nil
}

func positive(x float64) bool { return x > 0 && !math.IsInf(x, 0) }
func finite(x float64) bool   { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// grow makes room for n states and the mesh's elements.
func (s *Solver) grow(n int) {
	if len(s.cw) < n {
		s.a, s.t = make([]float64, n*n), make([]float64, n*n)
		s.cw, s.cu = make([]response, n), make([]response, n)
		s.loads = make([]force, n)
		s.re, s.im = make([]float64, n), make([]float64, n)
	}
}

// room makes storage for the elements of m.
func (s *Solver) room(m *mesh) {
	if n := len(m.elems); len(s.links) < n {
		s.links = make([]link, n+n/2)
	}
	if n := len(m.elems); s.nodal && len(s.factors) < n {
		s.joints = make([]jointAt, n+n/2)
		s.factors = make([]factor, n+n/2)
	}
}

// leading returns the eigenvalue of A(k) with the largest real part, and the largest
// modulus of all.
func (s *Solver) leading(m *mesh, k float64) (re, im, fastest float64, err error) {
	s.room(m)
	s.assemble(m, k)
	n := m.states
	if n == 0 {
		return 0, 0, 0, nil // no interface exerts a force: every shape is neutral
	}
	if s.c.ShearRate == 0 && s.c.Diffusion == nil {
		if re, fastest, ok := s.leadingReal(n); ok && finite(re) {
			return re, 0, fastest, nil
		}
		s.assemble(m, k) // it was overwritten
	}
	if err := eigenvalues(s.a[:n*n], n, s.re, s.im); err != nil {
		return 0, 0, 0, fmt.Errorf("growth: wavelength %g m: %w", 2*math.Pi/k, err)
	}
	re, s.second = math.Inf(-1), math.Inf(-1)
	for i := range s.re[:n] {
		switch {
		case s.re[i] > re:
			re, im, s.second = s.re[i], math.Abs(s.im[i]), re
		case s.re[i] < re && s.re[i] > s.second:
			s.second = s.re[i]
		}
		fastest = math.Max(fastest, math.Hypot(s.re[i], s.im[i]))
	}
	if !finite(re) {
		return 0, 0, 0, fmt.Errorf("growth: wavelength %g m: no finite growth rate", 2*math.Pi/k)
	}
	return re, im, fastest, nil
}
