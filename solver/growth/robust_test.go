package growth_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"keelfall/solver/growth"
)

// Ten thousand random columns: 2 to 12 layers, eight decades of viscosity within and
// between them, kH from 1e-6 to 1e3, n from 1 to 5, every boundary, with and without a
// background. No NaN and no failure; where nothing strains the column, as many modes
// grow as there are contacts with the denser rock above (Sylvester's law of inertia),
// but for columns whose rates differ by more than rounding can hold apart.
func TestRobust(t *testing.T) {
	n := 10000
	if testing.Short() {
		n = 1000
	}
	rng := rand.New(rand.NewPCG(2026, 3))
	compared, broken, extreme, least := 0, 0, 0, math.Inf(1)
	for range n {
		c := wildColumn(rng)
		s, err := growth.NewSolver(c, 0)
		if err != nil {
			t.Fatal(err)
		}
		depths := c.Depths()
		lambda := 2 * math.Pi * depths[len(depths)-1] / math.Pow(10, -6+9*rng.Float64())
		r, err := s.Rate(lambda)
		if err != nil {
			t.Fatalf("%v: %+v", err, c)
		}
		if math.IsNaN(r.Growth) || math.IsInf(r.Growth, 0) || math.IsNaN(r.RelativeError) || r.RelativeError < 0 {
			t.Fatalf("%+v", r)
		}
		if c.ShearRate != 0 {
			continue
		}
		growing, ratio, inversions := count(t, s, c, lambda)
		compared++
		if growing != inversions {
			broken++
			least = math.Min(least, ratio)
			if ratio < 1e15 {
				t.Errorf("%d modes grow for %d inversions, fastest over slowest %.2g", growing, inversions, ratio)
			}
		}
		if ratio > 1e12 {
			extreme++
		}
	}
	t.Logf("%d unstrained columns; rounding broke the count in %d, the least extreme with rates %.1e apart (%d have rates more than 1e12 apart)", compared, broken, least, extreme)
	if compared < n/4 {
		t.Errorf("only %d columns compared", compared)
	}
}

// count returns how many modes of an unstrained column grow, the ratio of its fastest
// to its slowest rate, and how many movable contacts have the denser rock above. C
// must be symmetric and positive: A_ij/f_j.
func count(t *testing.T, s *growth.Solver, c *growth.Column, lambda float64) (growing int, ratio float64, inversions int) {
	t.Helper()
	sys, err := s.System(lambda)
	if err != nil {
		t.Fatal(err)
	}
	for i := range sys.N {
		if sys.Weight[i] < 0 {
			inversions++
		}
		if d := -sys.A[i*sys.N+i] / sys.Weight[i]; !(d > 0) {
			t.Errorf("compliance of state %d is %g", i, d)
		}
	}
	re, _, err := growth.Eigenvalues(sys.A, sys.N)
	if err != nil {
		t.Fatal(err)
	}
	fast, slow := 0.0, math.Inf(1)
	for _, q := range re {
		if q > 0 {
			growing++
		}
		fast, slow = math.Max(fast, math.Abs(q)), math.Min(slow, math.Abs(q))
	}
	return growing, fast / slow, inversions
}

func wildColumn(rng *rand.Rand) *growth.Column {
	n := 2 + rng.IntN(11)
	c := &growth.Column{Gravity: 9.81, Top: growth.Boundary(rng.IntN(3)), Base: growth.FreeSlip + growth.Boundary(rng.IntN(4))}
	var depth, above float64
	for range n {
		z0, h := depth, math.Pow(10, 2+2.5*rng.Float64())
		top := math.Pow(10, 17+8*rng.Float64())
		slope := (2*rng.Float64() - 1) * 8 * math.Ln10 * rng.Float64() / h
		exponent := 1 + 4*rng.Float64()
		c.Layers = append(c.Layers, growth.Layer{Thickness: h, Viscosity: func(z float64) (float64, float64) {
			e := top * math.Exp(slope*(z-z0))
			return e, e / exponent
		}})
		rho := 2600 + 900*rng.Float64()
		c.Jumps = append(c.Jumps, rho-above)
		above = rho
		depth += h
	}
	c.Jumps = append(c.Jumps, 3250-above)
	c.EtaS = math.Pow(10, 17+5*rng.Float64())
	c.EtaN = c.EtaS / (1 + 4*rng.Float64())
	if rng.IntN(2) == 0 {
		e := 1e-15 * rng.NormFloat64()
		c.ShearRate, c.VerticalStrain = e, -e
	}
	return c
}

