package growth

import (
	"errors"
	"math"
	"slices"
)

var errNoConvergence = errors.New("growth: the eigenvalue iteration did not converge")

// eigenvalues overwrites the n × n row-major matrix a and returns its eigenvalues in
// re and im. Balancing by powers of two keeps the small rates of a column whose
// surface relaxes 1e7 times faster than its root sinks.
//
// Method: balancing, Hessenberg form by elimination with pivoting, shifted QR of
// Francis 1961; as in Wilkinson & Reinsch, Handbook for Automatic Computation II, 1971
// (from memory; tested against gonum).
func eigenvalues(a []float64, n int, re, im []float64) error {
	switch n {
	case 0:
		return nil
	case 1:
		re[0], im[0] = a[0], 0
		return nil
	}
	balance(a, n)
	hessenberg(a, n)
	return francis(a, n, re, im)
}

func balance(a []float64, n int) {
	for done := false; !done; {
		done = true
		for i := 0; i < n; i++ {
			var r, c float64
			for j := 0; j < n; j++ {
				if j != i {
					c += math.Abs(a[j*n+i])
					r += math.Abs(a[i*n+j])
				}
			}
			if c == 0 || r == 0 {
				continue
			}
			// f = 2^e nearest to sqrt(r/c)
			_, er := math.Frexp(r)
			_, ec := math.Frexp(c)
			e := (er - ec) / 2
			if e == 0 {
				continue
			}
			f := math.Ldexp(1, e)
			if c*f+r/f < 0.95*(c+r) {
				done = false
				for j := 0; j < n; j++ {
					a[i*n+j] /= f
				}
				for j := 0; j < n; j++ {
					a[j*n+i] *= f
				}
			}
		}
	}
}

func hessenberg(a []float64, n int) {
	for m := 1; m < n-1; m++ {
		p := m
		for i := m + 1; i < n; i++ {
			if math.Abs(a[i*n+m-1]) > math.Abs(a[p*n+m-1]) {
				p = i
			}
		}
		x := a[p*n+m-1]
		if p != m {
			for j := m - 1; j < n; j++ {
				a[p*n+j], a[m*n+j] = a[m*n+j], a[p*n+j]
			}
			for j := 0; j < n; j++ {
				a[j*n+p], a[j*n+m] = a[j*n+m], a[j*n+p]
			}
		}
		if x == 0 {
			continue
		}
		for i := m + 1; i < n; i++ {
			y := a[i*n+m-1]
			if y == 0 {
				continue
			}
			y /= x
			a[i*n+m-1] = 0
			for j := m; j < n; j++ {
				a[i*n+j] -= y * a[m*n+j]
			}
			for j := 0; j < n; j++ {
				a[j*n+m] += y * a[j*n+i]
			}
		}
	}
}

// francis finds the eigenvalues of an upper Hessenberg matrix by double-shift QR.
func francis(a []float64, n int, re, im []float64) error {
	const eps = 0x1p-52
	var norm float64
	for i := 0; i < n; i++ {
		for j := max(i-1, 0); j < n; j++ {
			norm += math.Abs(a[i*n+j])
		}
	}
	if norm == 0 {
		for i := range re[:n] {
			re[i], im[i] = 0, 0
		}
		return nil
	}
	if math.IsNaN(norm) || math.IsInf(norm, 0) {
		return errNoConvergence
	}
	var shift float64
	for hi := n - 1; hi >= 0; {
		var l int
		for its := 0; ; its++ {
			for l = hi; l >= 1; l-- { // look for a negligible subdiagonal entry
				s := math.Abs(a[(l-1)*n+l-1]) + math.Abs(a[l*n+l])
				if s == 0 {
					s = norm
				}
				if math.Abs(a[l*n+l-1]) <= eps*s {
					a[l*n+l-1] = 0
					break
				}
			}
			x := a[hi*n+hi]
			if l == hi {
				re[hi], im[hi] = x+shift, 0
				hi--
				break
			}
			y := a[(hi-1)*n+hi-1]
			w := a[hi*n+hi-1] * a[(hi-1)*n+hi]
			if l == hi-1 {
				pair(x, y, w, shift, &re[hi-1], &im[hi-1], &re[hi], &im[hi])
				hi -= 2
				break
			}
			if its == 60 {
				return errNoConvergence
			}
			if its%10 == 9 { // exceptional shift
				shift += x
				for i := 0; i <= hi; i++ {
					a[i*n+i] -= x
				}
				s := math.Abs(a[hi*n+hi-1]) + math.Abs(a[(hi-1)*n+hi-2])
				x = 0.75 * s
				y = x
				w = -0.4375 * s * s
			}
			sweepQR(a, n, l, hi, x, y, w)
		}
	}
	return nil
}

