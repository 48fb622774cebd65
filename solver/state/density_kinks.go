package state

import (
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
)

// apart is how close, relative to the layer, two kinks or a kink and the layer's edge
// may come: what is closer is one.
const apart = 1e-6

// kinks returns the depths inside a layer, increasing, at which quadrature has to stop:
// those of a given geotherm, and where the column passes a kink of the density or, for
// what melt does to viscosity, the solidus and liquidus. Without them the growth solver's
// elements straddle jumps of ∂ρ/∂T, and its rates are off by a per cent where its own
// estimate, which knows smooth layers, says 1e-11. A column that passes a kink and comes
// back between two nodes, 250 m apart at most, is taken not to pass it.
func kinks(h *heat.Layer, r *column.Rock) []float64 {
	functions := append(column.Kinks(r.Density), r.Melt.Kinks()...)
	if len(functions) == 0 {
		return h.Kinks
	}
	all := slices.Clone(h.Kinks)
	for _, f := range functions {
		for j := 1; j < len(h.Nodes); j++ {
			a, b := h.Nodes[j-1], h.Nodes[j]
			if below := f(a.T, a.P) < 0; (f(b.T, b.P) < 0) != below {
				all = append(all, bisect(a.Depth, b.Depth, func(z float64) bool { T, P, _ := h.At(z); return (f(T, P) < 0) == below }))
			}
		}
	}
	slices.Sort(all)
	slack := apart * (h.Bottom - h.Top)
	last := h.Top
	return slices.DeleteFunc(all, func(z float64) bool {
		if z-last <= slack || h.Bottom-z <= slack {
			return true
		}
		last = z
		return false
	})
}

// bisect returns where between a and b, to round-off, it stops being true.
func bisect(a, b float64, holds func(float64) bool) float64 {
	for range 64 {
		mid := a + (b-a)/2
		if mid == a || mid == b {
			break
		}
		if holds(mid) {
			a = mid
		} else {
			b = mid
		}
	}
	return b
}
