package drip

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Soft is a column whose rock is softened by the undulation itself: the variational
// single-harmonic closure. At every depth the viscosity follows from the strain rate of
// the undulation and of the background together, with the rock's full law, averaged over a
// wavelength; the flow and the viscosities are iterated to a fixed point, so that
// dξ/dt = W + e_z ξ is not linear in ξ.
//
// Without background and with one n everywhere it is a lower bound on the rate, too low
// by what Shortfall says. As ξ → 0 in a background it becomes the tangent rheology of
// Strained. Without background power-law rock hardens without limit as ξ → 0, but for
// diffusion creep beside it and the limits of viscosity: the column's reference rate
// plays no part.
//
// The column is that of one state. For a column that changes make one Soft a state.
// Not for several goroutines at once.
type Soft struct {
	state      *state.State
	model      *growth.Column
	background rates
	bands      map[int]*softBand
	tolerance  float64 // of W, relative
	span       float64 // of an element: growth.NewDriven
	stepError  float64 // of a step of Time: softError
	coarse     bool    // laws are tabulated as what is asked seldom needs it

	Iterations int // sweeps so far
}

// softBand is an octave of wavelengths on one mesh.
type softBand struct {
	flow  *growth.Driven
	laws  []nodeLaw // of nodes, then of the upper and the lower side of each interface
	edges []edge
	x     []float64 // ln η_S of all laws, then ln η_N of the nodes
	map1  []float64 // viscosities that the flow at x gives
	omega []float64 // step factor of each law
	mix   anderson
	past  [2]fixed  // points found, latest first
	start []float64 // x where the last undulation began
	begun bool      // start is that of this undulation
	n     float64   // dissipation's mean exponent at the last point
	over  float64   // the flow's strain rate over the background's there, root mean square over dissipation
}

// edge is one side of an interface.
type edge struct {
	contact int
	above   bool
}

// fixed is a fixed point found.
type fixed struct {
	lnSize float64
	x      []float64
}

// ErrGraded says that the closure does not take a column's layers.
var ErrGraded = errors.New("drip: softening by the drip itself takes layers of one composition each")

// NewSoft prepares the closure for a state in a background. Errors: ErrGraded.
func NewSoft(s *state.State, b Background) (*Soft, error) {
	m := Strained(s, b, "none")
	for i := range m.Layers {
		if m.Layers[i].Gradient != nil {
			return nil, fmt.Errorf("%w: %s has a density gradient of composition", ErrGraded, s.Column.Layers[i].Name)
		}
	}
	d, vertical, _ := b.rates()
	return &Soft{state: s, model: m, background: rates{d, vertical, math.Abs(b.ExtensionRate)},
		bands: map[int]*softBand{}, tolerance: 1e-5, span: 3, stepError: softError}, nil
}

// band returns the mesh that wavenumber k belongs to.
func (f *Soft) band(k float64) (*softBand, error) {
	i := int(math.Floor(math.Log2(k)))
	if b := f.bands[i]; b != nil {
		return b, nil
	}
	low := math.Exp2(float64(i))
	flow, err := growth.NewDriven(f.model, math.Pi/low, 2*math.Pi/low, f.span)
	if err != nil {
		return nil, err
	}
	b := &softBand{flow: flow}
	for i, z := range flow.Depth {
		b.laws = append(b.laws, newNodeLaw(f.state, flow.Layer[i], z, f.coarse))
	}
	if f.background.d != 0 {
		b.addEdges(f.state, f.coarse)
	}
	nodes := len(flow.Depth)
	b.x = make([]float64, len(b.laws)+nodes)
	for i := range flow.Depth {
		b.x[i], b.x[len(b.laws)+i] = math.Log(flow.EtaS[i]), math.Log(flow.EtaN[i])
	}
	for i, e := range b.edges {
		eta := flow.Below[e.contact]
		if e.above {
			eta = flow.Above[e.contact]
		}
		b.x[nodes+i] = math.Log(eta)
	}
	b.map1 = make([]float64, len(b.x))
	b.omega = make([]float64, len(b.laws))
	f.bands[i] = b
	return b, nil
}

// addEdges adds both sides of every interface that have a viscosity.
func (b *softBand) addEdges(s *state.State, coarse bool) {
	n := len(s.Layers)
	z := 0.0
	for i := range n + 1 {
		if i > 0 {
			z += s.Column.Layers[i-1].Thickness
			b.edges = append(b.edges, edge{i, true})
			b.laws = append(b.laws, newNodeLaw(s, i-1, z, coarse))
		}
		if b.flow.Below[i] > 0 {
			b.edges = append(b.edges, edge{i, false})
			b.laws = append(b.laws, newNodeLaw(s, i, z, coarse))
		}
	}
}

// Rate fills out with dξ/dt (m/s) of the displacements xi (m, of every interface,
// surface first; out as long) at wavenumber k (rad/m). Interfaces on walls do not move.
func (f *Soft) Rate(k float64, xi, out []float64) error {
	b, _, err := f.system(k, xi)
	if err != nil {
		return err
	}
	for i := range out {
		out[i] = 0
		if b.flow.Interface[i] >= 0 {
			out[i] = b.flow.W[i] + f.background.vertical*xi[i]
		}
	}
	return nil
}

