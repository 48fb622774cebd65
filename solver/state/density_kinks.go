package state

import (
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
)

// kinked is a density whose derivative by temperature jumps at some temperatures and
// whose slope jumps at some pressures: a table.
type kinked interface {
	Kinks() (kelvin, pascal []float64)
}

// apart is how close, relative to the layer, two kinks or a kink and the layer's edge
// may come: what is closer is one.
const apart = 1e-6

// kinks returns the depths inside a layer, increasing, at which quadrature has to stop:
// those of a given geotherm, and where the column passes a kink of the density. Without
// them the growth solver's elements straddle jumps of ∂ρ/∂T, and its rates are off by
// a per cent where its own estimate, which knows smooth layers, says 1e-11.
func kinks(h *heat.Layer, d column.Density) []float64 {
	k, ok := d.(kinked)
	if !ok {
		return h.Kinks
	}
	all := slices.Clone(h.Kinks)
	kelvin, pascal := k.Kinks()
	for j := 1; j < len(h.Nodes); j++ {
		a, b := h.Nodes[j-1], h.Nodes[j]
		for _, T := range kelvin {
			if (a.T < T) != (b.T < T) {
				all = append(all, bisect(a.Depth, b.Depth, func(z float64) bool { t, _, _ := h.At(z); return (t < T) == (a.T < T) }))
			}
		}
		for _, P := range pascal {
			if (a.P < P) != (b.P < P) {
				all = append(all, bisect(a.Depth, b.Depth, func(z float64) bool { _, p, _ := h.At(z); return (p < P) == (a.P < P) }))
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
