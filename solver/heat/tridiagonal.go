package heat

// thomas solves a tridiagonal system and leaves its elimination for another. It goes from
// both ends to the row in the middle, so that one chain of divisions need not wait for
// the other: di holds 1/pivot after it, up above the middle and lo below it the multipliers.
func thomas(lo, di, up, rhs, x []float64) {
	n := len(di)
	lo, up, rhs, x = lo[:n], up[:n], rhs[:n], x[:n]
	m := n / 2
	var u, y, l, z float64 // of the rows above and below
	for i, j := 0, n-1; i < m; i, j = i+1, j-1 {
		inv := 1 / (di[i] - lo[i]*u)
		y = (rhs[i] - lo[i]*y) * inv
		u = up[i] * inv
		di[i], up[i], x[i] = inv, u, y
		if j > m {
			inv := 1 / (di[j] - up[j]*l)
			z = (rhs[j] - up[j]*z) * inv
			l = lo[j] * inv
			di[j], lo[j], x[j] = inv, l, z
		}
	}
	inv := 1 / (di[m] - lo[m]*u - up[m]*l)
	di[m], x[m] = inv, (rhs[m]-lo[m]*y-up[m]*z)*inv
	back(lo, up, x, m)
}

// again solves with the elimination of thomas.
func again(lo, inv, up, rhs, x []float64) {
	n := len(inv)
	lo, up, rhs, x = lo[:n], up[:n], rhs[:n], x[:n]
	m := n / 2
	var y, z float64
	for i, j := 0, n-1; i < m; i, j = i+1, j-1 {
		y = (rhs[i] - lo[i]*y) * inv[i]
		x[i] = y
		if j > m {
			z = (rhs[j] - up[j]*z) * inv[j]
			x[j] = z
		}
	}
	x[m] = (rhs[m] - lo[m]*y - up[m]*z) * inv[m]
	back(lo, up, x, m)
}

// back substitutes from the middle row outwards.
func back(lo, up, x []float64, m int) {
	n := len(x)
	u, d := x[m], x[m]
	for i, j := m-1, m+1; i >= 0; i, j = i-1, j+1 {
		u = x[i] - up[i]*u
		x[i] = u
		if j < n {
			d = x[j] - lo[j]*d
			x[j] = d
		}
	}
}
