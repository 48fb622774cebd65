package checks

import "gonum.org/v1/gonum/integrate/quad"

// gauss returns Gauss–Legendre nodes and weights on [0, 1].
func gauss(n int) (x, w []float64) {
	x, w = make([]float64, n), make([]float64, n)
	quad.Legendre{}.FixedLocations(x, w, 0, 1)
	return x, w
}
