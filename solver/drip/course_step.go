package drip

import "math"

// few is the number of states up to which a step is an exponential; beyond, it is made of
// rational steps (course_rational.go), unless it takes more than mostFew of them.
const (
	few     = 16
	mostFew = 24
)

// stepper applies exp(h A) of one A at a time and holds the storage for it.
type stepper struct {
	n          int
	b, u, v, w []float64
	scale      []float64
	e          []float64 // exp(h A) e^-log of the balanced A
	log        float64
	steps      int // rational ones, of (1 − γ h A)⁻¹ in b; 0: the exponential
	row        []int
	x, r       []float64
}

func (s *stepper) grow(n int) {
	if s.n = n; len(s.b) < n*n {
		s.b, s.u, s.v, s.w = make([]float64, n*n), make([]float64, n*n), make([]float64, n*n), make([]float64, n*n)
		s.scale, s.x, s.r, s.row = make([]float64, n), make([]float64, n), make([]float64, n), make([]int, n)
	}
}

// set prepares exp(h A) for n states. rate bounds the growth rates of A, 1/s, roughly.
func (s *stepper) set(a []float64, n int, h, rate float64) {
	s.grow(n)
	b := s.b[:n*n]
	for i := range b {
		b[i] = h * a[i]
	}
	if s.steps = rationalSteps(h * rate); n <= few || s.steps > mostFew {
		s.steps = 0
	} else {
		s.rational(b)
		return
	}
	s.balance(b, n)
	s.e, s.log = s.exp(b, n)
}

// apply sets out to exp(h A) y and returns the logarithm it is to be multiplied with. out
// may be y.
func (s *stepper) apply(out, y []float64) (log float64) {
	n := s.n
	if s.steps > 0 {
		return s.rationalApply(out, y)
	}
	x := s.x[:n]
	for j := range n {
		x[j] = y[j] / s.scale[j]
	}
	for i := range n {
		var sum float64
		for j, e := range s.e[i*n : i*n+n] {
			sum += e * x[j]
		}
		out[i] = sum * s.scale[i]
	}
	return s.log + normalise(out)
}

// normalise divides y by its largest size and returns that size's logarithm; an all but
// zero vector stays as it is.
func normalise(y []float64) float64 {
	var m float64
	for _, v := range y {
		m = math.Max(m, math.Abs(v))
	}
	if !(m > 1e-290) {
		return 0
	}
	for i := range y {
		y[i] /= m
	}
	return math.Log(m)
}

// balance replaces B by D⁻¹ B D with powers of two that bring the sizes of rows and
// columns together; D stays in s.scale. Source: Parlett & Reinsch 1969, Numer. Math. 13
// (from memory).
func (s *stepper) balance(b []float64, n int) {
	d := s.scale[:n]
	for i := range d {
		d[i] = 1
	}
	for range 20 {
		done := true
		for i := range n {
			var c, r float64
			for j := range n {
				if j != i {
					c += math.Abs(b[j*n+i])
					r += math.Abs(b[i*n+j])
				}
			}
			if c == 0 || r == 0 {
				continue
			}
			_, e := math.Frexp(math.Sqrt(r / c))
			f := math.Ldexp(1, e-1)
			if f == 1 || c*f+r/f > 0.95*(c+r) {
				continue
			}
			done = false
			d[i] *= f
			for j := range n {
				b[j*n+i] *= f
				b[i*n+j] /= f
			}
		}
		if done {
			return
		}
	}
}

// exp returns E and a logarithm l with exp(B) = E e^l, by scaling to a norm of 1/8, the diagonal Padé approximant of order
// [4/4], whose backward error there is about 2e-14 of the norm, and squaring,
// each square brought back to a size of one.
func (s *stepper) exp(b []float64, n int) (e []float64, log float64) {
	var norm float64
	for j := range n {
		var c float64
		for i := range n {
			c += math.Abs(b[i*n+j])
		}
		norm = math.Max(norm, c)
	}
	times := 0
	if norm > 0.125 {
		times = int(math.Ceil(math.Log2(norm / 0.125)))
		f := math.Ldexp(1, -times)
		for i := range b {
			b[i] *= f
		}
	}
	u, v, w := s.u[:n*n], s.v[:n*n], s.w[:n*n]
	multiply := func(dst, x, y []float64) {
		for i := range n {
			row := dst[i*n : i*n+n]
			clear(row)
			for k := range n {
				f := x[i*n+k]
				for j, t := range y[k*n : k*n+n] {
					row[j] += f * t
				}
			}
		}
	}
	multiply(v, b, b) // B²
	// numerator N = 1 + B/2 + 3B²/28 + B³/84 + B⁴/1680, denominator the same of −B
	for i := range w {
		w[i] = v[i] / 1680
	}
	for i := range n {
		w[i*n+i] += 3.0 / 28
	}
	multiply(u, v, w) // 3B²/28 + B⁴/1680
	for i := range n {
		u[i*n+i]++
	}
	for i := range w {
		w[i] = v[i] / 84
	}
	for i := range n {
		w[i*n+i] += 0.5
	}
	multiply(v, b, w) // B/2 + B³/84
	for i := range w {
		w[i], b[i] = u[i]+v[i], u[i]-v[i]
	}
	solve(b, w, n)
	for range times {
		multiply(v, w, w)
		v, w = w, v
		log = 2*log + normalise(w)
	}
	return w, log
}

// solve replaces the rows of x by a⁻¹ x; a is overwritten. Partial pivoting.
func solve(a, x []float64, n int) {
	for c := range n {
		p := c
		for i := c + 1; i < n; i++ {
			if math.Abs(a[i*n+c]) > math.Abs(a[p*n+c]) {
				p = i
			}
		}
		if p != c {
			for j := range n {
				a[c*n+j], a[p*n+j] = a[p*n+j], a[c*n+j]
				x[c*n+j], x[p*n+j] = x[p*n+j], x[c*n+j]
			}
		}
		for i := c + 1; i < n; i++ {
			f := a[i*n+c] / a[c*n+c]
			if f == 0 {
				continue
			}
			for j := c; j < n; j++ {
				a[i*n+j] -= f * a[c*n+j]
			}
			for j := range n {
				x[i*n+j] -= f * x[c*n+j]
			}
		}
	}
	for i := n - 1; i >= 0; i-- {
		for j := range n {
			v := x[i*n+j]
			for k := i + 1; k < n; k++ {
				v -= a[i*n+k] * x[k*n+j]
			}
			x[i*n+j] = v / a[i*n+i]
		}
	}
}
