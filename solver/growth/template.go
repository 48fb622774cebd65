package growth

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Template gives the evolution matrix of one column at many wavelengths, with states
// that are the same in another column of the same layers: every movable interface and,
// in a layer with a gradient, the displacements at the Gauss points of parts of its rock,
// whatever the mesh of the flow. The ends of the parts are on the scale of Layer.Place. A history of a column that changes can
// therefore be carried from one to the next. One goroutine at a time.
type Template struct {
	t     *Solver
	grade []*grading // of each layer; nil without a gradient
	inner interior   // of the mesh there is
	// where temperature is perturbed: the elements of T', and how many states they have
	warm       []heatElement
	warmStates int
}

// NewTemplate checks c and prepares it to a relative tolerance tol (DefaultTolerance
// where 0). Errors: those of NewSolver. Where temperature is perturbed, see PlaceHeat.
func NewTemplate(c *Column, tol float64) (*Template, error) {
	own := *c
	own.Layers = slices.Clone(c.Layers)
	p := &Template{grade: make([]*grading, len(c.Layers))}
	var top float64
	for i := range own.Layers {
		l := &own.Layers[i]
		if l.Gradient != nil {
			p.grade[i] = newGrading(l, top, c.Gravity)
			l.Gradient = func(float64) float64 { return 0 } // the mesh need not ask
		}
		top += l.Thickness
	}
	s, err := NewSolver(&own, tol)
	if err != nil {
		return nil, err
	}
	s.allMove()
	if s.below { // the stretch of half-space that carries heat has no gradient
		p.grade = append(p.grade, nil)
	}
	p.t = s
	for i, g := range p.grade {
		if g != nil && !finite(g.total()) {
			return nil, fmt.Errorf("growth: layer %d: a density gradient is not finite", i)
		}
	}
	return p, nil
}

// Twin returns a template of the same column with storage of its own, until Release.
func (p *Template) Twin() *Template {
	return &Template{t: p.t.twin(), grade: p.grade}
}

// Release gives a twin's storage to the next one; the twin is finished.
func (p *Template) Release() { p.t.release() }

// Range is that of Solver.
func (p *Template) Range() (from, to float64) { return p.t.Range() }

// layers is the number of the column's layers.
func (p *Template) layers() int {
	if p.t.below {
		return len(p.grade) - 1
	}
	return len(p.grade)
}

// mostParts is how many parts a layer may have.
const mostParts = 12

// Parts returns how many equal parts each layer with a gradient needs at a wavelength in
// m, 0 for other layers: displacements follow the flow, and that the viscosity, whose
// ln may change by heatSwing. There is a margin of a half for what the column may still
// become.
func (p *Template) Parts(wavelength float64) []int {
	k, n := 2*math.Pi/wavelength, make([]int, p.layers())
	for i := range n {
		if p.grade[i] == nil {
			continue
		}
		var swing float64
		for j := range p.t.segments {
			if g := &p.t.segments[j]; g.layer == i {
				swing += g.variation()
			}
		}
		n[i] = min(max(2, int(math.Ceil(1.5*(k*p.t.c.Layers[i].Thickness/p.t.rule.span+swing/heatSwing)))), mostParts)
	}
	return n
}

// PartNodes returns where in a part its states are, from 0 at its top to 1, and their
// weights in the mean over the part: those of Gauss.
func PartNodes() (at, weights []float64) { return slices.Clone(nodeC[:]), slices.Clone(nodeB[:]) }

// AcrossPart fills v with the weights that the states of a part have in the displacement
// at x, 0 at its top and 1 at its base: Lagrange's polynomials, also beyond.
func AcrossPart(x float64, v *[stages]float64) { lagrange(x, v) }

// Matrix returns A of dy/dt = A y at a wavelength in m, row-major, valid until the next
// call; parts are the ends of each layer's, increasing, nil without a gradient. States run
// from the surface down; a layer of n parts has 8 n between its two interfaces.
// Wavelengths asked in order share meshes.
//
// The force of a gradient is that of the polynomials through a part's states, times the
// gradient as it is, however rough: its integral is not left to the Gauss points.
func (p *Template) Matrix(wavelength float64, parts [][]float64) (a []float64, n int, err error) {
	if !positive(wavelength) {
		return nil, 0, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	if len(parts) != p.layers() {
		return nil, 0, fmt.Errorf("growth: parts of %d layers, the column has %d", len(parts), p.layers())
	}
	if p.Heated() && len(p.warm) == 0 {
		return nil, 0, errors.New("growth: no elements for heat: call PlaceHeat first")
	}
	for i, q := range parts {
		if p.grade[i] != nil && len(q) < 2 {
			return nil, 0, fmt.Errorf("growth: layer %d has a gradient and no parts", i)
		}
	}
	t, k := p.t, 2*math.Pi/wavelength
	if fresh := !(k >= t.mesh.low && k <= t.mesh.high); fresh {
		low, high := t.bandOf(k)
		t.divide(&t.mesh, low, high, t.rule)
		t.room(&t.mesh)
		p.inner.parts = nil
	}
	if !t.fields {
		t.assemble(&t.mesh, k)
	} else {
		at := t.layout(&t.mesh)
		if !slices.EqualFunc(p.inner.parts, parts, slices.Equal[[]float64]) {
			p.interior(at, parts)
		}
		t.comply(&t.mesh, k, at)
		c := p.couple(k, at)
		t.evolve(c, at)
		t.mesh.states = c.n
	}
	n = t.mesh.states
	a = t.a[:n*n]
	for _, v := range a {
		if !finite(v) {
			return nil, 0, fmt.Errorf("growth: the evolution matrix at a wavelength of %g m is not finite", wavelength)
		}
	}
	return a, n, nil
}
