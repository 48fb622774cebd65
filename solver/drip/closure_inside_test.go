package drip

import (
	"math"
	"math/rand/v2"
	"testing"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"
)

// rocks is a column of a mixture with friction, of creep beside diffusion under limits,
// and of a number, invented.
func rocks(t *testing.T) *state.State {
	t.Helper()
	creep := func(laws ...rheology.Law) column.Viscosity {
		return column.Viscosity{Creep: &rheology.Creep{Laws: laws}, Exponent: 1, Factor: 1}
	}
	rock := func(density float64, v column.Viscosity) column.Rock {
		return column.Rock{Density: column.Uniform(density), Viscosity: v, Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000}
	}
	fast := rheology.Law{Name: "power", A: 1e-16, N: 3.5, E: 200e3}
	slow := rheology.Law{Name: "line", A: 1e-12, N: 1, E: 200e3}
	yields := rock(2800, creep(fast))
	yields.Friction = &rheology.Friction{Cohesion: 2e7, Angle: 0.5}
	s, err := state.New(&column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Layers: []column.Layer{
			{Name: "yields", Thickness: 20e3, Rock: yields},
			{Name: "both", Thickness: 20e3, Root: true, Rock: rock(3400, creep(fast, slow))},
			{Name: "number", Thickness: 10e3, Rock: rock(3200, column.Viscosity{Top: 1e21, Bottom: 1e20, Exponent: 4, Factor: 1})},
		},
		Base:   column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 1273.15},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e25}}, 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The tables agree with the law to 1e-6, over 18 decades of strain rate.
func TestLawTable(t *testing.T) {
	s := rocks(t)
	r := rand.New(rand.NewPCG(1, 2))
	for layer := range 3 {
		top, bottom := s.Span(layer)
		for _, share := range []float64{0.1, 0.5, 0.9} {
			l := newNodeLaw(s, layer, top+share*(bottom-top), false)
			var worst float64
			for range 2000 {
				ln := -60 + 40*r.Float64()
				want, err := l.exact(ln)
				if err != nil {
					t.Fatal(err)
				}
				eta, _, _, err := l.eta(math.Exp(2 * ln))
				if err != nil {
					t.Fatal(err)
				}
				worst = math.Max(worst, math.Abs(math.Log(eta)-want.y))
			}
			if worst > 1e-6 {
				t.Errorf("layer %d at %g of it: ln η off by %g", layer, share, worst)
			}
		}
	}
}

// The coarse tables, for columns that change, agree with the law to 1e-4, and to 2e-5 on
// average.
func TestCoarseLaw(t *testing.T) {
	s := rocks(t)
	r := rand.New(rand.NewPCG(5, 6))
	for layer := range 3 {
		top, bottom := s.Span(layer)
		for _, share := range []float64{0.1, 0.5, 0.9} {
			l := newNodeLaw(s, layer, top+share*(bottom-top), true)
			var worst, mean, slopes float64
			const n = 2000
			for range n {
				ln := -60 + 40*r.Float64()
				want, err := l.exact(ln)
				if err != nil {
					t.Fatal(err)
				}
				eta, _, s, err := l.eta(math.Exp(2 * ln))
				if err != nil {
					t.Fatal(err)
				}
				off := math.Abs(math.Log(eta) - want.y)
				worst, mean = math.Max(worst, off), mean+off/n
				slopes += math.Abs(s-want.tangent) / n
			}
			if worst > 1e-4 || mean > 2e-5 || slopes > 0.02 {
				t.Errorf("layer %d at %g of it: ln η off by %g, on average %g, exponents by %g", layer, share, worst, mean, slopes)
			}
		}
	}
}

