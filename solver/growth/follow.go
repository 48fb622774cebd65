package growth

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// rateAt is a leading rate at an end of a band, its distance in real part to the second
// mode, and the largest modulus of all.
type rateAt struct {
	k       float64
	rate    complex128
	gap     float64
	fastest float64
}

// follow finds the leading rate inside a band by inverse iteration from between the
// band's ends, where all eigenvalues are known. It serves the large matrices of
// diffusing temperature, and only where the leading rate stands clear of the second at
// both ends and both are real or both complex; ok is false elsewhere, and all
// eigenvalues are computed.
func (s *Solver) follow(k float64) (re, im, fastest float64, ok bool) {
	if s.c.Diffusion == nil {
		return 0, 0, 0, false
	}
	a, b := &s.ends[0], &s.ends[1]
	gap := math.Min(a.gap, b.gap)
	span := math.Hypot(real(b.rate-a.rate), imag(b.rate-a.rate))
	if k <= a.k || k >= b.k || (imag(a.rate) == 0) != (imag(b.rate) == 0) || !(gap > 0.2*span) {
		return 0, 0, 0, false
	}
	f := math.Log(k/a.k) / math.Log(b.k/a.k)
	guess := a.rate + complex(f, 0)*(b.rate-a.rate)
	if re, im, ok = s.settle(&s.mesh, k, guess); !ok || math.Hypot(re-real(guess), im-imag(guess)) > 0.5*gap {
		return 0, 0, 0, false
	}
	return re, im, math.Max(a.fastest, b.fastest), true
}

// settle converges on the eigenvalue of A(k) nearest to guess by inverse iteration; ok
// is false where it does not settle in 60 steps, and for columns without diffusing
// temperature, whose matrices are small enough for all eigenvalues.
func (s *Solver) settle(m *mesh, k float64, guess complex128) (re, im float64, ok bool) {
	if s.c.Diffusion == nil || guess == 0 {
		return 0, 0, false
	}
	s.room(m)
	s.assemble(m, k)
	n := m.states
	shift := guess * (1 + 1e-9)
	if imag(guess) == 0 {
		re, ok = settleOn(s.t[:n*n], s.a[:n*n], n, real(shift))
		return re, 0, ok
	}
	lu, perm := factorComplex(s.a[:n*n], n, shift)
	v := make([]complex128, n)
	for i := range v {
		v[i] = complex(1, float64(i%3))
	}
	last := complex(math.Inf(1), 0)
	for range 60 {
		normalise(v, n) // its largest entry, at big, becomes 1
		big := 0
		for i := range v {
			if v[i] == 1 {
				big = i
			}
		}
		solveComplex(lu, perm, v)
		q := shift + 1/v[big]
		if abs2(q-last) <= 1e-26*abs2(q) {
			return real(q), math.Abs(imag(q)), true
		}
		last = q
	}
	return 0, 0, false
}

// settleOn is the same for a real eigenvalue: lu is overwritten by the factors of
// a − shift with row exchanges.
func settleOn(lu, a []float64, n int, shift float64) (float64, bool) {
	copy(lu, a)
	perm := make([]int, n)
	for i := range n {
		lu[i*n+i] -= shift
		perm[i] = i
	}
	for c := range n {
		p := c
		for i := c + 1; i < n; i++ {
			if math.Abs(lu[i*n+c]) > math.Abs(lu[p*n+c]) {
				p = i
			}
		}
		if lu[p*n+c] == 0 {
			return shift, true // the shift is the eigenvalue
		}
		if p != c {
			for j := range n {
				lu[p*n+j], lu[c*n+j] = lu[c*n+j], lu[p*n+j]
			}
			perm[p], perm[c] = perm[c], perm[p]
		}
		pivot := lu[c*n+c+1 : (c+1)*n]
		inv := 1 / lu[c*n+c]
		for i := c + 1; i < n; i++ {
			q := lu[i*n+c] * inv
			lu[i*n+c] = q
			if q == 0 {
				continue
			}
			floats.AddScaled(lu[i*n+c+1:(i+1)*n], -q, pivot)
		}
	}
	x, b := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = 1 + 0.1*float64(i%3)
	}
	last := math.Inf(1)
	for range 60 {
		big := 0
		for i := range x {
			if math.Abs(x[i]) > math.Abs(x[big]) {
				big = i
			}
		}
		scale := 1 / x[big]
		for i, p := range perm {
			b[i] = x[p] * scale
		}
		for i := range b {
			b[i] -= floats.Dot(lu[i*n:i*n+i], b[:i])
		}
		for i := n - 1; i >= 0; i-- {
			b[i] -= floats.Dot(lu[i*n+i+1:(i+1)*n], b[i+1:])
			b[i] /= lu[i*n+i]
		}
		x, b = b, x
		q := shift + 1/x[big]
		if math.Abs(q-last) <= 1e-13*math.Abs(q) {
			return q, true
		}
		last = q
	}
	return 0, false
}
