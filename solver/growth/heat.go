package growth

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/integrate/quad"
)

// Diffusion makes temperature perturbations states of the system,
//
//	ρ c_p (∂T'/∂t + γ W) = ∂z(κ_c ∂z T') − κ_c k² T',   δρ = (∂ρ/∂T)_P T',
//
// with γ the super-adiabatic gradient, on a grid that moves with the rock. T' is
// continuous at contacts (the step of its gradient across a displaced contact is left
// out) and zero at the top. At the base it is zero on a wall of fixed temperature, has
// no flux on a wall of fixed heat flow, is −ξ dT₀/dz over an inviscid fluid, and
// continues into a half-space, with γ = 0 there, for 8/k before it is set to zero: set
// to zero at the base itself it would get the sign of growth wrong.
//
// Without diffusion T' = −γζ is a density gradient like a compositional one: add
// (∂ρ/∂T) γ to Layer.Gradient and leave this nil.
type Diffusion struct {
	Layers       []Thermal // one a layer
	HalfSpace    Thermal   // below, constant; its Excess is not used
	FixedFlow    bool      // of a wall: heat flow instead of temperature
	BaseGradient float64   // dT₀/dz just above an inviscid base, K/m
	// BaseGradientRate is how fast that changes while a column is followed, K/m/s; 0 for
	// the growth rates of a column as it is
	BaseGradientRate float64
}

// Thermal is what one layer's heat needs, at depth z in m in the column.
type Thermal struct {
	PerKelvin    func(z float64) float64 // (∂ρ/∂T)_P, kg/m³/K
	Excess       func(z float64) float64 // γ = dT₀/dz − α g T₀/c_p, K/m
	Conductivity func(z float64) float64 // κ_c, W/m/K
	Capacity     func(z float64) float64 // ρ c_p, J/m³/K
}

// degree of the polynomials that carry T' on each of its elements.
const degree = 8

// heatElement is a stretch of the column on which T' is one polynomial.
type heatElement struct {
	z, h  float64
	layer int
	dof   [degree + 1]int // top, base, then the bubbles; −1 held at zero, −2 tied to ξ at the base
}

// shape returns the values and slopes (per m) of the basis at s in [−1, 1] of an
// element h thick: two linear functions, then integrated Legendre polynomials.
func shape(s, h float64, v, dv *[degree + 1]float64) {
	v[0], v[1] = (1-s)/2, (1+s)/2
	dv[0], dv[1] = -1/h, 1/h
	p0, p1 := 1.0, s
	for j := 2; j <= degree; j++ {
		p2 := (float64(2*j-1)*s*p1 - float64(j-1)*p0) / float64(j)
		v[j] = (p2 - p0) / math.Sqrt(float64(2*(2*j-1)))
		dv[j] = math.Sqrt(float64(2*j-1)/2) * p1 * 2 / h
		p0, p1 = p1, p2
	}
}

// heatMesh groups the flow's elements into elements for heat, so that no flow element
// sees a kink of T': a group spans at most heatSpan of kh and heatSwing of ln η, or is
// one element; m.parts cuts that further.
func (s *Solver) heatMesh(m *mesh) ([]heatElement, int) {
	var es []heatElement
	fresh := true
	for i := range m.elems {
		f := &m.elems[i]
		if n := len(es); !fresh && f.z+f.h-es[n-1].z <= s.heatLength(m, f.layer)*(1+1e-9) {
			es[n-1].h = f.z + f.h - es[n-1].z
		} else {
			es = append(es, heatElement{z: f.z, h: f.h, layer: f.layer})
		}
		// the stretch of half-space is cut where heat needs it
		fresh = f.last || s.below && f.layer == len(s.c.Layers)-1
	}
	return es, s.number(es)
}

// number numbers the states of T' from the top down and returns how many there are.
func (s *Solver) number(es []heatElement) int {
	dof := 0
	for i := range es {
		e := &es[i]
		e.dof[0] = -1
		if i > 0 {
			e.dof[0] = es[i-1].dof[1]
		}
		for j := 2; j <= degree; j++ {
			e.dof[j] = dof
			dof++
		}
		switch {
		case i < len(es)-1:
			e.dof[1] = dof
			dof++
		case s.c.Base == Inviscid:
			e.dof[1] = -2
		case s.c.Diffusion.FixedFlow && !s.below:
			e.dof[1] = dof
			dof++
		default:
			e.dof[1] = -1
		}
	}
	return dof
}

// heatSpan is kh, and heatSwing the change of ln η, of a heat element at the working
// resolution: T' follows W, and W follows the viscosity.
const (
	heatSpan  = 10
	heatSwing = 20
)

// heatLength returns how long a heat element of a layer may be, m.
func (s *Solver) heatLength(m *mesh, layer int) float64 {
	h := s.c.Layers[layer].Thickness
	var swing float64
	for i := range s.segments {
		if g := &s.segments[i]; g.layer == layer {
			swing += g.swing(g.top, g.bottom)
		}
	}
	n := math.Ceil(m.high*h/heatSpan + swing/heatSwing)
	return h / (n * float64(max(1, m.parts)))
}