// Matrix returns A with dξ/dt = A ξ at the viscosities that the displacements xi (as for
// Rate) make, e_z included, row-major over the states that are movable interfaces, and
// the state of each interface, −1 where it cannot move. A step of time through columns that
// change can hold A fixed over a part of it, as Time does. The slices are the caller's.
func (f *Soft) Matrix(k float64, xi []float64) (a []float64, states []int, err error) {
	b, m, err := f.system(k, xi)
	if err != nil {
		return nil, nil, err
	}
	return slices.Clone(m), slices.Clone(b.flow.Interface), nil
}

// errConverge says that flow and viscosities did not settle.
var errConverge = errors.New("drip: the flow and the viscosities it softens do not settle")

// system iterates flow and viscosities to their fixed point at xi and returns the band,
// its flow, and the matrix A with dξ/dt = A ξ at those viscosities.
func (f *Soft) system(k float64, xi []float64) (*softBand, []float64, error) {
	if !(k > 0) || math.IsInf(k, 0) || len(xi) != len(f.model.Layers)+1 {
		return nil, nil, fmt.Errorf("drip: wavenumber %g rad/m with %d displacements for %d interfaces", k, len(xi), len(f.model.Layers)+1)
	}
	var size float64
	for _, v := range xi {
		size = math.Max(size, math.Abs(v))
	}
	if math.IsNaN(size) || math.IsInf(size, 0) {
		return nil, nil, fmt.Errorf("drip: displacements %g are not finite", xi)
	}
	b, err := f.band(k)
	if err != nil {
		return nil, nil, err
	}
	b.guess(size)
	b.mix.begin()
	var miss float64
	const most, patience = 400, 40
	for i := range most {
		if i%patience == patience-1 { // it goes in circles
			b.mix.slower()
		}
		f.Iterations++
		b.set()
		a, err := b.flow.Sweep(k)
		if err != nil {
			return nil, nil, err
		}
		b.flow.Flow(xi)
		if size == 0 && f.background.d == 0 {
			return b, a, nil // nothing moves: no rate to find a viscosity at
		}
		if miss, err = f.respond(b); err != nil {
			return nil, nil, err
		}
		if miss <= f.tolerance {
			b.keep(size)
			return b, a, nil
		}
		b.mix.step(b.x, b.map1, b.omega, len(b.flow.Depth))
	}
	return nil, nil, fmt.Errorf("%w: wavelength %g m, amplitude %g m, relative change %g after %d rounds", errConverge, 2*math.Pi/k, size, miss, most)
}

// set hands x to the flow.
func (b *softBand) set() {
	nodes := len(b.flow.Depth)
	for i := range nodes {
		b.flow.EtaS[i], b.flow.EtaN[i] = math.Exp(b.x[i]), math.Exp(b.x[len(b.laws)+i])
	}
	for i, e := range b.edges {
		eta := math.Exp(b.x[nodes+i])
		if e.above {
			b.flow.Above[e.contact] = eta
		} else {
			b.flow.Below[e.contact] = eta
		}
	}
}

// respond fills map1 with the viscosities that the flow's strain rates give, and returns
// the change of ln η, weighted with dissipation: the relative change of the rate that it
// would make, to first order.
func (f *Soft) respond(b *softBand) (miss float64, err error) {
	w := b.flow
	nodes := len(w.Depth)
	least := f.least(b)
	var total, exponents, squares float64
	for i := range b.laws {
		l := &b.laws[i]
		var shear, normal float64
		if i < nodes {
			shear, normal = w.Shear[i], w.Normal[i]
		} else {
			e := b.edges[i-nodes]
			shear, normal = w.StressBelow[e.contact], w.NormalAt[e.contact]
			if e.above {
				shear = w.StressAbove[e.contact]
			}
			shear /= math.Exp(b.x[i])
		}
		m, err := l.closure(shear, normal, f.background, least)
		if err != nil {
			return 0, err
		}
		b.map1[i] = m.lnS
		b.omega[i] = 2 * m.exponent / (m.exponent + 1)
		if i >= nodes {
			continue
		}
		b.map1[len(b.laws)+i] = m.lnN
		ds := w.Weight[i] * w.EtaS[i] * shear * shear
		dn := w.Weight[i] * 4 * w.EtaN[i] * normal * normal
		total += ds + dn
		miss += ds*math.Abs(m.lnS-b.x[i]) + dn*math.Abs(m.lnN-b.x[len(b.laws)+i])
		exponents += (ds + dn) * m.exponent
		squares += (ds + dn) * (shear*shear/4 + normal*normal) / 2
	}
	for i, e := range b.edges { // the couple on an interface, against all of it
		if drop := math.Abs(w.Above[e.contact] - w.Below[e.contact]); drop > 0 {
			miss += total * math.Abs(b.map1[nodes+i]-b.x[nodes+i]) * math.Min(1, math.Exp(b.x[nodes+i])/drop)
		}
	}
	if total == 0 {
		return 0, nil // nothing flows
	}
	b.n, b.over = exponents/total, math.Sqrt(squares/total)/f.background.second
	if miss /= total; math.IsNaN(miss) {
		return 0, fmt.Errorf("%w: dissipation %g", errConverge, total)
	}
	return miss, nil
}

// least is the ε_II² below which rock is not asked: 1e-12 of the column's largest rate,
// which no flow feels, so that the viscosities of rock at rest stay finite.
func (f *Soft) least(b *softBand) float64 {
	most := f.background.second * f.background.second
	for i, s := range b.flow.Shear {
		n := b.flow.Normal[i]
		most = math.Max(most, s*s/4+n*n)
	}
	return math.Max(1e-24*most, math.Exp(2*lowestLnRate))
}
