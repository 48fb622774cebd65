package drip_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"keelfall/solver/checks"
	"keelfall/solver/drip"
	"keelfall/solver/growth"
)

// stack is a column with a free surface, a graded layer and a dense root over a
// half-space.
func stack() *growth.Column {
	c := checks.Layered(growth.Free, growth.HalfSpace, []float64{20e3, 15e3, 12e3}, []float64{2750, 2900, 3450},
		[]float64{1e23, 3e21, 1e21}, 3270, 4e20, 9.81)
	c.Layers[1].Gradient = func(float64) float64 { return 80 / 15e3 }
	c.Jumps[2] -= 80
	return c
}

// The exact solution agrees with gonum's matrix exponential (a general-purpose
// library), at times where that one is accurate.
func TestFrozenAgainstExponential(t *testing.T) {
	s, err := growth.NewSolver(stack(), 1e-11)
	if err != nil {
		t.Fatal(err)
	}
	for _, wavelength := range []float64{30e3, 90e3, 400e3} {
		sys, err := s.System(wavelength)
		if err != nil {
			t.Fatal(err)
		}
		f, err := drip.NewFrozen(sys, 3)
		if err != nil {
			t.Fatal(err)
		}
		q := f.Fastest()
		if q <= 0 {
			t.Fatalf("%g km: nothing grows", wavelength/1e3)
		}
		for _, folds := range []float64{0.01, 0.5, 3} {
			at := folds / q
			scaled := mat.NewDense(sys.N, sys.N, nil)
			for i := range sys.N {
				for j := range sys.N {
					scaled.Set(i, j, sys.A[i*sys.N+j]*at)
				}
			}
			var e mat.Dense
			e.Exp(scaled)
			b := sys.Interface[3]
			if want, got := e.At(b, b), f.Base(at); math.Abs(got/want-1) > 1e-7 {
				t.Errorf("%g km, %g e-foldings: %.12g, exponential %.12g", wavelength/1e3, folds, got, want)
			}
		}
	}
}

// One driven interface grows as exp(qt), so a drip takes ln(ratio)/q.
func TestTimeOfOneInterface(t *testing.T) {
	c := checks.HangingLayer(10e3, 100, 1e21, 9.81)
	s, err := growth.NewSolver(c, 0)
	if err != nil {
		t.Fatal(err)
	}
	sys, err := s.System(30e3)
	if err != nil {
		t.Fatal(err)
	}
	f, err := drip.NewFrozen(sys, 1)
	if err != nil {
		t.Fatal(err)
	}
	q := checks.HangingRate(10e3, 100, 1e21, 9.81, 2*math.Pi/30e3)
	for _, ratio := range []float64{1.001, 20, 1e6} {
		if got, want := f.Time(ratio, 1e20), math.Log(ratio)/q; math.Abs(got/want-1) > 1e-9 {
			t.Errorf("ratio %g: %.12g s, want %.12g", ratio, got, want)
		}
	}
	if got := f.Time(20, 0.5*math.Log(20)/q); !math.IsInf(got, 1) {
		t.Errorf("before the horizon: %g s, want never", got)
	}
}
