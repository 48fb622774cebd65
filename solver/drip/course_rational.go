package drip

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/mat"
)

// A step of many states is R(h A/m)^m with the restricted Padé approximant
//
//	R(z) = (p₀ + p₁ z + … + p₇ z⁷)/(1 − γz)⁸ = r₁ w + … + r₈ w⁸,   w = 1/(1 − γz),
//
// of eighth order: one real matrix is factored, and used eight times a step. Eigenvectors
// are kept whatever their rates are; γ = 0.2343731596 makes it L-stable, so that a fast
// surface follows. Off by 9e-9 of e^z at z = 1/2 and 9e-6 at 1, by 8e-12 at −1/4 (computed
// from the formula; TestRational). Source: Nørsett; Hairer & Wanner 1991, Solving Ordinary
// Differential Equations II, IV.6 (from memory); γ solved for here.
const order = 8

// mostGrowth is the largest z of a growing mode in one step.
const mostGrowth = 0.5

// rationalSteps returns the number of steps that e^growth takes.
func rationalSteps(growth float64) int {
	return max(1, int(math.Ceil(math.Min(growth/mostGrowth, 1e6))))
}

// restricted returns γ and r.
var restricted = sync.OnceValues(func() (gamma float64, r [order + 1]float64) {
	factorial := func(n int) float64 { return math.Gamma(float64(n + 1)) }
	choose := func(n, k int) float64 { return factorial(n) / factorial(k) / factorial(n-k) }
	// coefficient of z^i in (1 − γz)⁸ e^z
	p := func(i int, g float64) float64 {
		var sum float64
		for l := 0; l <= i; l++ {
			sum += choose(order, l) * math.Pow(-g, float64(l)) / factorial(i-l)
		}
		return sum
	}
	lo, hi := 0.23, 0.24 // that of z⁸ is zero here
	for range 60 {
		if mid := (lo + hi) / 2; p(order, mid)*p(order, lo) > 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	gamma = (lo + hi) / 2
	for i := range order { // z = (w − 1)/(γw): z^i w⁸ = (w − 1)^i w^(8 − i)/γ^i
		c := p(i, gamma) / math.Pow(gamma, float64(i))
		for j := 0; j <= i; j++ {
			r[order-i+j] += c * choose(i, j) * math.Pow(-1, float64(i-j))
		}
	}
	return gamma, r
})

// rational factors 1 − γ h A/m, with row exchanges.
func (s *stepper) rational(b []float64) {
	n := s.n
	gamma, _ := restricted()
	f := -gamma / float64(s.steps)
	for i := range b {
		b[i] *= f
	}
	for i := range n {
		b[i*n+i]++
		s.row[i] = i
	}
	for c := range n {
		p := c
		for i := c + 1; i < n; i++ {
			if math.Abs(b[i*n+c]) > math.Abs(b[p*n+c]) {
				p = i
			}
		}
		top := b[c*n : c*n+n]
		if p != c {
			s.row[c], s.row[p] = s.row[p], s.row[c]
			for j, v := range b[p*n : p*n+n] {
				b[p*n+j], top[j] = top[j], v
			}
		}
		inv := 1 / top[c]
		for i := c + 1; i < n; i++ {
			row := b[i*n : i*n+n]
			f := row[c] * inv
			row[c] = f
			if f != 0 {
				axpy(row[c+1:], -f, top[c+1:])
			}
		}
	}
}

// axpy adds f x to y.
func axpy(y []float64, f float64, x []float64) {
	y = y[:len(x)]
	for i, v := range x {
		y[i] += f * v
	}
}

// resolve replaces x by (1 − γ h A/m)⁻¹ x.
func (s *stepper) resolve(x []float64) {
	n, r := s.n, s.r[:s.n]
	for i, p := range s.row[:n] {
		sum := x[p]
		for j, v := range s.b[i*n : i*n+i] {
			sum -= v * r[j]
		}
		r[i] = sum
	}
	for i := n - 1; i >= 0; i-- {
		sum := r[i]
		for j, v := range s.b[i*n+i+1 : i*n+n] {
			sum -= v * x[i+1+j]
		}
		x[i] = sum / s.b[i*n+i]
	}
}

// rationalApply is apply.
func (s *stepper) rationalApply(out, y []float64) (log float64) {
	_, r := restricted()
	x := s.x[:s.n]
	copy(x, y)
	for range s.steps {
		for j := 1; j <= order; j++ {
			s.resolve(x)
			if j == 1 {
				clear(out)
			}
			axpy(out, r[j], x)
		}
		log += normalise(out)
		copy(x, out)
	}
	return log
}

// boundEvery is the number of pairs after which the growth rates are looked at again.
const boundEvery = 8

// bound looks at the growth rates of A, where steps are rational: a mode that is not seen
// yet may not be overstepped either.
func (f *follower) bound() {
	n := len(f.y)
	f.due = boundEvery
	if n <= few {
		return
	}
	var e mat.Eigen
	f.most = math.Inf(1) // exponentials
	if !e.Factorize(mat.NewDense(n, n, append([]float64(nil), f.a...)), mat.EigenNone) {
		return
	}
	f.most = 0
	for _, v := range e.Values(nil) {
		f.most = math.Max(f.most, 1.25*real(v))
	}
}
