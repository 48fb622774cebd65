package column

import (
	"fmt"
	"slices"
	"sort"
)

// Varying is a density whose rock is not where it was in its layer, or has not reacted
// by the same share everywhere: Of at the places and reacted shares given by depth.
// Between the depths both are monotone cubics with continuous slopes (Fritsch & Butland
// 1984, SIAM J. Sci. Stat. Comput. 5); beyond the first and last they stay.
type Varying struct {
	Of     Density
	Depth  []float64 // relative depths in the layer now, 0 to 1, increasing
	Place  []float64 // relative depth x that the rock there had in Of's layer
	Extent []float64 // reacted share X there; nil where Of is no Reaction
}

// at returns the place, the reacted share and their slopes by relative depth.
func (v Varying) at(x float64) (place, extent, dPlace, dExtent float64) {
	i := sort.SearchFloat64s(v.Depth, x)
	place, dPlace = v.curve(v.Place, i, x)
	if v.Extent != nil {
		extent, dExtent = v.curve(v.Extent, i, x)
	}
	return place, extent, dPlace, dExtent
}

// curve is the cubic through y at x, the depth before i lying above it.
func (v Varying) curve(y []float64, i int, x float64) (value, slope float64) {
	n := len(v.Depth)
	if i == 0 || i == n {
		return y[min(i, n-1)], 0
	}
	h := v.Depth[i] - v.Depth[i-1]
	s, d := (x-v.Depth[i-1])/h, y[i]-y[i-1]
	a, b := h*v.slope(y, i-1), h*v.slope(y, i)
	value = y[i-1] + s*(a+s*(3*d-2*a-b+s*(a+b-2*d)))
	return value, (a + s*(2*(3*d-2*a-b)+3*s*(a+b-2*d))) / h
}

// slope of y at the depth i: the weighted harmonic mean of the secants beside it, 0 where
// they differ in sign; the secant at the ends.
func (v Varying) slope(y []float64, i int) float64 {
	secant := func(j int) float64 { return (y[j+1] - y[j]) / (v.Depth[j+1] - v.Depth[j]) }
	switch n := len(v.Depth); i {
	case 0:
		return secant(0)
	case n - 1:
		return secant(n - 2)
	}
	a, b := secant(i-1), secant(i)
	if a*b <= 0 {
		return 0
	}
	h0, h1 := v.Depth[i]-v.Depth[i-1], v.Depth[i+1]-v.Depth[i]
	return 3 * (h0 + h1) / ((2*h1+h0)/a + (h1+2*h0)/b)
}

// Here returns the rock x of the way down the layer as one rock, a Reaction with the
// reacted share there, and the place x to ask it at.
func (v Varying) Here(x float64) (Density, float64) {
	place, extent, _, _ := v.at(x)
	if r, ok := v.Of.(Reaction); ok {
		return r.WithExtent(extent), place
	}
	return v.Of, place
}

// At returns the density in kg/m³ at T in K and P in Pa, x of the way down the layer.
func (v Varying) At(T, P, x float64) float64 {
	place, extent, _, _ := v.at(x)
	if r, ok := v.Of.(Reaction); ok {
		return r.AtExtent(T, P, place, extent)
	}
	return v.Of.At(T, P, place)
}

// PerKelvin returns (∂ρ/∂T)_P in kg/m³/K, X held.
func (v Varying) PerKelvin(T, P, x float64) float64 {
	d, place := v.Here(x)
	return d.PerKelvin(T, P, place)
}

// PerPascal returns (∂ρ/∂P)_T in kg/m³/Pa, X held.
func (v Varying) PerPascal(T, P, x float64) float64 {
	d, place := v.Here(x)
	return d.PerPascal(T, P, place)
}

// Gradient returns Of's compositional gradient where the rock is now and what the
// change of X with depth adds: (∂ρ/∂X) dX/dx, with ∂ρ/∂X = −ρ²(1/ρ_B − 1/ρ_A).
func (v Varying) Gradient(T, P, x float64) float64 {
	_, _, dPlace, dExtent := v.at(x)
	d, place := v.Here(x)
	out := d.Gradient(T, P, place) * dPlace
	if r, ok := v.Of.(Reaction); ok && dExtent != 0 {
		rho := d.At(T, P, place)
		out -= rho * rho * (1/r.Product.At(T, P, place) - 1/r.Protolith.At(T, P, place)) * dExtent
	}
	return out
}

// NeedsTemperature says whether Of's does.
func (v Varying) NeedsTemperature() bool { return v.Of.NeedsTemperature() }

// Covers returns the error of Of asked outside its range: of a Reaction, of every part
// that is there anywhere.
func (v Varying) Covers(T, P float64) error {
	if r, ok := v.Of.(Reaction); ok {
		least, most := slices.Min(v.Extent), slices.Max(v.Extent)
		if err := r.WithExtent(most).Covers(T, P); err != nil || most < 1 {
			return err
		}
		return r.WithExtent(least).Covers(T, P)
	}
	return Covered(v.Of, T, P)
}

// Kinks are those of Of.
func (v Varying) Kinks() []Kink { return Kinks(v.Of) }

// Validate returns what makes it unusable: depths that do not increase, lists of different
// lengths, a Reaction without reacted shares, and what makes Of unusable.
func (v Varying) Validate() error {
	n := len(v.Depth)
	_, reacts := v.Of.(Reaction)
	if n == 0 || len(v.Place) != n || reacts && len(v.Extent) != n || !reacts && v.Extent != nil {
		return fmt.Errorf("density by depth: %d depths, %d places, %d reacted shares", n, len(v.Place), len(v.Extent))
	}
	for i := range v.Depth {
		if i > 0 && !(v.Depth[i] > v.Depth[i-1]) || !finite(v.Depth[i], v.Place[i]) || reacts && !(v.Extent[i] >= 0 && v.Extent[i] <= 1) {
			return fmt.Errorf("density by depth: point %d is not below the one before it, or has no place or reacted share", i+1)
		}
	}
	return validDensity(v.Of)
}

// Cautions are those of Of, a Reaction's with the reacted shares there are.
func (v Varying) Cautions() []string {
	if r, ok := v.Of.(Reaction); ok {
		return r.cautions(fmt.Sprintf("%.3g to %.3g of the mass by depth", slices.Min(v.Extent), slices.Max(v.Extent)))
	}
	return densityCautions(v.Of)
}

var _ Ranged = Varying{}
