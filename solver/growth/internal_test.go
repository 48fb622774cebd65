package growth

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The collocation constants satisfy what defines them (Hairer, Nørsett & Wanner, from
// memory): Σ_j a_ij c_j^(q−1) = c_i^q/q up to q = S, and b_i a_ij + b_j a_ji = b_i b_j.
func TestButcher(t *testing.T) {
	for i := range nodeC {
		for q := 1; q <= stages; q++ {
			var s float64
			for j := range nodeC {
				s += butcher[i][j] * math.Pow(nodeC[j], float64(q-1))
			}
			if want := math.Pow(nodeC[i], float64(q)) / float64(q); math.Abs(s-want) > 4e-16 {
				t.Errorf("order condition %d at node %d: %g, want %g", q, i, s, want)
			}
		}
		for j := range nodeC {
			// a rounds at 2e-16, b is at most 0.19
			d := nodeB[i]*butcher[i][j] + nodeB[j]*butcher[j][i] - nodeB[i]*nodeB[j]
			if math.Abs(d) > 5e-17 {
				t.Errorf("b_i a_ij + b_j a_ji − b_i b_j = %g at %d, %d", d, i, j)
			}
		}
	}
}

// A constant element is the exact constant layer (closed form from the decoupling
// p = v + t, q = v − t; derived): Φ, Q, Ψ with c = cosh x, s = sinh x, E = c² + x².
func TestConstantElement(t *testing.T) {
	const eta, h = 3e20, 7e3
	for _, x := range []float64{1e-4, 0.01, 0.3, 1, 2} {
		k := x / h
		e := element{h: h}
		for i := range e.etaS {
			e.etaS[i], e.etaN[i] = eta, eta
		}
		e.build()
		var f factor
		var got triple
		e.condense(k, &f, &got)
		c, s := math.Cosh(x), math.Sinh(x)
		E := c*c + x*x
		// sinh x cosh x − x without cancellation at small x
		scx := s*c - x
		if x < 0.1 {
			scx = 2 * x * x * x / 3 * (1 + x*x/5 + 2*x*x*x*x/105)
		}
		want := triple{
			pww: (c + x*s) / E, pwu: -x * c / E, puw: x * c / E, puu: (c - x*s) / E,
			qww: 2 * eta * k * scx / E, qwu: 2 * eta * k * x * x / E, quu: 2 * eta * k * (c*s + x) / E,
			sww: scx / (2 * eta * k * E), swu: -x * x / (2 * eta * k * E), suu: (c*s + x) / (2 * eta * k * E),
		}
		for _, v := range []struct {
			name      string
			got, want float64
		}{
			{"Φ_WW", got.pww, want.pww}, {"Φ_WU", got.pwu, want.pwu}, {"Φ_UW", got.puw, want.puw}, {"Φ_UU", got.puu, want.puu},
			{"Q_WW", got.qww, want.qww}, {"Q_WU", got.qwu, want.qwu}, {"Q_UU", got.quu, want.quu},
			{"Ψ_WW", got.sww, want.sww}, {"Ψ_WU", got.swu, want.swu}, {"Ψ_UU", got.suu, want.suu},
		} {
			if d := math.Abs(v.got/v.want - 1); d > 3e-11 {
				t.Errorf("kh %g: %s = %.15g, want %.15g (off %.2g)", x, v.name, v.got, v.want, d)
			}
		}
	}
}

// The eigenvalue routine against gonum on random matrices whose rows differ by ten
// decades, as a surface and a root do.
func TestEigenvalues(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for range 400 {
		n := 1 + rng.IntN(12)
		a := make([]float64, n*n)
		for i := range n {
			scale := math.Pow(10, -6*rng.Float64())
			for j := range n {
				a[i*n+j] = scale * rng.NormFloat64()
			}
		}
		var eig mat.Eigen
		if !eig.Factorize(mat.NewDense(n, n, slices.Clone(a)), mat.EigenNone) {
			t.Fatal("gonum found no eigenvalues")
		}
		want := eig.Values(nil)
		re, im := make([]float64, n), make([]float64, n)
		if err := eigenvalues(slices.Clone(a), n, re, im); err != nil {
			t.Fatal(err)
		}
		var norm float64
		for _, v := range a {
			norm = math.Max(norm, math.Abs(v))
		}
		for i := range re {
			best := math.Inf(1)
			for _, w := range want {
				best = math.Min(best, cmplx.Abs(w-complex(re[i], im[i])))
			}
			if best > 1e-9*norm { // ill-conditioned eigenvalues of random matrices
				t.Fatalf("n %d: %g%+gi is not an eigenvalue (nearest %.2g away)", n, re[i], im[i], best)
			}
		}
	}
}

// A wavenumber costs no allocation once its band has a mesh.
func TestNoAllocation(t *testing.T) {
	c := &Column{Gravity: 9.81, Top: Free, Base: HalfSpace, EtaS: 1e20, EtaN: 1e20, Jumps: []float64{2800, 500, -100},
		Layers: []Layer{{Thickness: 20e3, Viscosity: func(float64) (float64, float64) { return 1e22, 1e22 }},
			{Thickness: 12e3, Viscosity: func(float64) (float64, float64) { return 1e21, 1e21 }}}}
	s, err := NewSolver(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	lambda := 60e3
	if _, err := s.Rate(lambda); err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(100, func() {
		if _, err := s.Rate(lambda); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("%v allocations per wavenumber", n)
	}
}

// The unrolled factorisation gives the bits of the loop it stands for, and L D Lᵀ = R.
func TestEliminate(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 50 {
		var f factor
		var diag [stages]float64
		var full [stages][stages]float64
		at := 0
		for i := range diag {
			diag[i] = 8 + rng.Float64()
			f.nw[i], f.nu[i], f.bw[i], f.bu[i] = rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()
			for j := 0; j <= i; j++ {
				f.l[at] = rng.NormFloat64()
				full[i][j], full[j][i] = f.l[at], f.l[at]
				at++
			}
			full[i][i] += diag[i]
		}
		g := f
		f.eliminate(&diag)
		eliminateLoop(&g, &diag)
		if f != g {
			t.Fatal("the unrolled factorisation and the loop differ")
		}
		for i := range full {
			for j := 0; j <= i; j++ {
				var s float64
				for m := 0; m <= j; m++ {
					li, lj := 1.0, 1.0
					if m < i {
						li = f.l[i*(i+1)/2+m]
					}
					if m < j {
						lj = f.l[j*(j+1)/2+m]
					}
					s += li * lj / f.d[m]
				}
				if math.Abs(s-full[i][j]) > 1e-13 {
					t.Fatalf("L D Lᵀ at %d, %d: %g, want %g", i, j, s, full[i][j])
				}
			}
		}
	}
}

// eliminateLoop is eliminate as a loop.
func eliminateLoop(f *factor, diag *[stages]float64) {
	l := &f.l
	for j := 0; j < stages; j++ {
		jj := j * (j + 1) / 2
		d := l[jj+j] + diag[j]
		nw, nu, bw, bu := f.nw[j], f.nu[j], f.bw[j], f.bu[j]
		for m := 0; m < j; m++ {
			u := l[jj+m] // L_jm D_m
			t := u * f.d[m]
			d -= u * t
			nw -= t * f.nw[m]
			nu -= t * f.nu[m]
			bw -= t * f.bw[m]
			bu -= t * f.bu[m]
			l[jj+m] = t
		}
		f.nw[j], f.nu[j], f.bw[j], f.bu[j] = nw, nu, bw, bu
		f.d[j] = 1 / d
		for i := j + 1; i < stages; i++ {
			ii := i * (i + 1) / 2
			s := l[ii+j]
			for m := 0; m < j; m++ {
				s -= l[ii+m] * l[jj+m] // (L_im D_m) L_jm
			}
			l[ii+j] = s
		}
	}
}
