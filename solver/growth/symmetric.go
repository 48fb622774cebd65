package growth

import "math"

// leadingReal returns the largest eigenvalue of A(k) where nothing strains the column,
// and a bound on the modulus of all. There A = e_z + C F, with the compliance C
// symmetric and positive and F the diagonal of forces, so every eigenvalue is real and
// A is similar to a symmetric matrix:
//
//	B = |F|^½ C |F|^½ = L Lᵀ,   A − e_z ~ B sign F ~ Lᵀ (sign F) L.
//
// That is brought to tridiagonal form (Householder), and its largest eigenvalue found
// by Laguerre's iteration from an upper bound, which converges monotonically because
// all roots are real (Wilkinson 1965, The Algebraic Eigenvalue Problem, from memory;
// tested against the general routine). It overwrites s.a.
func (s *Solver) leadingReal(n int) (lead, bound float64, ok bool) {
	a := s.a[:n*n]
	ez := s.c.VerticalStrain
	// B, lower triangle, in place: A_ij = C_ij f_j
	size, sign := s.re[:n], s.im[:n]
	for i := range size {
		f := s.loads[i].buoyancy
		size[i], sign[i] = math.Sqrt(math.Abs(f)), 1
		if f < 0 {
			sign[i] = -1
		}
	}
	var big float64
	for i := 0; i < n; i++ {
		a[i*n+i] -= ez
		for j := 0; j <= i; j++ {
			a[i*n+j] *= sign[j] * size[i] / size[j]
		}
		big = math.Max(big, a[i*n+i])
	}
	if !(big > 0) || math.IsInf(big, 0) {
		return 0, 0, false
	}
	least := float64(n) * 0x1p-52 * big // a pivot below is rounding
	for j := 0; j < n; j++ {
		rj := a[j*n : j*n+j+1]
		d := rj[j]
		for _, v := range rj[:j] {
			d -= v * v
		}
		if math.IsNaN(d) {
			return 0, 0, false
		}
		inv := 1 / math.Sqrt(math.Max(d, least))
		rj[j] = math.Max(d, least) * inv
		for i := j + 1; i < n; i++ {
			ri := a[i*n : i*n+j+1]
			v := ri[j]
			for m, w := range rj[:j] {
				v -= ri[m] * w
			}
			ri[j] = v * inv
		}
	}
	// T = Lᵀ sign L, lower triangle, over B: entry (i, j <= i) needs L_mi, L_mj, m >= i
	for i := 0; i < n; i++ {
		for j := 0; j <= i; j++ {
			var v float64
			for m := i; m < n; m++ {
				v += sign[m] * a[m*n+i] * a[m*n+j]
			}
			s.t[i*n+j] = v
		}
	}
	tridiagonal(s.t[:n*n], n, s.re, s.im)
	lead, bound = largest(s.re[:n], s.im[:n])
	return lead + ez, bound + math.Abs(ez), true
}

// tridiagonal reduces a symmetric matrix, its lower triangle given, to diagonal d and
// squared off-diagonal e (e[i] beside d[i] and d[i−1]; e[0] = 0) by Householder
// reflections from the last row up. a and d, e are overwritten.
func tridiagonal(a []float64, n int, d, e []float64) {
	for i := n - 1; i >= 1; i-- {
		row := a[i*n : i*n+i]
		d[i] = a[i*n+i]
		var tail float64
		for _, v := range row[:i-1] {
			tail += v * v
		}
		x := row[i-1]
		if tail == 0 {
			e[i] = x * x
			continue
		}
		sum := tail + x*x
		e[i] = sum
		g := math.Copysign(math.Sqrt(sum), x)
		row[i-1] = x + g
		h := sum + x*g // |u|²/2
		// p = A u/h, q = p − (uᵀp/2h) u, A ← A − u qᵀ − q uᵀ; p is kept in d[:i]
		var k float64
		for j := 0; j < i; j++ {
			var v float64
			for m := 0; m <= j; m++ {
				v += a[j*n+m] * row[m]
			}
			for m := j + 1; m < i; m++ {
				v += a[m*n+j] * row[m]
			}
			d[j] = v / h
			k += d[j] * row[j]
		}
		k /= 2 * h
		for j := 0; j < i; j++ {
			d[j] -= k * row[j]
		}
		for j := 0; j < i; j++ {
			u, q := row[j], d[j]
			for m := 0; m <= j; m++ {
				a[j*n+m] -= u*d[m] + q*row[m]
			}
		}
	}
	d[0], e[0] = a[0], 0
}

// largest returns the largest eigenvalue of a symmetric tridiagonal matrix of diagonal
// d and squared off-diagonal e, and a bound on the modulus of all.
func largest(d, e []float64) (x, bound float64) {
	n := float64(len(d))
	x = math.Inf(-1)
	prev := 0.0
	for i := range d { // Gershgorin
		next := 0.0
		if i+1 < len(d) {
			next = math.Sqrt(e[i+1])
		}
		x = math.Max(x, d[i]+prev+next)
		bound = math.Max(bound, math.Abs(d[i])+prev+next)
		prev = next
	}
	for range 80 {
		// the pivots p_i of x − T are positive above the largest root; r = Σ p'/p and
		// c = Σ (p'/p)² − p''/p are minus the first and second derivative of ln det
		inv, w, u := 1.0, 0.0, 0.0 // 1/p, p'/p and p''/p of the row before
		var r, c float64
		for i := range d {
			q := e[i] * inv
			p := x - d[i] - q
			if !(p > 0) {
				return x, bound
			}
			dp, ddp := 1+q*w, q*(u-2*w*w)
			inv = 1 / p
			w, u = dp*inv, ddp*inv
			r += w
			c += w*w - u
		}
		step := n / (r + math.Sqrt(math.Max(0, (n-1)*(n*c-r*r))))
		if y := x - step; y != x && step > 0x1p-53*math.Abs(x) {
			x = y
		} else {
			return x, bound
		}
	}
	return x, bound
}
