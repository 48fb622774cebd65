package drip

import (
	"math"
	"slices"
	"sort"

	"keelfall/column"
	"keelfall/solver/growth"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// marked is the number of equal steps of a layer between whose ends its rock is marked.
const marked = 64

// marksOf returns which rock is where in a layer: at equal steps from its top to its base
// the mass, per area at time 0, that lies above in the layer or has gone from its top
// since it is there. Without a profile of heat.Evolution, a column strains alike
// everywhere, and thickness does for mass. spread is by how much the area has grown.
func marksOf(s *state.State, layer int, p *heat.Profile, spread float64) []float64 {
	top, bottom := s.Span(layer)
	m := make([]float64, marked+1)
	for q := range m {
		m[q] = (bottom - top) * float64(q) / marked * spread
	}
	if p == nil {
		return m
	}
	l := &p.Layers[layer]
	_, above, _ := l.At(top)
	for q := range m {
		_, P, _ := l.At(top + (bottom-top)*float64(q)/marked)
		m[q] = ((P-above)/s.Column.Gravity + l.Worn) * spread
	}
	return m
}

// markAt is the mark at the share x of a layer's thickness, and placeOf its inverse.
func markAt(m []float64, x float64) float64 {
	k := min(max(int(x*marked), 0), marked-1)
	return m[k] + (x*marked-float64(k))*(m[k+1]-m[k])
}

func placeOf(m []float64, mark float64) float64 {
	k := min(max(sort.SearchFloat64s(m, mark)-1, 0), marked-1)
	return (float64(k) + (mark-m[k])/(m[k+1]-m[k])) / marked
}

// drift is the share of the rock under a layer's parts that may come or go before they
// are laid out anew.
const drift = 0.02

// lay gives the layers of a node that grade their places for parts: those of the node
// before, or anew for the rock as it is now.
func (c *view) lay(n, before *node, anew bool) {
	var old layout
	if before != nil { // n itself, it may be
		old = before.lay
	}
	n.lay.cover, n.lay.parts = make([][]float64, len(n.lay.names)), make([][]float64, len(n.lay.names))
	for i, name := range n.lay.names {
		if !c.graded[name] {
			continue
		}
		l := &n.model.Layers[i]
		if l.Gradient == nil {
			l.Gradient = func(float64) float64 { return 0 }
		}
		if n.marks[i] == nil {
			n.marks[i] = n.rocks(i)
		}
		m := n.marks[i]
		var was []float64
		if j := slices.Index(old.names, name); j >= 0 {
			was = old.cover[j]
		}
		if n.lay.cover[i] = was; was == nil || anew {
			n.lay.cover[i] = covered(was, m)
		}
		top, _ := n.s.Span(i)
		h, tiny := l.Thickness, 1e-9*(m[marked]-m[0])
		ends := n.lay.cover[i]
		first, last := ends[0], ends[len(ends)-1]
		l.Place = func(z float64) float64 {
			x := markAt(m, (z-top)/h)
			if x > first-tiny && x < last+tiny {
				x = min(max(x, first), last)
			}
			return x
		}
		l.Where = func(x float64) float64 { return top + h*placeOf(m, x) }
		for _, mark := range ends { // what lies on either side moves differently
			if mark > m[0] && mark < m[marked] {
				l.Breaks = append(slices.Clone(l.Breaks), l.Where(mark))
			}
		}
		slices.Sort(l.Breaks)
	}
}

// covered is the cover of a layer with marks m that had another. Where rock came to its
// base a seam stays: what came moves with the base, which has moved unlike the rock above.
func covered(was, m []float64) []float64 {
	now := []float64{m[0], m[marked]}
	if was == nil {
		return now
	}
	seam, tiny := was[1], 1e-3*(m[marked]-m[0])
	if seam > m[0]+tiny && seam < m[marked]-tiny {
		return []float64{m[0], seam, m[marked]}
	}
	return now
}

// cut divides a cover into so many parts; finer is how many at least beyond a seam.
func cut(cover []float64, parts, finer int) []float64 {
	ends := []float64{cover[0]}
	for i := 1; i < len(cover); i++ {
		a, b := cover[i-1], cover[i]
		n := parts
		if i > 1 {
			n = max(finer, int(math.Ceil(float64(parts)*(b-a)/(cover[1]-cover[0]))))
		}
		n = min(n, 2*parts)
		for q := 1; q < n; q++ {
			ends = append(ends, a+(b-a)*float64(q)/float64(n))
		}
		ends = append(ends, b)
	}
	return ends
}

// drifted says whether the parts of a node no longer fit the rock of another, of which such
// a share may come or go.
func (c *view) drifted(from, to *node, share float64) bool {
	for i, name := range from.lay.names {
		if !c.graded[name] {
			continue
		}
		cover, m := from.lay.cover[i], to.marks[i]
		if cover == nil || m == nil {
			return true
		}
		last := cover[len(cover)-1]
		far := share * (last - cover[0])
		if math.Abs(m[0]-cover[0]) > far || math.Abs(m[marked]-last) > far {
			return true
		}
	}
	return false
}

// follow fills out with the displacements in the parts of layer j of m from those y in
// layer i of l, the same rock. Rock that came to the layer's top or base has the
// displacement of that edge, above or below. The states are those of the polynomial that
// is nearest in the mean square: taken at the Gauss points instead, small errors would
// grow with every change of parts.
func (l *layout) follow(m *layout, i, j int, y, out []float64, above, below float64) {
	was, is := l.parts[i], m.parts[j]
	var own [perPart]float64
	for q := range len(is) - 1 {
		to := out[q*perPart : (q+1)*perPart]
		clear(to)
		top, size := is[q], is[q+1]-is[q]
		for from, part := top, partOf(was, top); from < is[q+1]; part++ {
			end := is[q+1]
			if part+1 < len(was) {
				end = math.Min(end, was[part+1])
			}
			if end-from > 1e-12*size {
				for g, c := range partNodes { // exact: products of two polynomials
					x := from + (end-from)*c
					weight := (end - from) * partWeights[g] / size * inside(was, y, part, x, above, below)
					growth.AcrossPart((x-top)/size, &own)
					for a, v := range own {
						to[a] += weight * v / partWeights[a]
					}
				}
			}
			from = math.Max(from, end)
		}
	}
}

// partOf is the part that begins at the mark x or above: −1 above all, the number of
// parts below them.
func partOf(ends []float64, x float64) int {
	return sort.Search(len(ends), func(i int) bool { return ends[i] > x }) - 1
}

// inside is the displacement at a mark in a part.
func inside(ends, y []float64, part int, x, above, below float64) float64 {
	switch {
	case part < 0:
		return above
	case part > len(ends)-2:
		return below
	}
	var v [perPart]float64
	growth.AcrossPart((x-ends[part])/(ends[part+1]-ends[part]), &v)
	var sum float64
	for b, w := range v {
		sum += w * y[part*perPart+b]
	}
	return sum
}

var partNodes, partWeights = growth.PartNodes()

// breaks returns the depths in m between which a density is a smooth function of the
// place in a layer.
func breaks(d column.Density, top, thickness float64) []float64 {
	if m, ok := d.(column.Molten); ok {
		d = m.Solid
	}
	v, ok := d.(column.Varying)
	if !ok {
		return nil
	}
	out := make([]float64, len(v.Depth))
	for i, x := range v.Depth {
		out[i] = top + x*thickness
	}
	return out
}
