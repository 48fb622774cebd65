package growth

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// banded is a symmetric positive definite matrix with degree entries beside its
// diagonal, lower part: row i, column j at a[i*(degree+1) + j − i + degree].
type banded struct {
	n int
	a []float64
}

func newBanded(n int) *banded { return &banded{n, make([]float64, n*(degree+1))} }

func (b *banded) add(i, j int, v float64) { b.a[i*(degree+1)+j-i+degree] += v }

// factor replaces the matrix by its Cholesky factor.
func (b *banded) factor() {
	const w = degree + 1
	for i := range b.n {
		row := b.a[i*w : (i+1)*w]
		for j := max(0, i-degree); j <= i; j++ {
			v := row[j-i+degree]
			other := b.a[j*w : (j+1)*w]
			for m := max(0, i-degree); m < j; m++ {
				v -= row[m-i+degree] * other[m-j+degree]
			}
			if j < i {
				row[j-i+degree] = v / other[degree]
			} else {
				row[degree] = math.Sqrt(v)
			}
		}
	}
}

// solve solves for columns of x in place, row-major with cols columns.
func (b *banded) solve(x []float64, cols int) {
	const w = degree + 1
	for i := range b.n {
		xi := x[i*cols : (i+1)*cols]
		for m := max(0, i-degree); m < i; m++ {
			l := b.a[i*w+m-i+degree]
			floats.AddScaled(xi, -l, x[m*cols:(m+1)*cols])
		}
		floats.Scale(1/b.a[i*w+degree], xi)
	}
	for i := b.n - 1; i >= 0; i-- {
		xi := x[i*cols : (i+1)*cols]
		for m := i + 1; m <= min(i+degree, b.n-1); m++ {
			l := b.a[m*w+i-m+degree]
			floats.AddScaled(xi, -l, x[m*cols:(m+1)*cols])
		}
		floats.Scale(1/b.a[i*w+degree], xi)
	}
}
