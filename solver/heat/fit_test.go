package heat_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat"

	"keelfall/column"
	"keelfall/solver/heat"
)

const (
	fitDepth   = 80e3  // m
	fitSurface = 283.0 // K
	fitRho     = 3000.0
)

// plain is one layer of constant conductivity 2.5 W/m/K.
func plain(heatProduction float64) *column.Column {
	l := layer("rock", fitDepth, constant(2.5), column.HeatProduction{Top: heatProduction})
	l.Density = column.Uniform(fitRho)
	return &column.Column{Gravity: 9.81, Surface: column.Surface{Temperature: fitSurface}, Layers: []column.Layer{l},
		Base: column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 1500}}
}

// scattered draws samples around a line of 14 K/km, two of them far apart.
func scattered(r *rand.Rand, depthError, pressure bool) []heat.Sample {
	var out []heat.Sample
	for i := range 3 + r.IntN(18) {
		z := 5e3 + 70e3*r.Float64()
		if i < 2 {
			z = []float64{20e3, 70e3}[i]
		}
		s := heat.Sample{Depth: z, Temperature: fitSurface + 0.014*z + 20*r.NormFloat64(), TemperatureError: 10 + 30*r.Float64()}
		if depthError {
			s.TemperatureError, s.DepthError = 30, 2500
		}
		if pressure {
			s.HasPressure, s.Pressure, s.PressureError = true, fitRho*9.81*z, fitRho*9.81*s.DepthError
			s.Depth, s.DepthError = 0, 0
		}
		out = append(out, s)
	}
	return out
}

// draws runs a test twenty times, each with its own numbers.
func draws(t *testing.T, one func(t *testing.T, r *rand.Rand)) {
	for seed := range uint64(20) {
		t.Run(fmt.Sprint(seed), func(t *testing.T) { one(t, rand.New(rand.NewPCG(seed, 1))) })
	}
}