// Without an undulation beside the background the closure is exact, where both are equal it
// is short by its worst, without background the table holds (derived); between them all
// shares lie within those.
func TestStrainedCorrections(t *testing.T) {
	for _, n := range []float64{1, 2, 3, 4, 5} {
		bare := Corrections(n, 1.5, 0.1)
		at := func(over float64) Correction { return strainedCorrections(n, 1.5, 0.1, over) }
		lead := bare.Centre / bare.Closure
		for _, v := range [][2]float64{{at(1e-4).Closure, 1}, {at(1e-4).Centre, 1}, {at(1).Closure, 1 - Shortfall(n, true)},
			{at(1e6).Closure, bare.Closure}, {at(1e6).Centre, bare.Centre}, {at(math.Inf(1)).Centre, bare.Centre}} {
			if math.Abs(v[0]/v[1]-1) > 1e-6 {
				t.Errorf("n = %g: %g, want %g", n, v[0], v[1])
			}
		}
		for over := 0.01; over < 100; over *= 1.3 {
			c := at(over)
			least := math.Min(1-Shortfall(n, true), bare.Closure)
			if c.Closure > 1 || c.Closure < least-1e-9 || c.Centre > c.Closure || c.Centre < lead*c.Closure-1e-12 {
				t.Errorf("n = %g, %g: %+v", n, over, c)
			}
		}
	}
}

// everything is a column of one layer for every kind of law: friction around creep, under
// both limits, mixed, with a grain size that follows the stress, and low-temperature
// plasticity, invented but for that.
func everything(t *testing.T) *state.State {
	t.Helper()
	fast := rheology.Law{Name: "power", A: 1e-16, N: 3.5, E: 200e3}
	slow := rheology.Law{Name: "line", A: 1e-12, N: 1, E: 200e3}
	grains := rheology.Law{Name: "grains", A: 1e-21, N: 1, M: 3, E: 250e3}
	plastic, err := rheology.Find("dry olivine low-temperature plasticity Mei 2010")
	if err != nil {
		t.Fatal(err)
	}
	frictions := []*rheology.Friction{nil, {Cohesion: 2e7, Angle: 0.5}, {Cohesion: 1e6, Angle: 0.1, PoreFluid: 0.9}}
	c := &column.Column{Gravity: 9.81, Surface: column.Surface{Boundary: column.Free, Temperature: 273.15},
		Base:   column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 1373.15},
		Limits: rheology.Limits{Lowest: 1e18, Highest: 1e25}}
	for _, f := range frictions {
		for _, k := range []rheology.Creep{
			{Laws: []rheology.Law{fast}}, {Laws: []rheology.Law{fast, slow}}, {Laws: []rheology.Law{slow}},
			{Laws: []rheology.Law{fast, plastic}},
			{Laws: []rheology.Law{fast, grains}, Piezometer: &rheology.Piezometer{B: 2e-2, P: 1.3}},
			{Mixtures: []rheology.Mixture{{Rule: rheology.IsoStrainRate, Phases: []rheology.Phase{{Fraction: 0.6, Laws: []rheology.Law{fast}}, {Fraction: 0.4, Laws: []rheology.Law{slow}}}}}},
		} {
			c.Layers = append(c.Layers, column.Layer{Name: string(rune('a' + len(c.Layers))), Thickness: 4e3, Root: len(c.Layers) == 17,
				Rock: column.Rock{Density: column.Uniform(3000), Viscosity: column.Viscosity{Creep: &k, Exponent: 1, Factor: 1}, Friction: f,
					Conductivity: column.Conductivity{Reference: 3}, HeatCapacity: 1000}})
		}
	}
	s, err := state.New(c, 1e-15)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The tables of every kind of law agree with the law from 1e-22 to 1e-8 1/s, the law is
