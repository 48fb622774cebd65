package drip

import (
	"math"
	"slices"
	"sync"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"

	"keelfall/solver/growth"
)

// Where temperature is perturbed on a course, T' is a state beside the displacements, on
// elements that keep to the rock as the parts of graded layers do: their ends are marks.
// Those at a layer's edges reach to the edge, whatever rock has come or gone there, until
// it is more than heatDrift of the layer; then T' is projected on elements laid out anew,
// new rock having the T' of its edge. Below the column T' keeps its place in shares of
// the depth it reaches. T' adds nothing to the model's strain: it is carried on a grid
// that moves with the rock.
const heatDrift = 2e-3

// heatAt returns the ends of the elements of T' at a node, in marks: equal shares of what
// each layer is now, or those there are where they still fit. A layer keeps the number it
// has, until it needs half as many again.
func (f *follower) heatAt(n *node, wavelength float64) [][]float64 {
	if !n.form.Heated() {
		return nil
	}
	var out [][]float64
	for i, need := range n.form.HeatElements(wavelength) {
		if i == len(n.lay.names) {
			out = append(out, n.form.Below())
			continue
		}
		name := n.lay.names[i]
		if had := f.heats[name]; 2*need > 3*had {
			f.heats[name] = need
		}
		m, count := n.marks[i], f.heats[name]
		if was := f.lay.heatOf(name); len(was) == count+1 {
			far := heatDrift * (was[count] - was[0])
			if math.Abs(was[0]-m[0]) < far && math.Abs(was[count]-m[marked]) < far {
				out = append(out, was)
				continue
			}
		}
		ends := make([]float64, count+1)
		for q := range ends {
			ends[q] = markAt(m, float64(q)/float64(count))
		}
		out = append(out, ends)
	}
	return out
}

// heat gives a layout at a node the elements of T'.
func (f *follower) heat(n *node, wavelength float64, l *layout) {
	if l.heat = f.heatAt(n, wavelength); len(l.heat) > len(l.names) {
		l.sizes = append(slices.Clone(l.sizes[:len(l.names)]), 8*wavelength/(2*math.Pi))
	}
}

// warm gives a node what followers with T' need.
func (n *node) warm() {
	if !n.form.Heated() {
		return
	}
	n.lay.warm, n.lay.sizes = n.form, nil
	for i := range n.marks {
		if n.marks[i] == nil {
			n.marks[i] = n.rocks(i)
		}
		n.lay.sizes = append(n.lay.sizes, n.s.Column.Layers[i].Thickness)
	}
}

// gradients notes at the nodes of a pair how fast the gradient changes that an inviscid
// base ties T' to; where the pair begins, that of the pair before is kept.
func gradients(l leg) {
	a, b := l.from.model.Diffusion, l.end.model.Diffusion
	if a == nil || b == nil {
		return
	}
	rate := (b.BaseGradient - a.BaseGradient) / (l.end.t - l.from.t)
	l.mid.model.Diffusion.BaseGradientRate, b.BaseGradientRate = rate, rate
}

// heatOf is a layer's elements of T' by its name; nil without.
func (l *layout) heatOf(name string) []float64 {
	if i := slices.Index(l.names, name); i >= 0 && l.heat != nil {
		return l.heat[i]
	}
	return nil
}

// heatStates is the number of states of T'.
func (l *layout) heatStates() int {
	if l.heat == nil {
		return 0
	}
	_, n := l.warm.HeatDofs(l.heatElements(len(l.heat)))
	return n
}

// heatElements is the number of elements above a layer.
func (l *layout) heatElements(layer int) (n int) {
	for _, ends := range l.heat[:layer] {
		n += len(ends) - 1
	}
	return n
}

// place puts a form's elements of T' where a layout has them at a node.
func (l *layout) place(form *growth.Template, n *node, wavelength float64) error {
	if l.heat == nil {
		return nil
	}
	depths := make([][]float64, len(l.heat))
	for i, ends := range l.heat {
		z := make([]float64, len(ends))
		depths[i] = z
		last := len(ends) - 1
		if i == len(l.names) {
			bottom, reach := n.s.Column.Depth(), 8*wavelength/(2*math.Pi)
			for q, x := range ends {
				z[q] = bottom + reach*x
			}
			continue
		}
		top, bottom := n.s.Span(i)
		fits := true
		for q, mark := range ends {
			switch q {
			case 0:
				z[q] = top
			case last:
				z[q] = bottom
			default:
				z[q] = top + (bottom-top)*placeOf(n.marks[i], mark)
			}
			fits = fits && (q == 0 || z[q]-z[q-1] > 0.05*(bottom-top)/float64(last))
		}
		if !fits { // much of the rock has gone within one step
			for q := range z {
				z[q] = top + (bottom-top)*float64(q)/float64(last)
			}
			z[last] = bottom
		}
	}
	return form.PlaceHeat(depths)
}

