package growth

import (
	"errors"
	"fmt"
	"math"
)

// System is dξ/dt = A ξ at one wavelength, every movable interface a state.
type System struct {
	Wavelength float64
	N          int
	A          []float64 // row-major, 1/s
	Weight     []float64 // of each state: g[ρ] of an interface, g h b ρ_c of a Gauss point, Pa/m
	Interface  []int     // the state of each interface, surface first; −1 where it cannot move
}

// System returns the evolution matrix at a wavelength in m. Interfaces that exert no
// force are states too: they are carried.
func (s *Solver) System(wavelength float64) (*System, error) {
	if !positive(wavelength) {
		return nil, fmt.Errorf("%w: %g m", ErrWavelength, wavelength)
	}
	k := 2 * math.Pi / wavelength
	if s.c.Diffusion != nil {
		return nil, errors.New("growth: the evolution matrix with diffusing temperature is not offered")
	}
	t := s.with(new(workspace))
	t.active = make([]bool, len(s.active))
	t.interfaces = 0
	for i := range t.active {
		if t.active[i] = s.movable(i); t.active[i] {
			t.interfaces++
		}
	}
	var m mesh
	t.divide(&m, k, k, t.rule)
	t.room(&m)
	t.assemble(&m, k)
	sys := &System{Wavelength: wavelength, N: m.states, A: t.a[:m.states*m.states]}
	at := 0
	enter := func(i int) {
		if t.active[i] {
			sys.Interface = append(sys.Interface, at)
			sys.Weight = append(sys.Weight, -t.forces[i].buoyancy)
			at++
		} else {
			sys.Interface = append(sys.Interface, -1)
		}
	}
	enter(0)
	for i := range m.elems {
		e := &m.elems[i]
		if e.gradient != nil {
			for _, g := range e.gradient {
				sys.Weight = append(sys.Weight, t.c.Gravity*g)
				at++
			}
		}
		if e.last {
			enter(e.layer + 1)
		}
	}
	for _, a := range sys.A {
		if math.IsNaN(a) || math.IsInf(a, 0) {
			return nil, errors.New("growth: the evolution matrix is not finite")
		}
	}
	return sys, nil
}

// movable says whether interface i (0 the surface) can move.
func (s *Solver) movable(i int) bool {
	switch i {
	case 0:
		return s.c.Top == Free
	case len(s.c.Layers):
		return s.c.Base == HalfSpace || s.c.Base == Inviscid
	}
	return true
}