// FuzzColumn turns bytes into a column: an error or a finite rate, no panic.
func FuzzColumn(f *testing.F) {
	f.Add([]byte{2, 0, 1, 100, 120, 90, 80, 130, 60}, 60e3)
	f.Add([]byte{1, 2, 3, 10, 255, 0}, 1e3)
	f.Fuzz(func(t *testing.T, b []byte, lambda float64) {
		if len(b) < 3 {
			return
		}
		n := 1 + int(b[0])%12
		c := &growth.Column{Gravity: 9.81, Top: growth.Boundary(b[1] % 5), Base: growth.Boundary(b[2] % 5), EtaS: 1e20, EtaN: 1e20}
		at := func(i int) float64 { return float64(b[3+i%max(1, len(b)-3)]) }
		if len(b) == 3 {
			at = func(int) float64 { return 0 }
		}
		above := 0.0
		for i := range n {
			eta := math.Pow(10, 10+at(3*i)/10)
			rho := 2500 + 5*at(3*i+1)
			c.Layers = append(c.Layers, growth.Layer{Thickness: 100 * (at(3*i+2) - 5), Viscosity: func(float64) (float64, float64) { return eta, eta / 2 }})
			c.Jumps = append(c.Jumps, rho-above)
			above = rho
		}
		c.Jumps = append(c.Jumps, 3300-above)
		c.ShearRate = (at(1) - 128) * 1e-17
		s, err := growth.NewSolver(c, 0)
		if err != nil {
			return
		}
		r, err := s.Rate(lambda)
		if err != nil {
			return
		}
		if math.IsNaN(r.Growth) || math.IsInf(r.Growth, 0) || math.IsNaN(r.RelativeError) {
			t.Fatalf("%+v", r)
		}
	})
}

// Heated columns too: diffusing temperature in random layers, with and without a
// background, kH from 0.01 to 100. No failure, no NaN, and the estimate stays small
// where the leading rate is not lost among diffusing modes.
func TestRobustHeated(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 8))
	n, poor := 150, 0
	for range n {
		c := wildColumn(rng)
		d := &growth.Diffusion{FixedFlow: rng.IntN(2) == 0, BaseGradient: 0.01}
		for range len(c.Layers) + 1 {
			constant := func(v float64) func(float64) float64 { return func(float64) float64 { return v } }
			d.HalfSpace = growth.Thermal{PerKelvin: constant(-0.12 * rng.Float64()), Excess: constant(0.03 * rng.Float64()),
				Conductivity: constant(1 + 4*rng.Float64()), Capacity: constant(3e6)}
			d.Layers = append(d.Layers, d.HalfSpace)
		}
		d.Layers = d.Layers[:len(c.Layers)]
		c.Diffusion = d
		s, err := growth.NewSolver(c, 1e-6)
		if err != nil {
			t.Fatal(err)
		}
		depths := c.Depths()
		lambda := 2 * math.Pi * depths[len(depths)-1] / math.Pow(10, -2+4*rng.Float64())
		r, err := s.Rate(lambda)
		if err != nil {
			t.Fatal(err)
		}
		if math.IsNaN(r.Growth) || math.IsInf(r.Growth, 0) || math.IsNaN(r.RelativeError) {
			t.Fatalf("%+v", r)
		}
		if r.RelativeError > 1e-3 {
			poor++
		}
	}
	t.Logf("%d of %d columns have an estimated error above 1e-3", poor, n)
	if poor > n/10 {
		t.Errorf("%d of %d columns are poorly resolved", poor, n)
	}
}