// warmth is T' of a layout's states, read at a place in the rock.
type warmth struct {
	l    *layout
	y    []float64 // of T'
	base float64   // T' of an inviscid base
	dof  [][growth.HeatDegree + 1]int
}

func (l *layout) warmth(y []float64) *warmth {
	contact, _, n := l.places()
	w := &warmth{l: l, y: y[n-l.heatStates():]}
	w.dof, _ = l.warm.HeatDofs(l.heatElements(len(l.heat)))
	if b := contact[len(l.names)]; b >= 0 {
		w.base = -y[b] * l.warm.BaseGradient()
	}
	return w
}

// at is T' at a mark in a layer; beyond the layer's elements, that of its edge.
func (w *warmth) at(layer int, mark float64) float64 {
	ends := w.l.heat[layer]
	q := min(max(partOf(ends, mark), 0), len(ends)-2)
	x := min(max((mark-ends[q])/(ends[q+1]-ends[q]), 0), 1)
	var v [growth.HeatDegree + 1]float64
	growth.HeatShape(2*x-1, &v)
	var sum float64
	for a, d := range w.dof[w.l.heatElements(layer)+q] {
		switch {
		case d >= 0:
			sum += v[a] * w.y[d]
		case d == -2:
			sum += v[a] * w.base
		}
	}
	return sum
}

// source returns T' of layout l by the mark in layer j of m, and the marks between which
// it is smooth. Rock that rose from below the column has the T' of what it rose to; other
// new rock has none.
func (w *warmth) source(m *layout, j int) (f func(mark float64) float64, breaks []float64) {
	l := w.l
	if j == len(m.names) && len(l.heat) > len(l.names) {
		return func(x float64) float64 { return w.at(len(l.names), x) }, l.heat[len(l.names)]
	}
	if j < len(m.names) {
		if i := slices.Index(l.names, m.names[j]); i >= 0 {
			return func(mark float64) float64 { return w.at(i, mark) }, l.heat[i]
		}
		if footRock(m.names[j]) {
			last := len(l.names) - 1
			v := w.at(last, l.heat[last][len(l.heat[last])-1])
			return func(float64) float64 { return v }, nil
		}
	}
	return func(float64) float64 { return 0 }, nil
}

// carryHeat fills the states of T' in out, of layout m, from the states y of layout l: the
// projection in the mean square on the elements of m, contacts included, where T' is
// continuous. The displacements of out are there.
func (l *layout) carryHeat(m *layout, y, out []float64) {
	n := m.heatStates()
	if n == 0 || l.heat == nil {
		return
	}
	from, to := l.warmth(y), m.warmth(out)
	mass, load := mat.NewSymDense(n, nil), mat.NewVecDense(n, nil)
	x, weight := heatNodes()
	var v [growth.HeatDegree + 1]float64
	e := 0
	for j, ends := range m.heat {
		f, breaks := from.source(m, j)
		metres := m.sizes[j] / (ends[len(ends)-1] - ends[0])
		for q := range len(ends) - 1 {
			dof := &to.dof[e]
			e++
			for _, piece := range pieces(ends[q], ends[q+1], breaks) {
				a, size := piece[0], piece[1]-piece[0]
				for g := range x {
					mark := a + size*x[g]
					growth.HeatShape(2*(mark-ends[q])/(ends[q+1]-ends[q])-1, &v)
					w, t := weight[g]*size*metres, f(mark)
					for b, d := range dof {
						if d == -2 {
							t -= v[b] * to.base
						}
					}
					for b, d := range dof {
						if d < 0 {
							continue
						}
						load.SetVec(d, load.AtVec(d)+w*v[b]*t)
						for c, o := range dof {
							if o >= d {
								mass.SetSym(d, o, mass.At(d, o)+w*v[b]*v[c])
							}
						}
					}
				}
			}
		}
	}
	var chol mat.Cholesky
	if chol.Factorize(mass) {
		_ = chol.SolveVecTo(load, load) // it says only that it is ill conditioned, which this is not
		copy(to.y, load.RawVector().Data)
	}
}

// pieces cuts [a, b] at breaks.
func pieces(a, b float64, breaks []float64) (out [][2]float64) {
	tiny := 1e-9 * (b - a)
	for _, x := range breaks {
		if x > a+tiny && x < b-tiny {
			out, a = append(out, [2]float64{a, x}), x
		}
	}
	return append(out, [2]float64{a, b})
}

// heatNodes is the Gauss rule on [0, 1] that is exact for products of two basis functions.
var heatNodes = sync.OnceValues(func() (x, w []float64) {
	x, w = make([]float64, growth.HeatDegree+2), make([]float64, growth.HeatDegree+2)
	quad.Legendre{}.FixedLocations(x, w, 0, 1)
	return x, w
})
