package growth

import (
	"fmt"
	"math"
)

// Mode returns the leading mode at a wavelength in m: shape, budget, sensitivities.
func (s *Solver) Mode(wavelength float64) (*Mode, error) {
	r, err := s.Rate(wavelength)
	if err != nil {
		return nil, err
	}
	k := 2 * math.Pi / wavelength
	f := s.newFlow(k)
	vec, err := f.eigenvector(complex(r.Growth, r.Imaginary))
	if err != nil {
		return nil, err
	}
	m := &Mode{Wavelength: wavelength, Growth: r.Growth, Imaginary: r.Imaginary}
	x := make([]float64, len(vec))
	for i, v := range vec {
		x[i] = real(v)
	}
	f.solve(x)
	f.describe(m, x)
	return m, nil
}

// flow recovers the velocity inside the elements for given displacements.
type flow struct {
	s      *Solver
	m      *mesh
	k      float64
	matrix []float64 // A(k), kept
	states int
	v      []response // at element tops, and the base of the last
	t      []response // tractions at element bases, above any interface there
	points []fieldPoint
	diss   []float64 // ∫ η_S s² + 4 η_N W'² over each layer, half-space last
}

// fieldPoint is the flow at one depth.
type fieldPoint struct {
	z, w, u, shear, normal float64 // m, m/s, m/s, Pa, Pa
	strain                 float64 // largest second invariant over x, 1/s
	layer                  int
	weight, loss           float64 // quadrature weight (m) and dissipation density; 0 at ends
}

// newFlow makes a flow at k on its own mesh with every element's factors kept.
func (s *Solver) newFlow(k float64) *flow {
	t := *s // own storage: the solver's mesh and matrices stay as they are
	t.nodal = true
	t.workspace = new(workspace)
	f := &flow{s: &t, m: &mesh{}, k: k}
	t.divide(f.m, k, k, t.rule)
	t.room(f.m)
	t.assemble(f.m, k)
	f.states = f.m.states
	f.matrix = t.a[:f.states*f.states]
	return f
}

// eigenvector returns the vector of the eigenvalue nearest to guess by inverse
// iteration, scaled so that its largest entry is 1.
func (f *flow) eigenvector(guess complex128) ([]complex128, error) {
	n := f.states
	var norm float64
	for _, a := range f.matrix {
		norm = math.Max(norm, math.Abs(a))
	}
	if norm == 0 { // nothing is driven: every shape is neutral
		v := make([]complex128, n)
		for i := range v {
			v[i] = 1
		}
		return v, nil
	}
	shift := guess + complex(norm*0x1p-50, 0)
	if g := math.Hypot(real(guess), imag(guess)); g > 0 {
		shift = guess * complex(1+1e-11, 0)
		if g*1e-11 < norm*0x1p-52 {
			shift = guess + complex(norm*0x1p-52, 0)
		}
	}
	lu, perm := factorComplex(f.matrix, n, shift)
	v := make([]complex128, n)
	for i := range v {
		v[i] = complex(1/float64(i+1), 0)
	}
	for range 4 {
		solveComplex(lu, perm, v)
		normalise(v)
	}
	for _, x := range v {
		if math.IsNaN(real(x)) || math.IsNaN(imag(x)) {
			return nil, fmt.Errorf("growth: wavelength %g m: inverse iteration failed at rate %g 1/s", 2*math.Pi/f.k, guess)
		}
	}
	return v, nil
}

// normalise divides by the entry of largest modulus, which becomes 1.
func normalise(v []complex128) {
	var big complex128
	for _, x := range v {
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

// factorComplex returns the LU factors of A − λ, rows scaled to unit size.
func factorComplex(a []float64, n int, lambda complex128) ([]complex128, []int) {
	lu := make([]complex128, n*n)
	perm := make([]int, n)
	for i := range perm {
		perm[i] = i
		for j := 0; j < n; j++ {
			lu[i*n+j] = complex(a[i*n+j], 0)
		}
		lu[i*n+i] -= lambda
	}
	for c := 0; c < n; c++ {
		p := c
		for i := c + 1; i < n; i++ {
			if abs2(lu[i*n+c]) > abs2(lu[p*n+c]) {
				p = i
			}
		}
		if p != c {
			for j := 0; j < n; j++ {
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

func solveComplex(lu []complex128, perm []int, v []complex128) {
	n := len(perm)
	b := make([]complex128, n)
	for i, p := range perm {
		b[i] = v[p]
	}
	for i := range b {
		for j := 0; j < i; j++ {
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