// asked itself nowhere, and stress never falls.
func TestEveryLawTable(t *testing.T) {
	s := everything(t)
	r := rand.New(rand.NewPCG(7, 8))
	low, high := math.Log(1e-22), math.Log(1e-8)
	for layer := range s.Layers {
		top, bottom := s.Span(layer)
		for coarse, most := range map[bool]float64{false: 1e-6, true: 1e-4} {
			l := newNodeLaw(s, layer, (top+bottom)/2, coarse)
			var worst, before float64
			exact := 0
			const n = 4000
			for i := range n {
				ln := low + (high-low)*(float64(i)+r.Float64())/n
				want, err := l.exact(ln)
				if err != nil {
					t.Fatal(err)
				}
				eta, rise, _, err := l.eta(math.Exp(2 * ln))
				if err != nil {
					t.Fatal(err)
				}
				worst = math.Max(worst, math.Abs(math.Log(eta)-want.y))
				if slope := 2 * math.Exp(2*ln) * rise / eta; math.Abs(slope-want.slope) > 0.02 {
					t.Fatalf("%s at ln ε %g: slope %g, want %g", s.Column.Layers[layer].Name, ln, slope, want.slope)
				}
				if stress := ln + math.Log(eta); i > 0 && stress < before-most {
					t.Fatalf("%s at ln ε %g: stress falls by %g", s.Column.Layers[layer].Name, ln, before-stress)
				}
				before = ln + math.Log(eta)
				if _, err := l.at(ln); err != nil {
					t.Fatal(err)
				}
				if l.exactly(ln) {
					exact++
				}
			}
			if worst > most || exact > 0 {
				t.Errorf("%s, coarse %t: ln η off by %g, the law itself at %d of %d", s.Column.Layers[layer].Name, coarse, worst, exact, n)
			}
		}
	}
}

// The means of twenty points agree with those of 20 000, and never lose their sign.
func TestMeans(t *testing.T) {
	s := rocks(t)
	r := rand.New(rand.NewPCG(3, 4))
	const n = 20000
	for layer := range 3 {
		top, bottom := s.Span(layer)
		l := newNodeLaw(s, layer, (top+bottom)/2, false)
		var worst float64
		for range 200 {
			b := rates{d: 1e-15 * (r.Float64() - 0.5), second: 1e-15}
			shear, normal := 1e-15*math.Exp(3*r.NormFloat64()), 1e-15*math.Exp(3*r.NormFloat64())
			if r.IntN(2) == 0 {
				b = rates{}
			}
			var etaS, etaN float64
			for i := range n {
				y, x := math.Sincos((float64(i) + 0.5) * math.Pi / n)
				v := b.d - normal*x
				eta, _, _, err := l.eta(v*v + shear*shear/4*y*y + b.second*b.second - b.d*b.d)
				if err != nil {
					t.Fatal(err)
				}
				etaS += 2 * eta * y * y / n
				etaN += (2*eta*x*x - 2*b.d*eta*x/normal) / n
			}
			m, err := l.closure(shear, normal, b, 1e-60)
			if err != nil {
				t.Fatal(err)
			}
			// each in proportion to its share of the dissipation
			ds, dn := etaS*shear*shear, 4*etaN*normal*normal
			miss := (ds*math.Abs(m.lnS-math.Log(etaS)) + dn*math.Abs(m.lnN-math.Log(etaN))) / (ds + dn)
			worst = math.Max(worst, miss)
		}
		if worst > 1e-3 {
			t.Errorf("layer %d: off by %g", layer, worst)
		}
	}
}

// Steps, tolerance and mesh of the default give a drip's time to 1e-4.
func TestStepsOfDescent(t *testing.T) {
	s := rocks(t)
	for _, b := range []Background{{}, {ExtensionRate: 1e-16, AlongStrike: true}} {
		var times [2]float64
		for i := range times {
			f, err := NewSoft(s, b)
			if err != nil {
				t.Fatal(err)
			}
			if i == 1 {
				f.stepError, f.tolerance, f.span = softError/100, 1e-8, 1.5
			}
			d, err := f.Time(2*math.Pi/50e3, 500, 5000, Horizon)
			if err != nil {
				t.Fatal(err)
			}
			times[i] = d.Time
		}
		if !(math.Abs(times[0]/times[1]-1) < 1e-4) {
			t.Errorf("%+v: %.8g s, with finer steps %.8g", b, times[0], times[1])
		}
	}
}
