package growth

import (
	"fmt"
	"math"
	"sort"
)

// HeatDegree is the degree of the polynomials that carry T' on each element.
const HeatDegree = degree

// HeatShape fills v with the basis of T' on an element at s, −1 at its top and 1 at its
// base: two linear functions, then integrated Legendre polynomials.
func HeatShape(s float64, v *[HeatDegree + 1]float64) {
	var dv [degree + 1]float64
	shape(s, 1, v, &dv)
}

// Heated says whether temperature is perturbed: the states of Matrix are then followed by
// those of T', on the elements of PlaceHeat.
func (p *Template) Heated() bool { return p.t.c.Diffusion != nil }

// HeatElements returns how many elements T' needs at a wavelength in m in each layer; over
// a half-space a last number counts those below the column.
func (p *Template) HeatElements(wavelength float64) []int {
	k := 2 * math.Pi / wavelength
	var n []int
	for i := range p.grade {
		if p.t.below && i == len(p.grade)-1 {
			n = append(n, len(p.Below())-1)
			continue
		}
		length := p.t.heatLength(&mesh{high: k}, i)
		n = append(n, max(1, int(math.Round(p.t.c.Layers[i].Thickness/length))))
	}
	return n
}

// belowEnds are the ends of the elements below the column, in shares of the depth of
// 8/k that they reach.
var belowEnds = []float64{0, 0.02, 0.08, 0.3, 1}

// Below returns the ends of the elements that T' has below the column, in shares of 8/k;
// nil but over a half-space.
func (p *Template) Below() []float64 {
	if !p.t.below {
		return nil
	}
	return belowEnds
}

// HeatDofs returns which state of T' weighs each function of the basis on so many
// elements, from the surface down, and how many states there are; −1: held at zero, −2:
// tied to the inviscid base that T' = −ξ dT₀/dz there.
func (p *Template) HeatDofs(elements int) (dof [][HeatDegree + 1]int, n int) {
	es := make([]heatElement, elements)
	n = p.t.number(es)
	for i := range es {
		dof = append(dof, es[i].dof)
	}
	return dof, n
}

// BaseGradient is dT₀/dz just above an inviscid base, K/m.
func (p *Template) BaseGradient() float64 { return p.t.c.Diffusion.BaseGradient }

// PlaceHeat says on which elements the states of T' are, until the next call: the depths
// of the ends of those in each layer, in m and increasing; over a half-space a last list
// has those below the column. They need not fit the flow's mesh.
func (p *Template) PlaceHeat(ends [][]float64) error {
	if !p.Heated() {
		return fmt.Errorf("growth: elements for heat in a column whose temperature is not perturbed")
	}
	if len(ends) != len(p.grade) {
		return fmt.Errorf("growth: elements for heat of %d layers; there are %d, any half-space included", len(ends), len(p.grade))
	}
	p.warm = p.warm[:0]
	for i, list := range ends {
		for q := 1; q < len(list); q++ {
			if !(list[q] > list[q-1]) {
				return fmt.Errorf("growth: an element for heat from %g to %g m", list[q-1], list[q])
			}
			p.warm = append(p.warm, heatElement{z: list[q-1], h: list[q] - list[q-1], layer: i})
		}
		if len(list) < 2 {
			return fmt.Errorf("growth: layer %d has no element for heat", i)
		}
	}
	p.warmStates = p.t.number(p.warm)
	return nil
}

// coupleHeat adds the coefficients of T' on the elements that were placed.
func (p *Template) coupleHeat(k float64, at *ports, c *coupling) {
	p.t.coupleOn(p.warm, p.warmStates, k, at, c, func(work, load [][]entry, tied *[]entry) {
		elems := p.t.mesh.elems
		for i := range p.warm {
			p.weigh(&p.warm[i], elems, at, work, load, tied)
		}
	})
}

// weigh enters one element of heat. Its weight and what the flow carries into it are
// integrals over the stretches that it shares with the flow's elements, whose velocity is
// the polynomial through its Gauss points: T' may have kinks inside those.
func (p *Template) weigh(e *heatElement, elems []element, at *ports, work, load [][]entry, tied *[]entry) {
	th := &p.t.c.Diffusion.Layers[e.layer]
	x, w := heatQuadrature()
	var v, dv [degree + 1]float64
	var flow [stages]float64
	first := sort.Search(len(elems), func(i int) bool { return elems[i].z+elems[i].h > e.z*(1+1e-12) })
	for j := first; j < len(elems) && elems[j].z < e.z+e.h; j++ {
		f := &elems[j]
		from, to := math.Max(e.z, f.z), math.Min(e.z+e.h, f.z+f.h)
		if !(to-from > 1e-9*e.h) || f.layer != e.layer {
			continue
		}
		var heavy, carried [degree + 1][stages]float64
		for q := range x {
			z := from + (to-from)*x[q]
			shape(2*(z-e.z)/e.h-1, e.h, &v, &dv)
			lagrange((z-f.z)/f.h, &flow)
			weight := p.t.c.Gravity * th.PerKelvin(z) * (to - from) * w[q]
			carry := th.Capacity(z) * th.Excess(z) * (to - from) * w[q]
			for a := range v {
				for b, l := range flow {
					heavy[a][b] += weight * v[a] * l
					carried[a][b] += carry * v[a] * l
				}
			}
		}
		for a, d := range e.dof {
			for b := range flow {
				port := at.element[j] + b
				if d >= 0 {
					load[d], work[d] = append(load[d], entry{port, heavy[a][b]}), append(work[d], entry{port, carried[a][b]})
				} else if d == -2 {
					*tied = append(*tied, entry{port, heavy[a][b]})
				}
			}
		}
	}
}
