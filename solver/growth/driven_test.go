package growth_test

import (
	"math"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// At the column's own viscosities the driven flow's matrix is that of System, its W at
// the interfaces A ξ, and what it dissipates what gravity does (derived).
func TestDriven(t *testing.T) {
	for _, strain := range []float64{0, 1e-15} {
		c := checks.Reference()
		c.ShearRate, c.VerticalStrain = strain, -strain
		s, err := growth.NewSolver(c, 1e-12)
		if err != nil {
			t.Fatal(err)
		}
		for _, wavelength := range []float64{12e3, 90e3, 900e3} {
			sys, err := s.System(wavelength)
			if err != nil {
				t.Fatal(err)
			}
			d, err := growth.NewDriven(c, wavelength/1.4, wavelength*1.4, 2.5)
			if err != nil {
				t.Fatal(err)
			}
			k := 2 * math.Pi / wavelength
			a, err := d.Sweep(k)
			if err != nil {
				t.Fatal(err)
			}
			n := sys.N
			var miss, most float64
			for i := range a {
				miss, most = math.Max(miss, math.Abs(a[i]-sys.A[i])), math.Max(most, math.Abs(sys.A[i]))
			}
			if miss > 1e-6*most {
				t.Errorf("d %g, %g m: matrices %g apart", strain, wavelength, miss/most)
			}
			xi := []float64{3, -2, 5, 1, -4, 6}[:n]
			d.Flow(xi)
			var work, loss float64
			for i := range n {
				want := -c.VerticalStrain * xi[i]
				for j := range n {
					want += a[i*n+j] * xi[j]
				}
				if math.Abs(d.W[i]-want) > 1e-9*most {
					t.Errorf("d %g, %g m: W at interface %d is %g, want %g", strain, wavelength, i, d.W[i], want)
				}
				work -= c.Gravity * c.Jumps[i] * xi[i] * d.W[i]
				work -= 4 * xi[i] * c.ShearRate * (d.Below[i] - d.Above[i]) * d.NormalAt[i]
			}
			for i, w := range d.Weight {
				loss += w * (d.EtaS[i]*d.Shear[i]*d.Shear[i] + 4*d.EtaN[i]*d.Normal[i]*d.Normal[i])
			}
			if math.Abs(loss/work-1) > 1e-6 {
				t.Errorf("d %g, %g m: dissipation over work %g", strain, wavelength, loss/work)
			}
		}
	}
	graded := checks.Reference()
	graded.Layers[0].Gradient = func(float64) float64 { return 1e-3 }
	if _, err := growth.NewDriven(graded, 1e4, 2e4, 2.5); err == nil {
		t.Error("a graded layer was accepted")
	}
	if _, err := growth.NewDriven(checks.Reference(), 2e4, 1e4, 2.5); err == nil {
		t.Error("a range from long to short was accepted")
	}
}
