package growth

import (
	"errors"
	"fmt"
	"math"
)

// System is dξ/dt = A ξ at one wavelength, every movable interface a state. Where
// temperature is perturbed, the coefficients of T' are the last states; Weight is 0 for them.
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
	t := s.with(new(workspace))
	t.allMove()
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
	if s.below { // the end of the stretch that carries heat is no interface of the column
		sys.Interface = sys.Interface[:len(sys.Interface)-1]
	}
	sys.Weight = append(sys.Weight, make([]float64, sys.N-at)...) // of T'
	for _, a := range sys.A {
		if math.IsNaN(a) || math.IsInf(a, 0) {
			return nil, errors.New("growth: the evolution matrix is not finite")
		}
	}
	return sys, nil
}

// allMove makes states of all interfaces that can move, whether or not they exert a force.
func (s *Solver) allMove() {
	s.active, s.interfaces = make([]bool, len(s.active)), 0
	for i := range s.active {
		stretch := s.below && i == len(s.c.Layers) // the end of what carries heat
		if s.active[i] = s.movable(i) && !stretch; s.active[i] {
			s.interfaces++
		}
	}
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
