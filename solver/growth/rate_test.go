package growth_test

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// randomColumn draws layers of exponential or constant viscosity, up to eight decades
// across one layer, jumps between layers, any boundaries, with or without background.
func randomColumn(rng *rand.Rand) (*growth.Column, float64) {
	n := 1 + rng.IntN(8)
	c := &growth.Column{Gravity: 9.81, Top: growth.Boundary(rng.IntN(3)), Base: growth.FreeSlip + growth.Boundary(rng.IntN(4))}
	var depth, above float64
	for range n {
		z0, h := depth, math.Pow(10, 2.5+2*rng.Float64())
		top := math.Pow(10, 18+7*rng.Float64())
		slope := (rng.Float64()*2 - 1) * 8 * math.Ln10 * rng.Float64() / h
		exponent := 1 + 4*rng.Float64()
		if rng.IntN(2) == 0 {
			exponent = 1
		}
		c.Layers = append(c.Layers, growth.Layer{Thickness: h, Viscosity: func(z float64) (float64, float64) {
			e := top * math.Exp(slope*(z-z0))
			return e, e / exponent
		}})
		rho := 2700 + 800*rng.Float64()
		c.Jumps = append(c.Jumps, rho-above)
		above = rho
		depth += h
	}
	c.Jumps = append(c.Jumps, 3250-above)
	c.EtaS = math.Pow(10, 18+4*rng.Float64())
	c.EtaN = c.EtaS
	if rng.IntN(2) == 0 {
		e := 1e-15 * rng.NormFloat64()
		c.ShearRate, c.VerticalStrain = e, -e
	}
	return c, depth
}

// The error estimate is honest: the rate at a coarse tolerance differs from one at 1e-12
// by no more than it says, but for fewer than 1 column in 100.
func TestErrorEstimate(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 5))
	total, under := 0, 0
	worst := 0.0
	for range 400 {
		c, depth := randomColumn(rng)
		lambda := depth * math.Pow(10, -1.2+3*rng.Float64())
		coarse, err := growth.NewSolver(c, 1e-6)
		if err != nil {
			t.Fatal(err)
		}
		fine, err := growth.NewSolver(c, 1e-12)
		if err != nil {
			t.Fatal(err)
		}
		a, err := coarse.Rate(lambda)
		if err != nil {
			t.Fatal(err)
		}
		b, err := fine.Rate(lambda)
		if err != nil {
			t.Fatal(err)
		}
		size := math.Hypot(b.Growth, b.Imaginary)
		if size == 0 {
			continue
		}
		total++
		real := math.Hypot(a.Growth-b.Growth, a.Imaginary-b.Imaginary) / size
		if real > a.RelativeError+b.RelativeError {
			under++
			worst = math.Max(worst, real)
		}
	}
	t.Logf("%d columns, %d underestimated, the worst with a true error of %.1e", total, under, worst)
	if total < 350 || under > total/100 {
		t.Errorf("%d of %d estimates are too small", under, total)
	}
}

// Any number of workers gives the same bits.
func TestWorkers(t *testing.T) {
	var lambda []float64
	for i := range 100 {
		lambda = append(lambda, 5e3*math.Pow(400, float64((i*37)%100)/99))
	}
	one, err := growth.Evaluate(context.Background(), checks.Reference(), lambda, growth.Options{Workers: 1})
	if err != nil {
		t.Fatal(err)
	}
	for _, w := range []int{2, 3, 7} {
		many, err := growth.Evaluate(context.Background(), checks.Reference(), lambda, growth.Options{Workers: w})
		if err != nil {
			t.Fatal(err)
		}
		for i := range one {
			if one[i] != many[i] {
				t.Fatalf("%d workers: %v at %g m, one worker %v", w, many[i], lambda[i], one[i])
			}
		}
	}
}

