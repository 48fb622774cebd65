package growth

import (
	"fmt"
	"math"
)

// eigenvectors returns the right and left vectors of the eigenvalue nearest to guess by
// inverse iteration. The right one is scaled so that its largest displacement is 1.
func (f *flow) eigenvectors(guess complex128) (right, left []complex128, err error) {
	n := f.n
	var norm float64
	for _, a := range f.matrix {
		norm = math.Max(norm, math.Abs(a))
	}
	right, left = make([]complex128, n), make([]complex128, n)
	for i := range right {
		right[i] = complex(1/float64(i+1), 0)
		left[i] = right[i]
	}
	if norm == 0 { // nothing is driven: every shape is neutral
		return right, left, nil
	}
	// a little off the eigenvalue, so that the matrix is not singular
	off := math.Max(1e-11*math.Hypot(real(guess), imag(guess)), norm*0x1p-52)
	lu, perm := factorComplex(f.matrix, n, guess+complex(off, 0))
	for range 4 {
		solveComplex(lu, perm, right)
		normalise(right, n)
		solveTransposed(lu, perm, left)
		normalise(left, n)
	}
	normalise(right, f.c.heat) // temperatures, in K, come after the displacements
	for _, x := range append(right[:n:n], left...) {
		if math.IsNaN(real(x)) || math.IsNaN(imag(x)) {
			return nil, nil, fmt.Errorf("growth: wavelength %g m: inverse iteration failed at rate %g 1/s", 2*math.Pi/f.k, guess)
		}
	}
	return right, left, nil
}

// normalise divides by the entry of largest modulus among the first n, which becomes 1.
func normalise(v []complex128, n int) {
	var big complex128
	for _, x := range v[:n] {
		if abs2(x) > abs2(big)*(1+1e-12) {
			big = x
		}
	}
	if big != 0 {
		for i := range v {
			v[i] /= big
		}
	}
}

func abs2(x complex128) float64 { return real(x)*real(x) + imag(x)*imag(x) }

// factorComplex returns the LU factors of A − λ with row exchanges.
func factorComplex(a []float64, n int, lambda complex128) ([]complex128, []int) {
	lu := make([]complex128, n*n)
	perm := make([]int, n)
	for i := range perm {
		perm[i] = i
		for j := range n {
			lu[i*n+j] = complex(a[i*n+j], 0)
		}
		lu[i*n+i] -= lambda
	}
	for c := range n {
		p := c
		for i := c + 1; i < n; i++ {
			if abs2(lu[i*n+c]) > abs2(lu[p*n+c]) {
				p = i
			}
		}
		if p != c {
			for j := range n {
				lu[p*n+j], lu[c*n+j] = lu[c*n+j], lu[p*n+j]
			}
			perm[p], perm[c] = perm[c], perm[p]
		}
		if lu[c*n+c] == 0 {
			lu[c*n+c] = complex(math.SmallestNonzeroFloat64*0x1p60, 0)
		}
		for i := c + 1; i < n; i++ {
			q := lu[i*n+c] / lu[c*n+c]
			lu[i*n+c] = q
			if q == 0 {
				continue
			}
			for j := c + 1; j < n; j++ {
				lu[i*n+j] -= q * lu[c*n+j]
			}
		}
	}
	return lu, perm
}

// solveComplex solves (A − λ) x = v in place.
func solveComplex(lu []complex128, perm []int, v []complex128) {
	n := len(perm)
	b := make([]complex128, n)
	for i, p := range perm {
		b[i] = v[p]
	}
	for i := range b {
		for j := range i {
			b[i] -= lu[i*n+j] * b[j]
		}
	}
	for i := n - 1; i >= 0; i-- {
		for j := i + 1; j < n; j++ {
			b[i] -= lu[i*n+j] * b[j]
		}
		b[i] /= lu[i*n+i]
	}
	copy(v, b)
}

// solveTransposed solves (A − λ)ᵀ x = v in place.
func solveTransposed(lu []complex128, perm []int, v []complex128) {
	n := len(perm)
	b := make([]complex128, n)
	copy(b, v)
	for i := range b { // Uᵀ
		for j := range i {
			b[i] -= lu[j*n+i] * b[j]
		}
		b[i] /= lu[i*n+i]
	}
	for i := n - 1; i >= 0; i-- { // Lᵀ
		for j := i + 1; j < n; j++ {
			b[i] -= lu[j*n+i] * b[j]
		}
	}
	for i, p := range perm {
		v[p] = b[i]
	}
}