// coupleHeat adds the coefficients of T' to the states.
func (s *Solver) coupleHeat(m *mesh, k float64, p *ports, c *coupling) {
	es, dof := s.heatMesh(m)
	s.coupleOn(es, dof, k, p, c, func(work, load [][]entry, tied *[]entry) {
		i := 0
		for at := range m.elems {
			f := &m.elems[at]
			for i+1 < len(es) && f.z >= es[i].z+es[i].h*(1-1e-9) {
				i++
			}
			for q := range nodeC {
				s.heatNode(es, i, f, p.element[at]+q, q, work, load, tied)
			}
		}
	})
}

// coupleOn adds the coefficients of T' on given elements; weigh enters, port by port, what
// the states weigh, ∫ ρ c_p γ φ W, and what weighs at a tied base.
func (s *Solver) coupleOn(es []heatElement, dof int, k float64, p *ports, c *coupling, weigh func(work, load [][]entry, tied *[]entry)) {
	first := c.n
	n := first + dof
	tied := -1 // the state an inviscid base ties T' to
	if s.c.Base == Inviscid {
		for i := range c.rate {
			if len(c.rate[i]) == 1 && c.rate[i][0].at == p.contact[len(s.c.Layers)] {
				tied = i
			}
		}
	}
	mass := newBanded(dof)
	if cap(s.rest) < n*n {
		s.rest = make([]float64, n*n)
	}
	c.rest = s.rest[:n*n] // −K, in the rows of T'
	clear(c.rest)
	tiedMass, tiedStiff := make([]float64, dof), make([]float64, dof)
	work := make([][]entry, dof) // ∫ ρ c_p γ φ W by port
	load := make([][]entry, dof)
	store := make([]entry, 8*stages*dof) // room for most lists at once
	for i := range dof {
		at := 8 * stages * i
		work[i] = store[at : at : at+4*stages]
		load[i] = store[at+4*stages : at+4*stages : at+8*stages]
	}
	var tiedLoad []entry
	var v, dv [degree + 1]float64
	gx, gw := heatQuadrature()
	for i := range es {
		e := &es[i]
		th := &s.c.Diffusion.Layers[e.layer]
		for q := range gx {
			z := e.z + e.h*gx[q]
			shape(2*gx[q]-1, e.h, &v, &dv)
			kap, cap := th.Conductivity(z), th.Capacity(z)
			wt := gw[q] * e.h
			for a := range v {
				if e.dof[a] < 0 {
					continue
				}
				for b := range v {
					mm, kk := wt*cap*v[a]*v[b], wt*kap*(dv[a]*dv[b]+k*k*v[a]*v[b])
					switch {
					case e.dof[b] >= 0:
						if e.dof[b] <= e.dof[a] {
							mass.add(e.dof[a], e.dof[b], mm)
						}
						c.rest[(first+e.dof[a])*n+first+e.dof[b]] -= kk
					case e.dof[b] == -2:
						tiedMass[e.dof[a]] += mm
						tiedStiff[e.dof[a]] += kk
					}
				}
			}
		}
	}
	weigh(work, load, &tiedLoad)
	if tied >= 0 { // T' at the base = −ξ dT₀/dz
		for _, l := range tiedLoad {
			c.load[tied] = append(c.load[tied], entry{l.at, -s.c.Diffusion.BaseGradient * l.v})
		}
	}
	// M dc/dt = −K c − ∫ρ c_p γ φ W − (M dT_N/dt + K T_N), T_N = −ξ dT₀/dz at an inviscid base
	for i := range dof {
		rate := work[i]
		for j := range rate {
			rate[j].v = -rate[j].v
		}
		if tied >= 0 && tiedMass[i] != 0 {
			g := s.c.Diffusion.BaseGradient
			rate = append(rate, entry{p.contact[len(s.c.Layers)], g * tiedMass[i]})
			c.rest[(first+i)*n+tied] += g*(tiedStiff[i]+tiedMass[i]*s.c.VerticalStrain) + s.c.Diffusion.BaseGradientRate*tiedMass[i]
		}
		c.load, c.rate = append(c.load, load[i]), append(c.rate, rate)
	}
	mass.factor()
	c.mass = mass
	c.n = n
}

// heatNode enters node q of flow element f, on heat element i or one after it: what T'
// there weighs, and what its velocity carries.
func (s *Solver) heatNode(es []heatElement, i int, f *element, port, q int, work, load [][]entry, tied *[]entry) {
	z := f.z + f.h*nodeC[q]
	for i+1 < len(es) && z > es[i].z+es[i].h {
		i++
	}
	e := &es[i]
	th := &s.c.Diffusion.Layers[e.layer]
	var v, dv [degree + 1]float64
	shape(2*(z-e.z)/e.h-1, e.h, &v, &dv)
	weigh := s.c.Gravity * th.PerKelvin(z) * f.h * nodeB[q]
	carry := th.Capacity(z) * th.Excess(z) * f.h * nodeB[q]
	for a := range v {
		switch d := e.dof[a]; {
		case d >= 0:
			if weigh != 0 {
				load[d] = append(load[d], entry{port, weigh * v[a]})
			}
			if carry != 0 {
				work[d] = append(work[d], entry{port, carry * v[a]})
			}
		case d == -2 && weigh != 0:
			*tied = append(*tied, entry{port, weigh * v[a]})
		}
	}
}

// heatQuadrature is the Gauss rule on [0, 1] that integrates the heat matrices.
var heatQuadrature = sync.OnceValues(func() (x, w []float64) {
	x, w = make([]float64, degree+4), make([]float64, degree+4)
	quad.Legendre{}.FixedLocations(x, w, 0, 1)
	return x, w
})