func mustFit(t *testing.T, f heat.Fitting) *heat.Fit {
	r, err := heat.FitGeotherm(f)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// TestFitLine: constant k and no heat production make a straight geotherm through the
// surface's temperature, so the fit is weighted regression through a point:
// T_b = T_s + L Σ w z (T − T_s)/Σ w z² ± L/√(Σ w z²) (derived); gonum/stat is a second
// hand.
func TestFitLine(t *testing.T) {
	draws(t, func(t *testing.T, r *rand.Rand) {
		samples := scattered(r, false, r.IntN(2) > 0)
		f := mustFit(t, heat.Fitting{Column: plain(0), Samples: samples})
		var z, T, w []float64
		var szz, szT float64
		for _, s := range samples {
			at := s.Depth
			if s.HasPressure {
				at = s.Pressure / (fitRho * 9.81)
			}
			z, T, w = append(z, at), append(T, s.Temperature-fitSurface), append(w, 1/(s.TemperatureError*s.TemperatureError))
			szz += w[len(w)-1] * at * at
			szT += w[len(w)-1] * at * (s.Temperature - fitSurface)
		}
		want := fitSurface + fitDepth*szT/szz
		_, slope := stat.LinearRegression(z, T, w, true)
		b := f.Fitted[0]
		if !close(b.Value, want, 1e-9) || !close(b.Value, fitSurface+fitDepth*slope, 1e-9) || !close(b.Error, fitDepth/math.Sqrt(szz), 1e-7) {
			t.Fatalf("%+v; want %g ± %g (gonum %g)", b, want, fitDepth/math.Sqrt(szz), fitSurface+fitDepth*slope)
		}
		var chi2 float64
		for i, r := range f.Residuals {
			chi2 += w[i] * r.Residual * r.Residual
			if model := fitSurface + (want-fitSurface)*z[i]/fitDepth; !close(r.Model, model, 1e-8) || r.Depth-z[i] > 1e-6*z[i] || r.Uncertainty != samples[i].TemperatureError {
				t.Fatalf("%+v; want %g K", r, model)
			}
		}
		if !close(f.ChiSquare, chi2, 1e-12) || f.Freedom != len(samples)-1 || f.Condition != 1 || f.Column.Base.Temperature != b.Value || !close(f.Covariance[0][0], b.Error*b.Error, 1e-15) {
			t.Fatalf("%+v", f)
		}
	})
}

// TestFitBothErrors: with one ratio δ = σ_T²/σ_z² and the line through a point, the
// minimum of Σ (y − s x)²/(σ_T² + s² σ_z²) is s = (Syy − δ Sxx + √((Syy − δ Sxx)² +
// 4 δ Sxy²))/(2 Sxy) (Deming's regression through a point; derived).
func TestFitBothErrors(t *testing.T) {
	draws(t, func(t *testing.T, r *rand.Rand) {
		samples := scattered(r, true, r.IntN(2) > 0)
		f := mustFit(t, heat.Fitting{Column: plain(0), Samples: samples})
		const delta = 30.0 * 30 / (2500.0 * 2500)
		var xx, xy, yy float64
		for _, s := range samples {
			x, y := s.Depth, s.Temperature-fitSurface
			if s.HasPressure {
				x = s.Pressure / (fitRho * 9.81)
			}
			xx, xy, yy = xx+x*x, xy+x*y, yy+y*y
		}
		d := yy - delta*xx
		slope := (d + math.Sqrt(d*d+4*delta*xy*xy)) / (2 * xy)
		if got := (f.Fitted[0].Value - fitSurface) / fitDepth; !close(got, slope, 1e-7) {
			t.Fatalf("slope %.12g, want %.12g", got, slope)
		}
	})
}

// TestFitHeatProduction: with H uniform the geotherm T_s + (T_b − T_s) z/L +
// f H z (L − z)/2k is linear in T_b and f; linear least squares by gonum's QR is the
// second hand, for values and covariance.
func TestFitHeatProduction(t *testing.T) {
	const H, k = 0.8e-6, 2.5
	draws(t, func(t *testing.T, r *rand.Rand) {
		samples := scattered(r, false, false)
		for i := range samples {
			s := &samples[i]
			s.Temperature += 0.9 * H * s.Depth * (fitDepth - s.Depth) / (2 * k)
		}
		n := len(samples)
		A, y := mat.NewDense(n, 2, nil), mat.NewVecDense(n, nil)
		for i, s := range samples {
			A.Set(i, 0, s.Depth/fitDepth/s.TemperatureError)
			A.Set(i, 1, H*s.Depth*(fitDepth-s.Depth)/(2*k)/s.TemperatureError)
			y.SetVec(i, (s.Temperature-fitSurface)/s.TemperatureError)
		}
		var qr mat.QR
		qr.Factorize(A)
		var x mat.VecDense
		if err := qr.SolveVecTo(&x, false, y); err != nil {
			t.Fatal(err)
		}
		f := mustFit(t, heat.Fitting{Column: plain(H), Samples: samples, HeatProduction: true})
		if x.AtVec(1) < 0 {
			if f.Fitted[1].Value != 0 || !f.Fitted[1].Held || !strings.Contains(strings.Join(f.Notes, "\n"), "held at 0") {
				t.Fatalf("a factor of %g: %+v", x.AtVec(1), f)
			}
			return
		}
		if !close(f.Fitted[0].Value, fitSurface+x.AtVec(0), 1e-7) || math.Abs(f.Fitted[1].Value-x.AtVec(1)) > 1e-6 {
			t.Fatalf("%+v; want %g and %g", f.Fitted, fitSurface+x.AtVec(0), x.AtVec(1))
		}
		var normal, covariance mat.Dense
		normal.Mul(A.T(), A)
		if err := covariance.Inverse(&normal); err != nil {
			t.Fatal(err)
		}
		for i := range 2 {
			for j := range 2 {
				if !close(f.Covariance[i][j], covariance.At(i, j), 1e-5) {
					t.Fatalf("covariance %v, want %v", f.Covariance, mat.Formatted(&covariance))
				}
			}
		}
	})
}

// TestFitFindsItself: points taken off a geotherm give it back: k(T, P), radiogenic
// layers, a basal heat flow, pressures.
func TestFitFindsItself(t *testing.T) {
	c := plain(0)
	c.Base = column.Base{Boundary: column.Rigid, HasHeatFlow: true, HeatFlow: 0.032}
	c.Layers[0].Conductivity = column.Conductivity{Reference: 3, PerKelvin: 1e-3, PerPascal: 4e-11, At: 273}
	c.Layers[0].HeatProduction = column.HeatProduction{Top: 2e-6, DecayLength: 12e3}
	c.Layers[0].Density = column.EquationOfState{Reference: 2900, Expansivity: 3e-5, Compressibility: 1e-11, ReferenceTemperature: 293}
	p, err := heat.Solve(c)
	if err != nil {
		t.Fatal(err)
	}
	var samples []heat.Sample
	for _, z := range []float64{12e3, 30e3, 45e3, 60e3} {
		T, P, _ := p.Layers[0].At(z)
		samples = append(samples, heat.Sample{Temperature: T, TemperatureError: 20, Pressure: P, PressureError: 5e7, HasPressure: true})
	}
	start := *c
	start.Base.HeatFlow = 0.02
	f := mustFit(t, heat.Fitting{Column: &start, Samples: samples, HeatProduction: true})
	if !close(f.Fitted[0].Value, 0.032, 1e-6) || !close(f.Fitted[1].Value, 1, 1e-6) || f.ChiSquare > 1e-9 || start.Base.HeatFlow != 0.02 || f.Fitted[0].Start != 0.02 {
		t.Errorf("%+v", f)
	}
	if f.Fitted[0].Key != "base.heat-flow" || f.Fitted[1].Key != "heat-production" || f.Residuals[2].Depth < 44.99e3 || f.Residuals[2].Depth > 45.01e3 {
		t.Errorf("%+v", f)
	}
	none := plain(0)
	none.Base.HasTemperature = false
	if f := mustFit(t, heat.Fitting{Column: none, Samples: samples}); f.Fitted[0].Key != "base.temperature" || !f.Column.Base.HasTemperature {
		t.Errorf("%+v", f)
	}
}

// TestFitInWords: what cannot be constrained is said.
func TestFitInWords(t *testing.T) {
	at := func(z, T, e float64) heat.Sample { return heat.Sample{Depth: z, Temperature: T, TemperatureError: e} }
	for _, k := range []struct {
		name    string
		samples []heat.Sample
		factor  bool
		want    string
		err     string
	}{
		{"shallow and vague", []heat.Sample{at(2e3, 310, 30), at(3e3, 330, 30)}, false, "do not constrain the basal temperature", ""},
		{"shallow", []heat.Sample{at(2e3, 310, 3), at(3e3, 330, 3)}, false, "the deepest point lies at 3 km of 80 km", ""},
		{"close together", []heat.Sample{at(40e3, 900, 20), at(40.5e3, 905, 20), at(39.5e3, 890, 20)}, true, "only together", ""},
		{"one depth", []heat.Sample{at(40e3, 900, 20), at(40e3, 905, 20)}, true, "", "the basal temperature and the factor on heat production"},
		{"one point for two", []heat.Sample{at(40e3, 900, 20)}, true, "", "1 sample for 2 values"},
		{"as many as points", []heat.Sample{at(40e3, 900, 20)}, false, "cannot be tested", ""},
		{"scatter", []heat.Sample{at(40e3, 900, 1), at(60e3, 900, 1), at(20e3, 700, 1)}, false, "scatter more than their errors allow", ""},
		{"no scatter", []heat.Sample{at(40e3, 883, 100), at(60e3, 1183, 100), at(20e3, 583, 100), at(70e3, 1333, 100), at(65e3, 1258, 100)}, false, "scatter less than their errors", ""},
		{"no heat", []heat.Sample{at(40e3, 600, 2), at(60e3, 1183, 2), at(20e3, 300, 2)}, true, "held at 0", ""},
		{"below", []heat.Sample{at(90e3, 900, 20)}, false, "", "sample 1: depth 90000 m lies outside the column"},
		{"pressure below", []heat.Sample{{Name: "K7", Pressure: 4e9, Temperature: 900, TemperatureError: 20, HasPressure: true}}, false, "", "sample K7: pressure 4 GPa is more than that at the column's base, 2.354 GPa"},
		{"no error", []heat.Sample{at(40e3, 900, 0)}, false, "", "sample 1: has no error"},
		{"NaN", []heat.Sample{at(40e3, math.NaN(), 1)}, false, "", "temperature NaN K"},
		{"at the surface", []heat.Sample{at(0, 283, 1)}, false, "", "the points do not depend on the basal temperature"},
	} {
		made := 0.0
		if k.factor {
			made = 1e-6
		}
		f, err := heat.FitGeotherm(heat.Fitting{Column: plain(made), Samples: k.samples, HeatProduction: k.factor})
		switch {
		case k.err != "":
			if err == nil || !strings.Contains(err.Error(), k.err) {
				t.Errorf("%s: %v", k.name, err)
			}
		case err != nil:
			t.Errorf("%s: %v", k.name, err)
		case !strings.Contains(strings.Join(f.Notes, "\n"), k.want):
			t.Errorf("%s: %q", k.name, f.Notes)
		}
	}
	if _, err := heat.FitGeotherm(heat.Fitting{Column: plain(0), Samples: []heat.Sample{at(4e4, 900, 2), at(5e4, 900, 2)}, HeatProduction: true}); err == nil || !strings.Contains(err.Error(), "no layer produces heat") {
		t.Error(err)
	}
}
