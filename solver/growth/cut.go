package growth

import (
	"fmt"
	"math"
)

// Cut is a column whose gradients have become contacts at a few depths: what follows
// displacements of contacts alone can follow those inside layers.
type Cut struct {
	Column  *Column
	Layer   []int // of the column that was cut, for each layer of Column and the half-space
	Contact []int // of Column, for each interface of the column that was cut
}

// thinnest is the least thickness of a layer that is cut out, of the whole layer's.
const thinnest = 1e-4

// Cut returns the column with every layer that has a gradient cut at the Gauss points of
// its parts (as for Template.Matrix; an end of a part is a place of Layer.Place). The
// contacts there move like the states of a Template and have
//
//	[ρ]_j = ∫ ρ_c ℓ_j dz
//
// with ℓ_j Lagrange's polynomials of the points: a displacement is carried, and its weight
// felt, as that of the polynomial through the points. With one part of eight points a rate
// is within 3e-3, where viscosity changes by less than 4.5 e-foldings over the layer, and a drip time much nearer (tested). The viscosity stays as it is. Rock
// beyond the parts moves with the edge it came to. c is not modified.
func (c *Column) Cut(parts [][]float64) (*Cut, error) {
	if err := c.check(); err != nil {
		return nil, err
	}
	own := *c
	own.Layers, own.Jumps = nil, []float64{c.Jumps[0]}
	cut := &Cut{Column: &own, Contact: []int{0}}
	var top float64
	for i := range c.Layers {
		l := c.Layers[i]
		bottom, beyond := top+l.Thickness, 0.0
		if l.Gradient != nil {
			if len(parts) != len(c.Layers) || len(parts[i]) < 2 {
				return nil, fmt.Errorf("growth: layer %d has a gradient and no parts", i)
			}
			g := newGrading(&l, top, 1)
			if !finite(g.total()) {
				return nil, fmt.Errorf("growth: layer %d: a density gradient is not finite", i)
			}
			jumps, above, below := g.lump(parts[i])
			own.Jumps[len(own.Jumps)-1] += above
			beyond = below
			depths := g.depths(parts[i], top, l.Thickness)
			l.Gradient, l.HeatGradient, l.Breaks, l.Place, l.Where = nil, false, nil, nil, nil
			for j, z := range depths {
				l.Thickness = z - top
				own.Layers, own.Jumps = append(own.Layers, l), append(own.Jumps, jumps[j])
				cut.Layer = append(cut.Layer, i)
				top = z
			}
			l.Thickness = bottom - top
		}
		own.Layers, own.Jumps = append(own.Layers, l), append(own.Jumps, c.Jumps[i+1]+beyond)
		cut.Layer = append(cut.Layer, i)
		cut.Contact = append(cut.Contact, len(own.Layers))
		top = bottom
	}
	cut.Layer = append(cut.Layer, len(c.Layers))
	return cut, nil
}

// lump returns the weight of each Gauss point of the parts, and of what lies above and
// below them all.
func (g *grading) lump(ends []float64) (points []float64, above, below float64) {
	n := len(ends) - 1
	points = make([]float64, stages*n)
	var v [stages]float64
	for i, x := range g.place {
		switch {
		case x < ends[0]:
			above += g.weight[i]
		case x > ends[n]:
			below += g.weight[i]
		default:
			q := partAt(ends, x)
			lagrange((x-ends[q])/(ends[q+1]-ends[q]), &v)
			for a, w := range v {
				points[q*stages+a] += w * g.weight[i]
			}
		}
	}
	return points, above, below
}

// depths returns where the Gauss points of the parts are in a layer. Those whose rock has
// gone from it crowd at its edge, a little apart.
func (g *grading) depths(ends []float64, top, thickness float64) []float64 {
	var z []float64
	for q := range len(ends) - 1 {
		for _, c := range nodeC {
			z = append(z, g.where(ends[q]+c*(ends[q+1]-ends[q])))
		}
	}
	first := top
	apart := math.Min(thinnest, 0.5/float64(len(z)+1)) * thickness
	for i := range z {
		z[i] = math.Max(z[i], top+apart)
		top = z[i]
	}
	bottom := first + thickness
	for i := len(z) - 1; i >= 0; i-- {
		z[i] = math.Min(z[i], bottom-apart)
		bottom = z[i]
	}
	return z
}
