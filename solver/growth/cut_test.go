package growth_test

import (
	"math"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// gradient gives layers of the reference column invented density gradients in kg/m⁴: the
// deepest layer's is unstable and doubles over it, the first one's is stable.
func gradient(e float64) *growth.Column {
	c := checks.Reference()
	c.ShearRate, c.VerticalStrain = e, -e
	last := len(c.Layers) - 1
	var top float64
	for i := range last {
		top += c.Layers[i].Thickness
	}
	c.Layers[last].Gradient = func(z float64) float64 { return 0.01 * (1 + (z-top)/c.Layers[last].Thickness) }
	c.Layers[0].Gradient = func(float64) float64 { return 0.006 }
	return c
}

// Contacts at the Gauss points of parts make the rates of the gradients that they stand for,
// to 3e-3 with one part where viscosity changes by 4.5 e-foldings over a layer, and with
// four to 5e-5 (measured); the shortest wavelength is a tenth of a layer's thickness.
func TestCut(t *testing.T) {
	for _, e := range []float64{0, 1e-15} {
		c := gradient(e)
		s, err := growth.NewSolver(c, 1e-10)
		if err != nil {
			t.Fatal(err)
		}
		for _, n := range []int{1, 2, 4} {
			parts := make([][]float64, len(c.Layers))
			for i := range c.Layers {
				if c.Layers[i].Gradient != nil {
					for q := range n + 1 {
						parts[i] = append(parts[i], float64(q)/float64(n))
					}
				}
			}
			cut, err := c.Cut(parts)
			if err != nil {
				t.Fatal(err)
			}
			g, err := growth.NewSolver(cut.Column, 1e-10)
			if err != nil {
				t.Fatal(err)
			}
			for _, wavelength := range []float64{10e3, 25e3, 90e3, 300e3, 1000e3} {
				want, err := s.Rate(wavelength)
				if err != nil {
					t.Fatal(err)
				}
				got, err := g.Rate(wavelength)
				if err != nil {
					t.Fatal(err)
				}
				most := map[int]float64{1: 3e-3, 2: 5e-4, 4: 5e-5}[n]
				if wavelength < 20e3 {
					most = 1.5e-3
				}
				t.Logf("e %g, %d parts, %g km: %.6g, off by %+.2g", e, n, wavelength/1e3, want.Growth, got.Growth/want.Growth-1)
				if !(math.Abs(got.Growth/want.Growth-1) < most) {
					t.Errorf("e %g, %d parts, %g m: %g 1/s, want %g", e, n, wavelength, got.Growth, want.Growth)
				}
			}
		}
	}
	c := gradient(0)
	if _, err := c.Cut(nil); err == nil {
		t.Error("a gradient without parts was accepted")
	}
	c.Layers[0].Gradient = func(float64) float64 { return math.NaN() }
	if _, err := c.Cut([][]float64{{0, 1}, nil, nil, nil, {0, 1}}); err == nil {
		t.Error("a gradient that is not a number was accepted")
	}
}

// Rock beyond the parts is felt at the edge it came to, and all together weighs what the
// gradient does, also where rock of the parts has gone.
func TestCutBeyond(t *testing.T) {
	c := gradient(0)
	last := len(c.Layers) - 1
	for _, v := range [][]float64{{0.1, 0.9}, {-0.2, 1.3}, {0.2, 0.6, 1}} {
		cut, err := c.Cut([][]float64{{0, 1}, nil, nil, nil, v})
		if err != nil {
			t.Fatal(err)
		}
		top, sum, before := cut.Contact[last], 0.0, c.Jumps[last]+c.Jumps[last+1]
		for _, j := range cut.Column.Jumps[top:] {
			sum += j
		}
		want := 0.015 * c.Layers[last].Thickness // the mean gradient's
		if math.Abs((sum-before)/want-1) > 1e-12 {
			t.Errorf("parts %g: %g kg/m³, want %g", v, sum-before, want)
		}
		above := cut.Column.Jumps[top] - c.Jumps[last]
		if (v[0] > 0) != (above > 0) {
			t.Errorf("parts %g: %g kg/m³ above them", v, above)
		}
		var depth float64
		for i := range cut.Column.Layers {
			if h := cut.Column.Layers[i].Thickness; !(h > 0) {
				t.Errorf("parts %g: a layer of %g m", v, h)
			}
			depth += cut.Column.Layers[i].Thickness
		}
		if math.Abs(depth/80e3-1) > 1e-12 {
			t.Errorf("parts %g: %g m deep", v, depth)
		}
	}
}
