package heat

// thomas solves a tridiagonal system and leaves its elimination for another.
func thomas(lo, di, up, rhs, x []float64) {
	n := len(di)
	lo, up, rhs, x = lo[:n], up[:n], rhs[:n], x[:n]
	inv := 1 / di[0]
	di[0] = inv
	u, y := up[0]*inv, rhs[0]*inv
	up[0], x[0] = u, y
	for i := 1; i < n; i++ {
		inv = 1 / (di[i] - lo[i]*u)
		y = (rhs[i] - lo[i]*y) * inv
		u = up[i] * inv
		di[i], up[i], x[i] = inv, u, y
	}
	for i := n - 2; i >= 0; i-- {
		x[i] -= up[i] * x[i+1]
	}
}

// again solves with the elimination of thomas.
func again(lo, inv, up, rhs, x []float64) {
	n := len(inv)
	lo, up, rhs, x = lo[:n], up[:n], rhs[:n], x[:n]
	y := rhs[0] * inv[0]
	x[0] = y
	for i := 1; i < n; i++ {
		y = (rhs[i] - lo[i]*y) * inv[i]
		x[i] = y
	}
	for i := n - 2; i >= 0; i-- {
		x[i] -= up[i] * x[i+1]
	}
}