// Twice as stiff grows half as fast; twice the gravity twice as fast.
func TestScaling(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 9))
	for range 50 {
		c, depth := randomColumn(rng)
		c.ShearRate, c.VerticalStrain = 0, 0
		lambda := depth * math.Pow(10, rng.Float64()*2-0.5)
		rate := func(c *growth.Column) growth.Rate {
			s, err := growth.NewSolver(c, 0)
			if err != nil {
				t.Fatal(err)
			}
			r, err := s.Rate(lambda)
			if err != nil {
				t.Fatal(err)
			}
			return r
		}
		base := rate(c)
		stiff := *c
		stiff.EtaS, stiff.EtaN = 2*c.EtaS, 2*c.EtaN
		stiff.Layers = nil
		for _, l := range c.Layers {
			stiff.Layers = append(stiff.Layers, growth.Layer{Thickness: l.Thickness, Viscosity: func(z float64) (float64, float64) {
				s, n := l.Viscosity(z)
				return 2 * s, 2 * n
			}})
		}
		heavy := *c
		heavy.Gravity *= 2
		for _, v := range []struct {
			name      string
			got, want growth.Rate
			factor    float64
		}{{"viscosity × 2", rate(&stiff), base, 0.5}, {"gravity × 2", rate(&heavy), base, 2}} {
			if d := math.Abs(v.got.Growth - v.factor*v.want.Growth); d > 1e-6*math.Abs(base.Growth)+4*base.RelativeError*math.Abs(base.Growth) {
				t.Errorf("%s: %g, want %g", v.name, v.got.Growth, v.factor*v.want.Growth)
			}
		}
	}
}

// The spectrum finds the same fastest wavelength whatever range it starts from.
func TestSpectrumRange(t *testing.T) {
	c := checks.TwoEqualLayers(10e3, 100, 1e21, 9.81)
	for _, o := range []growth.Options{{}, {From: 3e3, To: 900e3}, {From: 20e3, To: 30e3}, {From: 24e3}} {
		sp, err := growth.Compute(context.Background(), c, o)
		if err != nil {
			t.Fatal(err)
		}
		if d := math.Abs(sp.Fastest.Wavelength/25672.69042 - 1); d > 1e-6 || sp.Fastest.AtRangeEdge || len(sp.Peaks) != 1 {
			t.Errorf("from %g to %g: fastest %g m (edge %v), %d peaks", o.From, o.To, sp.Fastest.Wavelength, sp.Fastest.AtRangeEdge, len(sp.Peaks))
		}
	}
	sp, err := growth.Compute(context.Background(), c, growth.Options{From: 100e3, To: 200e3})
	if err != nil {
		t.Fatal(err)
	}
	if !sp.Fastest.AtRangeEdge || sp.Fastest.Wavelength != 100e3 {
		t.Errorf("a range without the maximum: fastest %g m, edge %v", sp.Fastest.Wavelength, sp.Fastest.AtRangeEdge)
	}
}

// What cannot be solved is refused, with the numbers.
func TestRefused(t *testing.T) {
	good := func() *growth.Column { return checks.TwoEqualLayers(10e3, 100, 1e21, 9.81) }
	for name, spoil := range map[string]func(*growth.Column){
		"no layer":           func(c *growth.Column) { c.Layers = nil },
		"negative thickness": func(c *growth.Column) { c.Layers[0].Thickness = -1 },
		"NaN viscosity":      func(c *growth.Column) { c.Layers[1].Viscosity = checks.Uniform(math.NaN()) },
		"zero viscosity":     func(c *growth.Column) { c.Layers[1].Viscosity = checks.Uniform(0) },
		"NaN jump":           func(c *growth.Column) { c.Jumps[1] = math.NaN() },
		"missing jump":       func(c *growth.Column) { c.Jumps = c.Jumps[:2] },
		"inviscid top":       func(c *growth.Column) { c.Top = growth.Inviscid },
		"free base":          func(c *growth.Column) { c.Base = growth.Free },
		"half-space of 0":    func(c *growth.Column) { c.Base = growth.HalfSpace },
		"infinite gravity":   func(c *growth.Column) { c.Gravity = math.Inf(1) },
	} {
		c := good()
		spoil(c)
		if _, err := growth.NewSolver(c, 0); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
	s, err := growth.NewSolver(good(), 0)
	if err != nil {
		t.Fatal(err)
	}
	for _, l := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := s.Rate(l); !errors.Is(err, growth.ErrWavelength) {
			t.Errorf("wavelength %g: %v", l, err)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := growth.Compute(ctx, good(), growth.Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}
