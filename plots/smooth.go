package plots

import (
	"cmp"
	"slices"
)

// sortedBy returns the order of indices that makes xs increase, equal values as they
// stood.
func sortedBy(xs []float64) []int {
	order := make([]int, len(xs))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(xs[a], xs[b]) })
	return order
}

// smooth draws a smooth curve through points by increasing x: a cubic between
// neighbours with the slopes of the parabola through three. The curve may break its
// slope where an x stands twice, as at a contact.
func smooth(x, y []float64) (fineX, fineY []float64) {
	const parts = 6
	for from := 0; from < len(x); {
		to := from
		for to+1 < len(x) && x[to+1] > x[to] {
			to++
		}
		slope := slopes(x[from:to+1], y[from:to+1])
		for i := from; i < to; i++ {
			h := x[i+1] - x[i]
			for j := range parts {
				t := float64(j) / parts
				a, b := (1+2*t)*(1-t)*(1-t), t*t*(3-2*t)
				c, d := t*(1-t)*(1-t), t*t*(t-1)
				fineX = append(fineX, x[i]+t*h)
				fineY = append(fineY, a*y[i]+b*y[i+1]+h*(c*slope[i-from]+d*slope[i+1-from]))
			}
		}
		fineX, fineY = append(fineX, x[to]), append(fineY, y[to])
		from = to + 1
	}
	return fineX, fineY
}

// slopes are those of the parabola through each point and its neighbours, or the two
// nearest at the ends.
func slopes(x, y []float64) []float64 {
	n := len(x)
	out := make([]float64, n)
	if n < 2 {
		return out
	}
	chord := func(i int) float64 { return (y[i+1] - y[i]) / (x[i+1] - x[i]) }
	if n == 2 {
		out[0], out[1] = chord(0), chord(0)
		return out
	}
	for i := 1; i < n-1; i++ {
		before, after := x[i]-x[i-1], x[i+1]-x[i]
		out[i] = (chord(i-1)*after + chord(i)*before) / (before + after)
	}
	out[0] = 2*chord(0) - out[1]
	out[n-1] = 2*chord(n-2) - out[n-2]
	return out
}
