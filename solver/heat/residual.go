package heat

import (
	"math"

	"keelfall/column"
)

// residual is described at Steady. It uses neither the heat flows of the nodes nor
// the closed integral of H.
func (p *Profile) residual(c *column.Column) float64 {
	scale := max(math.Abs(p.SurfaceFlow), math.Abs(p.BaseFlow))
	var worst float64
	depth := c.Depth()
	above, made := p.SurfaceFlow, 0.0 // the last flow seen and the heat made since
	for i := range p.Layers {
		l, rock := &p.Layers[i], &c.Layers[i].Rock
		for j := range l.spans {
			s := &l.spans[j]
			mid := s.z + s.h/2
			T, P, slope := l.At(mid)
			k := rock.Conductivity.Value(T, P)
			scale = max(scale, k*T/depth, math.Abs(k*slope))
			made += gauss(rock.HeatProduction, s.z-l.Top, s.h/2)
			worst = max(worst, math.Abs(k*slope-(above-made)))
			above = k * slope
			made = gauss(rock.HeatProduction, mid-l.Top, s.h/2)
		}
	}
	worst = max(worst, math.Abs(p.BaseFlow-(above-made)))
	return worst / scale
}

// gauss integrates h from the depth z over the length l by three-point
// Gauss–Legendre quadrature.
func gauss(h column.HeatProduction, z, l float64) float64 {
	x := math.Sqrt(0.6) / 2
	return l * (5*h.At(z+l*(0.5-x)) + 8*h.At(z+l/2) + 5*h.At(z+l*(0.5+x))) / 18
}
