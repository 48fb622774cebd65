package growth_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"keelfall/solver/growth"
)

// exactMatrix is a second method for constant layers, sharing no code with the first:
// in each layer W = (a + b kζ) e^(−kζ) + (c + d kζ') e^(−kζ'), ζ from its top and ζ'
// from its base, joined by continuity of W, U and S and the jump of Σ in one dense
// system. It returns A(k) for the movable interfaces, d = 0.
func exactMatrix(t *testing.T, c *growth.Column, k float64) *mat.Dense {
	t.Helper()
	n := len(c.Layers)
	half := c.Base == growth.HalfSpace
	unknowns := 4 * n
	if half {
		unknowns += 2
	}
	// value of W, U, S, Σ of basis function j of a layer (h, η) at its top or base
	basis := func(h, eta float64, j int, base bool) (w, u, s, sig float64) {
		z := 0.0
		if base {
			z = h
		}
		sign := -1.0 // of the exponent's slope
		x := k * z
		if j >= 2 {
			sign, x = 1, k*(h-z)
		}
		e := math.Exp(-x)
		// f = e or x e; derivatives in units of k, d/dz = −sign·… (x' = −sign k … )
		d := -sign // dx/dz / k
		var f [4]float64
		if j%2 == 0 {
			for m := range f {
				f[m] = e * math.Pow(-d, float64(m))
			}
		} else {
			for m := range f { // (x e^{−x})^(m) = (−1)^m (x − m) e^{−x}, times d^m
				f[m] = math.Pow(-d, float64(m)) * (x - float64(m)) * e
			}
		}
		w = f[0]
		u = -f[1]                          // U = −W'/k
		s = eta * k * (-f[2] - f[0])       // η (U' − kW)
		sp := eta * k * k * (-f[3] - f[1]) // S'
		sig = (sp - 4*eta*k*k*u) / k       // Σ = (S' − 4ηk²U)/k
		return w, u, s, sig
	}
	m := mat.NewDense(unknowns, unknowns, nil)
	movable := []int{}
	type eq struct{ row, contact int } // where [Σ] of a contact stands
	var sigma []eq
	row := 0
	etaOf := func(i int) float64 { e, _ := c.Layers[i].Viscosity(0); return e }
	fill := func(r, layer int, base bool, pick int, sign float64) {
		for j := range 4 {
			w, u, s, g := basis(c.Layers[layer].Thickness, etaOf(layer), j, base)
			m.Set(r, 4*layer+j, m.At(r, 4*layer+j)+sign*[4]float64{w, u, s, g}[pick])
		}
	}
	switch c.Top {
	case growth.Free:
		fill(row, 0, false, 2, 1)
		row++
		fill(row, 0, false, 3, 1)
		sigma = append(sigma, eq{row, 0})
		movable = append(movable, 0)
		row++
	case growth.Rigid:
		fill(row, 0, false, 0, 1)
		fill(row+1, 0, false, 1, 1)
		row += 2
	case growth.FreeSlip:
		fill(row, 0, false, 0, 1)
		fill(row+1, 0, false, 2, 1)
		row += 2
	}
	for i := 1; i < n; i++ {
		for pick := range 4 {
			fill(row, i, false, pick, 1)
			fill(row, i-1, true, pick, -1)
			if pick == 3 {
				sigma = append(sigma, eq{row, i})
				movable = append(movable, i)
			}
			row++
		}
	}
	switch c.Base {
	case growth.Rigid:
		fill(row, n-1, true, 0, 1)
		fill(row+1, n-1, true, 1, 1)
	case growth.FreeSlip:
		fill(row, n-1, true, 0, 1)
		fill(row+1, n-1, true, 2, 1)
	case growth.Inviscid:
		fill(row, n-1, true, 2, -1)
		fill(row+1, n-1, true, 3, -1)
		sigma = append(sigma, eq{row + 1, n})
		movable = append(movable, n)
	case growth.HalfSpace: // unknowns W, U of its top: Σ = −2ηkW, S = −2ηkU
		for pick := range 4 {
			fill(row, n-1, true, pick, -1)
			switch pick {
			case 0:
				m.Set(row, 4*n, 1)
			case 1:
				m.Set(row, 4*n+1, 1)
			case 2:
				m.Set(row, 4*n+1, -2*c.EtaS*k)
			case 3:
				m.Set(row, 4*n, -2*c.EtaS*k)
				sigma = append(sigma, eq{row, n})
				movable = append(movable, n)
			}
			row++
		}
	}
	// equilibrate the rows: viscosities differ by decades
	scale := make([]float64, unknowns)
	for i := range unknowns {
		for j := range unknowns {
			scale[i] = math.Max(scale[i], math.Abs(m.At(i, j)))
		}
		for j := range unknowns {
			m.Set(i, j, m.At(i, j)/scale[i])
		}
	}
	var lu mat.LU
	lu.Factorize(m)
	if len(movable) == 0 {
		return &mat.Dense{}
	}
	a := mat.NewDense(len(movable), len(movable), nil)
	for j, s := range sigma {
		b := mat.NewVecDense(unknowns, nil)
		b.SetVec(s.row, c.Jumps[s.contact]*c.Gravity/scale[s.row]) // [Σ] = ξ[ρ]g
		var x mat.VecDense
		if err := lu.SolveVecTo(&x, false, b); err != nil {
			if _, ok := err.(mat.Condition); !ok {
				t.Fatal(err)
			}
		}
		for i, contact := range movable {
			var w float64
			if contact < n {
				for q := range 4 {
					v, _, _, _ := basis(c.Layers[contact].Thickness, etaOf(contact), q, false)
					w += v * x.AtVec(4*contact+q)
				}
			} else {
				for q := range 4 {
					v, _, _, _ := basis(c.Layers[n-1].Thickness, etaOf(n-1), q, true)
					w += v * x.AtVec(4*(n-1)+q)
				}
			}
			a.Set(i, j, w)
		}
	}
	return a
}

