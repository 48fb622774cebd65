package heat

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// TestTridiagonal: the matrix times the solution is the right-hand side again, for the
// system itself and for a second one with the same elimination.
func TestTridiagonal(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for n := 1; n < 40; n++ {
		lo, di, up := make([]float64, n), make([]float64, n), make([]float64, n)
		first, second, x := make([]float64, n), make([]float64, n), make([]float64, n)
		for i := range n {
			lo[i], up[i] = -r.Float64(), -r.Float64()
			di[i] = 0.1 - lo[i] - up[i]
			first[i], second[i] = r.NormFloat64(), r.NormFloat64()
		}
		lo[0], up[n-1] = 0, 0
		check := func(rhs []float64) {
			for i := range n {
				sum := di[i] * x[i]
				if i > 0 {
					sum += lo[i] * x[i-1]
				}
				if i+1 < n {
					sum += up[i] * x[i+1]
				}
				if math.Abs(sum-rhs[i]) > 1e-13*(1+math.Abs(rhs[i])) {
					t.Fatalf("%d rows: row %d gives %g, want %g", n, i, sum, rhs[i])
				}
			}
		}
		l, d, u := slices.Clone(lo), slices.Clone(di), slices.Clone(up)
		thomas(l, d, u, first, x)
		check(first)
		again(l, d, u, second, x)
		check(second)
	}
}
