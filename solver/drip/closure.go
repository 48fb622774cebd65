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
	model      *growth.Column // layers that grade cut, see growth.Cut
	layer      []int          // of the state, of each of the model's and of a half-space
	contact    []int          // in the model, of each of the state's interfaces
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
	omega []float64 // step factor of each
	share []float64 // of the dissipation that each bears
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

// NewSoft prepares the closure for a state in a background. Layers whose composition grades
// are cut by contacts that move with the rock inside them, at eight Gauss points each: a
// drip's time is within 1e-4 of that with four times as many (measured).
func NewSoft(s *state.State, b Background) (*Soft, error) {
	m := Strained(s, b, "none")
	parts := make([][]float64, len(m.Layers))
	for i := range m.Layers {
		if m.Layers[i].Gradient != nil {
			parts[i] = []float64{0, 1}
		}
	}
	return newSoft(s, m, b, parts)
}

// newSoft is NewSoft of a model with parts of its layers that grade.
func newSoft(s *state.State, m *growth.Column, b Background, parts [][]float64) (*Soft, error) {
	c, err := m.Cut(parts)
	if err != nil {
		return nil, err
	}
	d, vertical, _ := b.rates()
	return &Soft{state: s, model: c.Column, layer: c.Layer, contact: c.Contact, background: rates{d, vertical, math.Abs(b.ExtensionRate)},
		bands: map[int]*softBand{}, tolerance: 1e-6, span: 3, stepError: softError}, nil
}

// States is how many displacements Rate and Matrix take, and Interfaces which of them are
// those of the column's interfaces, surface first. The others are of rock inside layers
// that grade, from the top down between the layer's interfaces.
func (f *Soft) States() int { return len(f.model.Layers) + 1 }

// Interfaces: see States.
func (f *Soft) Interfaces() []int { return slices.Clone(f.contact) }

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
		b.laws = append(b.laws, newNodeLaw(f.state, f.layer[flow.Layer[i]], z, f.coarse))
	}
	if f.background.d != 0 {
		b.addEdges(f)
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
	b.omega, b.share = make([]float64, len(b.x)), make([]float64, len(b.x))
	f.bands[i] = b
	return b, nil
}

// addEdges adds both sides of every interface that have a viscosity. Inside a layer both
// sides are the same, and exert nothing.
func (b *softBand) addEdges(f *Soft) {
	z := 0.0
	for i, c := range f.contact {
		if i > 0 {
			z += f.state.Column.Layers[i-1].Thickness
			b.edges = append(b.edges, edge{c, true})
			b.laws = append(b.laws, newNodeLaw(f.state, i-1, z, f.coarse))
		}
		if b.flow.Below[c] > 0 {
			b.edges = append(b.edges, edge{c, false})
			b.laws = append(b.laws, newNodeLaw(f.state, i, z, f.coarse))
		}
	}
}

// Rate fills out with dξ/dt (m/s) of the displacements xi (m, of every interface,
// surface first, and inside layers that grade: States; out as long) at wavenumber k
// (rad/m). Interfaces on walls do not move.
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
// the state of each displacement, −1 where it cannot move. A step of time through columns that
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
	if !(k > 0) || math.IsInf(k, 0) || len(xi) != f.States() {
		return nil, nil, fmt.Errorf("drip: wavenumber %g rad/m with %d displacements for %d", k, len(xi), f.States())
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
		if miss, err = f.respond(b, xi); err != nil {
			return nil, nil, err
		}
		if miss <= f.tolerance {
			b.keep(size)
			return b, a, nil
		}
		b.mix.step(b.x, b.map1, b.omega, b.share)
	}
	return nil, nil, fmt.Errorf("%w: wavelength %g m, amplitude %g m, relative change %g after %d rounds", errConverge, 2*math.Pi/k, size, miss, most)
}

// respond fills map1 with the viscosities that the flow's strain rates give, and returns
// the change of ln η, weighted with dissipation: the relative change of the rate that it
// would make, to first order.
func (f *Soft) respond(b *softBand, xi []float64) (miss float64, err error) {
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
		b.omega[i] = stepFactor(m.gainS)
		if i >= nodes {
			continue
		}
		j := len(b.laws) + i
		b.map1[j], b.omega[j] = m.lnN, stepFactor(m.gainN)
		ds := w.Weight[i] * w.EtaS[i] * shear * shear
		dn := w.Weight[i] * 4 * w.EtaN[i] * normal * normal
		b.share[i], b.share[j] = ds, dn
		total += ds + dn
		exponents += (ds + dn) * m.exponent
		squares += (ds + dn) * (shear*shear/4 + normal*normal) / 2
	}
	for j, e := range b.edges { // the power of a side's part of the couple 4 k ξ d Δη_S
		i := nodes + j
		b.share[i] = 4 * math.Abs(f.background.d*xi[e.contact]*w.NormalAt[e.contact]) * math.Exp(b.x[i])
	}
	if total == 0 {
		return 0, nil // nothing flows
	}
	for i, v := range b.share {
		b.share[i] = v / total
		miss += b.share[i] * math.Abs(b.map1[i]-b.x[i])
	}
	b.n, b.over = exponents/total, math.Sqrt(squares/total)/f.background.second
	if math.IsNaN(miss) {
		return 0, fmt.Errorf("%w: dissipation %g", errConverge, total)
	}
	return miss, nil
}
