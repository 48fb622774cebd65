package growth_test

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"os"
	"testing"

	"keelfall/solver/checks"
	"keelfall/solver/growth"
)

// referenceRates reads the stored rates of checks.Reference by wavelength: 50 digits
// or more, made by testdata/growth/reference.py, a method of its own.
func referenceRates(t testing.TB) (wavelength, rate []float64) {
	t.Helper()
	f, err := os.Open("../../testdata/growth/reference.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for sc := bufio.NewScanner(f); sc.Scan(); {
		var l, q float64
		if n, _ := fmt.Sscan(sc.Text(), &l, &q); n == 2 {
			wavelength, rate = append(wavelength, l), append(rate, q)
		}
	}
	return wavelength, rate
}

// Every stored reference rate is met to 1e-8, and the estimate covers the error.
func TestReferenceRates(t *testing.T) {
	wavelength, want := referenceRates(t)
	if len(wavelength) < 20 {
		t.Fatalf("%d stored rates, want at least 20", len(wavelength))
	}
	got, err := growth.Evaluate(context.Background(), checks.Reference(), wavelength, growth.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, r := range got {
		e := math.Abs(r.Growth/want[i] - 1)
		if e > 1e-8 || e > r.RelativeError {
			t.Errorf("%g km: off by %.2g, estimate %.2g", wavelength[i]/1e3, e, r.RelativeError)
		}
	}
}

// BenchmarkSpectrum states µs per wavenumber, everything included (viscosities, mesh,
// error estimate, rates), for 200 wavelengths from 5 to 2000 km of the reference
// column, on one and on two cores, and the worst error against the stored rates.
func BenchmarkSpectrum(b *testing.B) {
	const n = 200
	wavelengths := make([]float64, n)
	for i := range wavelengths {
		wavelengths[i] = 5e3 * math.Pow(400, float64(i)/(n-1))
	}
	stored, want := referenceRates(b)
	got, err := growth.Evaluate(context.Background(), checks.Reference(), stored, growth.Options{})
	if err != nil {
		b.Fatal(err)
	}
	worst := 0.0
	for i := range got {
		worst = math.Max(worst, math.Abs(got[i].Growth/want[i]-1))
	}
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers=%d", workers), func(b *testing.B) {
			b.ReportAllocs()
			c := checks.Reference()
			for b.Loop() {
				if _, err := growth.Evaluate(context.Background(), c, wavelengths, growth.Options{Workers: workers}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/1e3/n/float64(b.N), "µs/k")
			b.ReportMetric(worst*1e12, "worst-error/1e-12")
		})
	}
}

// BenchmarkRate is one wavenumber on a mesh that is there: the inner loop alone.
func BenchmarkRate(b *testing.B) {
	s, err := growth.NewSolver(checks.Reference(), 0)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := s.Rate(250e3); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkSpectrumHeated is 200 wavelengths with diffusing temperature, one core, at
// 1e-6.
func BenchmarkSpectrumHeated(b *testing.B) {
	wavelengths := make([]float64, 200)
	for i := range wavelengths {
		wavelengths[i] = 5e3 * math.Pow(400, float64(i)/199)
	}
	c := checks.ReferenceHeated()
	b.ReportAllocs()
	for b.Loop() {
		if _, err := growth.Evaluate(context.Background(), c, wavelengths, growth.Options{Workers: 1, Tolerance: 1e-6}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(b.Elapsed().Seconds()/float64(b.N), "s/spectrum")
}
