package growth

import (
	"slices"
	"sort"
	"sync"
)

// grading is the density gradient of a layer as a rule of integration: ∫ g ρ_c f dz is
// the sum of weight × f(z).
type grading struct {
	z, weight []float64
	place     []float64                   // of the rock there, see Layer.Place
	where     func(place float64) float64 // depth, in the layer
}

// gradeSteps is into how many steps a layer is cut at least; two Gauss points are in each.
const gradeSteps = 24

func newGrading(l *Layer, top, gravity float64) *grading {
	g := &grading{}
	edges := []float64{top}
	for _, z := range append(slices.Clone(l.Breaks), top+l.Thickness) {
		last := edges[len(edges)-1]
		if !(z > last) || z > top+l.Thickness {
			continue
		}
		n := int((z-last)/l.Thickness*gradeSteps) + 1
		for i := 1; i <= n; i++ {
			edges = append(edges, last+(z-last)*float64(i)/float64(n))
		}
	}
	const half = 0.28867513459481287 // 1/(2√3)
	for i := 1; i < len(edges); i++ {
		mid, h := (edges[i-1]+edges[i])/2, edges[i]-edges[i-1]
		for _, z := range [2]float64{mid - half*h, mid + half*h} {
			g.z = append(g.z, z)
			g.weight = append(g.weight, gravity*l.Gradient(z)*h/2)
			if l.Place != nil {
				g.place = append(g.place, l.Place(z))
			} else {
				g.place = append(g.place, (z-top)/l.Thickness)
			}
		}
	}
	g.where = func(x float64) float64 { return top + x*l.Thickness }
	if l.Where != nil {
		g.where = func(x float64) float64 { return min(max(l.Where(x), top), top+l.Thickness) }
	}
	return g
}

func (g *grading) total() float64 {
	var sum float64
	for _, w := range g.weight {
		sum += w
	}
	return sum
}

// weights are 1/Π(c_j − c_m) of the Gauss points.
var weights = sync.OnceValue(func() (w [stages]float64) {
	for j := range w {
		w[j] = 1
		for m, c := range nodeC {
			if m != j {
				w[j] /= nodeC[j] - c
			}
		}
	}
	return w
})

// partAt is the part that a place between the ends of the first and the last is in.
func partAt(ends []float64, x float64) int {
	return min(max(sort.SearchFloat64s(ends, x)-1, 0), len(ends)-2)
}

// lagrange fills v with Lagrange's polynomials of the Gauss points at x.
func lagrange(x float64, v *[stages]float64) {
	w, before := weights(), 1.0
	for j := range v {
		v[j] = before * w[j]
		before *= x - nodeC[j]
	}
	after := 1.0
	for j := stages - 1; j >= 0; j-- {
		v[j] *= after
		after *= x - nodeC[j]
	}
}

// interior is what the states inside layers exert and how they follow the flow, for one
// mesh and one division into parts: force on ports by state, and velocity of the state by
// port.
type interior struct {
	parts      [][]float64
	load, rate [][]entry
	beyond     [][]entry // force on ports of rock that moves with an interface, by interface
}

// interior fills p.inner.
func (p *Template) interior(at *ports, parts [][]float64) {
	in := &p.inner
	in.parts = slices.Clone(parts)
	in.load, in.rate = in.load[:0], in.rate[:0]
	in.beyond = make([][]entry, len(p.grade)+1)
	m := &p.t.mesh
	for first := 0; first < len(m.elems); {
		last := first
		for !m.elems[last].last {
			last++
		}
		if layer := m.elems[first].layer; p.grade[layer] != nil {
			p.fill(in, layer, parts[layer], m.elems[first:last+1], at.element[first])
		}
		first = last + 1
	}
}

// fill adds the states of one layer in parts with these ends, whose flow is on elems with their
// first port.
func (p *Template) fill(in *interior, layer int, ends []float64, elems []element, port int) {
	columns, parts := stages*len(elems), len(ends)-1
	force := make([]float64, (stages*parts+2)*columns) // of the states, and of the edges
	var own, flow [stages]float64
	e := 0
	find := func(z float64) {
		for e+1 < len(elems) && z > elems[e+1].z {
			e++
		}
		lagrange((z-elems[e].z)/elems[e].h, &flow)
	}
	exert := func(state int, weight float64) {
		row := force[state*columns+e*stages:]
		for b, w := range flow {
			row[b] -= weight * w
		}
	}
	g := p.grade[layer]
	for i, z := range g.z {
		find(z)
		switch x := g.place[i]; {
		case x < ends[0]:
			exert(stages*parts, g.weight[i])
		case x > ends[parts]:
			exert(stages*parts+1, g.weight[i])
		default:
			q := partAt(ends, x)
			lagrange((x-ends[q])/(ends[q+1]-ends[q]), &own)
			for a, v := range own {
				exert(q*stages+a, g.weight[i]*v)
			}
		}
	}
	on := func(state int) (list []entry) {
		for j, v := range force[state*columns : (state+1)*columns] {
			if v != 0 {
				list = append(list, entry{port + j, v})
			}
		}
		return list
	}
	e = 0
	for q := range parts {
		for a, c := range nodeC {
			var rate []entry
			find(g.where(ends[q] + c*(ends[q+1]-ends[q])))
			for b, v := range flow {
				if v > 1e-14 || v < -1e-14 {
					rate = append(rate, entry{port + e*stages + b, v})
				}
			}
			in.load, in.rate = append(in.load, on(q*stages+a)), append(in.rate, rate)
		}
	}
	in.beyond[layer] = append(in.beyond[layer], on(stages*parts)...)
	in.beyond[layer+1] = append(in.beyond[layer+1], on(stages*parts+1)...)
}

// couple lays out the states: interfaces, and between them what is inside the layers.
func (p *Template) couple(k float64, at *ports) *coupling {
	c, next := &coupling{}, 0
	edge := func(i int) {
		if p.t.enter(c, i, k, at); at.contact[i] >= 0 {
			c.load[c.n-1] = append(c.load[c.n-1], p.inner.beyond[i]...)
		}
	}
	edge(0)
	for i := range p.grade {
		if p.grade[i] != nil {
			for range stages * (len(p.inner.parts[i]) - 1) {
				c.add(-1-i, p.t.c.VerticalStrain, p.inner.load[next], p.inner.rate[next])
				next++
			}
		}
		edge(i + 1)
	}
	c.heat = c.n
	if p.Heated() {
		p.coupleHeat(k, at, c)
	}
	return c
}