// pair returns the two eigenvalues of a trailing 2 × 2 block.
func pair(x, y, w, shift float64, re1, im1, re2, im2 *float64) {
	p := (y - x) / 2
	q := p*p + w
	z := math.Sqrt(math.Abs(q))
	x += shift
	if q >= 0 {
		z = p + math.Copysign(z, p)
		*re1, *re2 = x+z, x+z
		if z != 0 {
			*re2 = x - w/z
		}
		*im1, *im2 = 0, 0
		return
	}
	*re1, *re2 = x+p, x+p
	*im1, *im2 = z, -z
}

// sweepQR does one implicit double-shift step on rows l..hi.
func sweepQR(a []float64, n, l, hi int, x, y, w float64) {
	const eps = 0x1p-52
	var p, q, r float64
	m := hi - 2
	for ; m >= l; m-- { // start where two consecutive small subdiagonals allow
		z := a[m*n+m]
		rr, ss := x-z, y-z
		p = (rr*ss-w)/a[(m+1)*n+m] + a[m*n+m+1]
		q = a[(m+1)*n+m+1] - z - rr - ss
		r = a[(m+2)*n+m+1]
		s := math.Abs(p) + math.Abs(q) + math.Abs(r)
		p /= s
		q /= s
		r /= s
		if m == l {
			break
		}
		u := math.Abs(a[m*n+m-1]) * (math.Abs(q) + math.Abs(r))
		v := math.Abs(p) * (math.Abs(a[(m-1)*n+m-1]) + math.Abs(z) + math.Abs(a[(m+1)*n+m+1]))
		if u <= eps*v {
			break
		}
	}
	for i := m + 2; i <= hi; i++ {
		a[i*n+i-2] = 0
		if i != m+2 {
			a[i*n+i-3] = 0
		}
	}
	for k := m; k < hi; k++ {
		if k != m {
			p, q, r = a[k*n+k-1], a[(k+1)*n+k-1], 0
			if k != hi-1 {
				r = a[(k+2)*n+k-1]
			}
			if x = math.Abs(p) + math.Abs(q) + math.Abs(r); x != 0 {
				p /= x
				q /= x
				r /= x
			}
		}
		s := math.Copysign(math.Sqrt(p*p+q*q+r*r), p)
		if s == 0 {
			continue
		}
		if k == m {
			if l != m {
				a[k*n+k-1] = -a[k*n+k-1]
			}
		} else {
			a[k*n+k-1] = -s * x
		}
		p += s
		x = p / s
		y = q / s
		z := r / s
		q /= p
		r /= p
		for j := k; j <= hi; j++ {
			t := a[k*n+j] + q*a[(k+1)*n+j]
			if k != hi-1 {
				t += r * a[(k+2)*n+j]
				a[(k+2)*n+j] -= t * z
			}
			a[(k+1)*n+j] -= t * y
			a[k*n+j] -= t * x
		}
		last := min(hi, k+3)
		for i := l; i <= last; i++ {
			t := x*a[i*n+k] + y*a[i*n+k+1]
			if k != hi-1 {
				t += z * a[i*n+k+2]
				a[i*n+k+2] -= t * r
			}
			a[i*n+k+1] -= t * q
			a[i*n+k] -= t
		}
	}
}

// Eigenvalues returns the real and imaginary parts of the eigenvalues of an n × n
// row-major matrix, which it leaves as it is.
func Eigenvalues(a []float64, n int) (re, im []float64, err error) {
	re, im = make([]float64, n), make([]float64, n)
	return re, im, eigenvalues(slices.Clone(a[:n*n]), n, re, im)
}