// Random constant layers, every pair of boundaries: the collocation solver and the
// dense exact one give the same leading rate.
func TestAgainstExactLayers(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 1))
	compared := 0
	for range 300 {
		n := 1 + rng.IntN(5)
		c := &growth.Column{Gravity: 9.81, Top: growth.Boundary(rng.IntN(3)), Base: growth.FreeSlip + growth.Boundary(rng.IntN(4))}
		depth, above := 0.0, 0.0
		for range n {
			h := 2e3 + 20e3*rng.Float64()
			eta := math.Pow(10, 19+4*rng.Float64())
			rho := 2700 + 800*rng.Float64()
			c.Layers = append(c.Layers, growth.Layer{Thickness: h, Viscosity: func(float64) (float64, float64) { return eta, eta }})
			c.Jumps = append(c.Jumps, rho-above)
			above = rho
			depth += h
		}
		c.Jumps = append(c.Jumps, 3250-above)
		c.EtaS = math.Pow(10, 19+3*rng.Float64())
		c.EtaN = c.EtaS
		k := math.Pow(10, -0.7+2*rng.Float64()) / depth
		a := exactMatrix(t, c, k)
		if a.IsEmpty() {
			continue
		}
		var eig mat.Eigen
		if !eig.Factorize(a, mat.EigenNone) {
			t.Fatal("gonum found no eigenvalues")
		}
		want, fast := math.Inf(-1), 0.0
		for _, v := range eig.Values(nil) {
			want = math.Max(want, real(v))
			fast = math.Max(fast, math.Abs(real(v)))
		}
		s, err := growth.NewSolver(c, 0)
		if err != nil {
			t.Fatal(err)
		}
		got, err := s.Rate(2 * math.Pi / k)
		if err != nil {
			t.Fatal(err)
		}
		// 1e-8 is the solver's tolerance; 1e-10 of the fastest mode is what the dense
		// method, whose condition reaches 1e5, leaves of a slow one
		if diff := math.Abs(got.Growth - want); diff > 1e-8*math.Abs(want)+1e-10*fast {
			t.Errorf("top %d, base %d, %d layers, kH %.3g: %.12g, exact layers %.12g", c.Top, c.Base, n, k*depth, got.Growth, want)
		}
		compared++
	}
	if compared < 250 {
		t.Fatalf("only %d columns were compared", compared)
	}
}
