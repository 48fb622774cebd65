package growth

import (
	"fmt"
	"math"
)

// Contact is the flow at the upper side of an interface.
type Contact struct {
	W, U       float64 // vertical and horizontal velocity amplitude, m/s
	Shear      float64 // S, Pa
	EtaS, EtaN float64 // of the rock there, Pa s
	k          float64
}

// Invariants returns the second invariants of the flow's strain rate in 1/s and of its
// stress in Pa, each the largest along the interface: ε_xx = kU cos kx and ε_xz =
// S/(2η_S) sin kx, so that the larger of the two amplitudes is met; the stresses are
// 2 η_N ε_xx and S. In isotropic rock the stress is 2 η ε.
func (c Contact) Invariants() (rate, stress float64) {
	ku := math.Abs(c.k * c.U)
	return math.Max(ku, math.Abs(c.Shear)/(2*c.EtaS)), math.Max(2*c.EtaN*ku, math.Abs(c.Shear))
}

// Contact returns the flow at the upper side of interface i (1 the base of the first
// layer) that states of System drive at a wavelength in m.
func (s *Solver) Contact(wavelength float64, states []float64, i int) (Contact, error) {
	if !positive(wavelength) {
		return Contact{}, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	t, k := s.with(new(workspace)), 2*math.Pi/wavelength
	t.nodal = true
	t.allMove()
	m := &mesh{}
	t.divide(m, k, k, t.rule)
	return t.contact(m, k, states, i, t.couple)
}

// Contact is that of Solver, for states of Matrix with the same wavelength and parts.
func (p *Template) Contact(wavelength float64, parts [][]float64, states []float64, i int) (Contact, error) {
	if _, _, err := p.Matrix(wavelength, parts); err != nil { // meshes
		return Contact{}, err
	}
	m := p.t.mesh
	t := p.t.with(new(workspace))
	t.nodal = true
	couple := t.couple
	if t.fields {
		couple = func(_ *mesh, k float64, at *ports) *coupling { return p.couple(k, at) }
	}
	return t.contact(&m, 2*math.Pi/wavelength, states, i, couple)
}

// contact solves the flow on a mesh, with the forces that states exert.
func (s *Solver) contact(m *mesh, k float64, states []float64, i int, couple func(*mesh, float64, *ports) *coupling) (Contact, error) {
	s.room(m)
	s.assemble(m, k)
	f := &flow{s: s, m: m, k: k}
	f.p = s.layout(m)
	f.c = couple(m, k, f.p)
	if f.n = f.c.n; f.n != len(states) {
		return Contact{}, fmt.Errorf("growth: %d displacements for %d states", len(states), f.n)
	}
	if i < 1 || i >= len(s.active) {
		return Contact{}, fmt.Errorf("growth: interface %d has no upper side; there are %d", i, len(s.active)-1)
	}
	at := f.solve(f.forces(states, f.c.load)).contact[i]
	c := Contact{W: at.w, U: at.u, Shear: at.shear, EtaS: at.etaS, EtaN: at.etaN, k: k}
	if !finite(c.W) || !finite(c.U) || !finite(c.Shear) {
		return c, fmt.Errorf("growth: the flow at interface %d is not finite at a wavelength of %g m", i, 2*math.Pi/k)
	}
	return c, nil
}
