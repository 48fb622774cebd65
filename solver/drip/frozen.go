package drip

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"

	"keelfall/solver/growth"
)

// Frozen is the exact solution of dξ/dt = A ξ in a column that does not change and
// that nothing strains, from an undulation of the root's base alone.
//
// There A = −C R with C the compliance, symmetric and positive, and R the diagonal of
// weights g[ρ]. With C = L Lᵀ and the symmetric M = −Lᵀ R L = Q Λ Qᵀ,
//
//	ξ(t) = ξ₀ − L Q diag(t φ₁(λt)) Qᵀ Lᵀ R ξ₀,   φ₁(x) = (eˣ − 1)/x,
//
// which needs no inverse and keeps growth rates that differ by 1e7 apart (derived).
type Frozen struct {
	Wavelength float64   // m
	Rates      []float64 // λ, 1/s
	Share      []float64 // displacement of the root's base per a₀ and per t φ₁(λt), 1/s

	states, base int       // of the system, and which of them is the root's base
	driven       []int     // states that exert a force
	shape        []float64 // displacement of driven state i per a₀ and per t φ₁(λ_j t), 1/s, at i n + j
}

// NewFrozen prepares the solution for interface base (0 is the surface) of sys.
func NewFrozen(sys *growth.System, base int) (*Frozen, error) {
	n, b := sys.N, sys.Interface[base]
	if b < 0 {
		return nil, errors.New("drip: the root's base cannot move: it lies on a wall")
	}
	// C_ij = −A_ij/R_j where R_j is not zero; a carried state's column follows from
	// symmetry, and its diagonal, which nothing uses, from nothing.
	c := mat.NewSymDense(n, nil)
	size := make([]float64, n) // scales states so that C is near 1 on its diagonal
	for i := range n {
		for j := i; j < n; j++ {
			var v float64
			switch {
			case sys.Weight[i] != 0 && sys.Weight[j] != 0:
				v = -(sys.A[i*n+j]/sys.Weight[j] + sys.A[j*n+i]/sys.Weight[i]) / 2
			case sys.Weight[j] != 0:
				v = -sys.A[i*n+j] / sys.Weight[j]
			case sys.Weight[i] != 0:
				v = -sys.A[j*n+i] / sys.Weight[i]
			}
			c.SetSym(i, j, v)
		}
	}
	driven := make([]int, 0, n) // states that exert a force
	for i := range n {
		if sys.Weight[i] != 0 {
			driven = append(driven, i)
			size[i] = math.Sqrt(math.Abs(sys.Weight[i]))
		}
	}
	f := &Frozen{Wavelength: sys.Wavelength, states: n, base: b}
	if sys.Weight[b] == 0 || len(driven) == 0 {
		return f, nil // an undulation that exerts no force stays as it is
	}
	d := len(driven)
	// scaled C' = D C D on the driven states, D = |R|^½; C' = L' L'ᵀ
	cs := mat.NewSymDense(d, nil)
	for i := range d {
		for j := i; j < d; j++ {
			cs.SetSym(i, j, c.At(driven[i], driven[j])*size[driven[i]]*size[driven[j]])
		}
	}
	var es mat.EigenSym
	if !es.Factorize(cs, true) {
		return nil, errors.New("drip: the compliance has no eigenvalues")
	}
	var vec mat.Dense
	es.VectorsTo(&vec)
	val := es.Values(nil)
	l := mat.NewDense(d, d, nil)
	for i := range d {
		for j := range d {
			l.Set(i, j, vec.At(i, j)*math.Sqrt(math.Max(val[j], 0)))
		}
	}
	m := mat.NewSymDense(d, nil) // −L'ᵀ Σ L', Σ the signs of R
	for i := range d {
		for j := i; j < d; j++ {
			var s float64
			for k := range d {
				s -= l.At(k, i) * l.At(k, j) * math.Copysign(1, sys.Weight[driven[k]])
			}
			m.SetSym(i, j, s)
		}
	}
	if !es.Factorize(m, true) {
		return nil, errors.New("drip: the growth matrix has no eigenvalues")
	}
	es.VectorsTo(&vec)
	var lq mat.Dense
	lq.Mul(l, &vec)
	at := 0
	for i, k := range driven {
		if k == b {
			at = i
		}
	}
	f.Rates = es.Values(nil)
	f.Share = make([]float64, d)
	for j := range d { // ξ' = Dξ: the scale of the base cancels
		f.Share[j] = -lq.At(at, j) * lq.At(at, j) * math.Copysign(1, sys.Weight[b])
	}
	f.driven, f.shape = driven, make([]float64, d*d)
	for i, k := range driven {
		scale := size[b] / size[k] * math.Copysign(1, sys.Weight[b])
		for j := range d {
			f.shape[i*d+j] = -lq.At(i, j) * lq.At(at, j) * scale
		}
	}
	return f, nil
}

// Base returns the displacement of the root's base at time t (s), for a unit
// undulation at the start.
func (f *Frozen) Base(t float64) float64 {
	x := 1.0
	for j, q := range f.Rates {
		x += f.Share[j] * t * phi1(q*t)
	}
	return x
}

// States returns the displacements at time t (s) for a unit undulation at the start, in
// the order of growth.System. Those that exert no force are left at 0: they drive nothing.
func (f *Frozen) States(t float64) []float64 {
	x := make([]float64, f.states)
	n := len(f.Rates)
	for j, q := range f.Rates {
		grown := t * phi1(q*t)
		for i, k := range f.driven {
			x[k] += f.shape[i*n+j] * grown
		}
	}
	x[f.base]++
	return x
}

// Fastest returns the largest growth rate, 1/s; 0 where nothing is driven.
func (f *Frozen) Fastest() float64 {
	q := math.Inf(-1)
	for _, r := range f.Rates {
		q = math.Max(q, r)
	}
	if len(f.Rates) == 0 {
		return 0
	}
	return q
}

// Time returns the first time in s, up to horizon, at which the base has moved by
// ratio times its first amplitude; +Inf where it does not.
func (f *Frozen) Time(ratio, horizon float64) float64 {
	if ratio <= 1 {
		return 0
	}
	var fast float64
	for _, q := range f.Rates {
		fast = math.Max(fast, math.Abs(q))
	}
	if fast == 0 {
		return math.Inf(1)
	}
	far := horizon
	if q := f.Fastest(); q > 0 {
		far = math.Min(far, (math.Log(ratio)+60)/q) // beyond this the mode has long won, or is not in it
	}
	over := func(t float64) bool { return math.Abs(f.Base(t)) >= ratio }
	// |ξ| may dip and turn before it grows: look from early times on, 5 % at a time
	lo := 0.0
	for t := far * 1e-4; ; t *= 1.05 {
		t = math.Min(t, far)
		if over(t) {
			hi := t
			for i := 0; i < 200 && hi-lo > 1e-13*hi; i++ {
				if mid := lo + (hi-lo)/2; over(mid) {
					hi = mid
				} else {
					lo = mid
				}
			}
			return hi
		}
		if t >= far {
			return math.Inf(1)
		}
		lo = t
	}
}

// phi1 is (eˣ − 1)/x.
func phi1(x float64) float64 {
	if math.Abs(x) < 1e-8 {
		return 1 + x/2
	}
	return math.Expm1(x) / x
}
