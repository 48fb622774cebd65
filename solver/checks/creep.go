package checks

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"
)

// creepChecks compares what stands around the creep laws, and the laws' units, with
// arithmetic done apart from the program.
func creepChecks() []Check {
	var list []Check
	add := func(name, unit string, want, tolerance float64, source string, status Status, f func() (float64, error)) {
		list = append(list, Check{name, unit, want, tolerance, source, status, func(context.Context) (float64, error) { return f() }})
	}
	// P = 2800 × 9.81 × 15000 = 412.02 MPa; (20 cos 30° + 0.6 × 412.02 sin 30°)/(1 + s/2).
	for _, v := range []struct {
		sense, want float64
		words       string
	}{{1, 93.95100538, "extension"}, {-1, 281.85301615, "shortening"}, {0, 140.92650808, "nothing strains"}} {
		add("frictional yield at 15 km, "+v.words, "MPa", v.want, 1e-9, "derived: Mohr circle, 20 MPa, 30 deg, pore-fluid factor 0.4, 2800 kg/m³", Derived,
			func() (float64, error) { return yieldAt15km(v.sense) })
	}
	law := func(a, n float64) []rheology.Law { return []rheology.Law{{Name: "check", A: a, N: n}} }
	meet := &rheology.Creep{Laws: law(1e-24, 3), Friction: &rheology.Friction{Cohesion: 1e8}}
	add("smooth cap where creep meets yield: stress over yield stress", "", math.Pow(2, -0.125), 1e-12, "derived: (1 + 1)^(−1/8)", Derived,
		func() (float64, error) { r, err := meet.Respond(1, cold); return r.Stress / 1e8, err })
	add("smooth cap where creep meets yield: exponent over that of creep", "", 2, 1e-12, "derived: (τ_c/τ)^8 = 2", Derived,
		func() (float64, error) { r, err := meet.Respond(1, cold); return r.Exponent / 3, err })

	for i, want := range []float64{math.Pow(0.5005, -1.0/3), math.Sqrt(10), 5.5} {
		rule := rheology.Mixing(i)
		add(fmt.Sprintf("%s mixing of halves, n = 3, ten times apart", rule), "of the weaker", want, 1e-12,
			"derived: powers of τ_i = 1 and 10 averaged", Derived, func() (float64, error) { return mixed(rule, 0.5, law(1, 3), law(1e-3, 3)) })
		add(fmt.Sprintf("%s mixing, fraction 1: the phase itself", rule), "of the phase", 1, 1e-12, "derived", Derived,
			func() (float64, error) { return mixed(rule, 1, law(1, 3), law(1e-3, 1)) })
	}
	add("mixing rules out of order among pairs of catalogue laws of one exponent", "", 0, 0.5,
		"Reuss 1929, Voigt 1889: weak and strong bound; for one exponent derived from the means", Derived, outOfOrder)

	add("wet quartzite Gleason 1995 at 800 degC and 100 MPa differential stress", "1/s", 1.332922194651937e-07, 1e-10,
		"derived: (√3/2) 1.1e-4 MPa^-4 s^-1 × 100^4 exp(−223 kJ/mol/(R 1073.15 K)), the law itself from memory", Derived,
		func() (float64, error) {
			return catalogued("wet quartzite Gleason 1995", 100e6/math.Sqrt(3), rheology.Conditions{T: 1073.15})
		})
	add("wet olivine diffusion Hirth 2003 at 1200 degC, 1 GPa, 10 µm, 300 MPa water and 50 MPa differential stress", "1/s", 2.318226740707947e-06, 1e-10,
		"derived: (√3/2) 2.5e7 × 50 × 10^-3 × 300^0.8 exp(−(375 + 10) kJ/mol/(R 1473.15 K)) in MPa and µm, the law itself from memory", Derived,
		func() (float64, error) {
			return catalogued("wet olivine diffusion Hirth 2003", 50e6/math.Sqrt(3),
				rheology.Conditions{T: 1473.15, P: 1e9, GrainSize: 10e-6, Water: 300e6, WaterMeasure: rheology.WaterFugacity})
		})
	// Diagonal or shear tensors at unit stress and unit laboratory rate.
	for _, v := range []struct {
		test         rheology.Test
		stress, rate [3]float64 // principal deviators
	}{
		{rheology.AxialCompression, [3]float64{2.0 / 3, -1.0 / 3, -1.0 / 3}, [3]float64{1, -0.5, -0.5}},
		{rheology.PlaneStrain, [3]float64{0.5, 0, -0.5}, [3]float64{1, 0, -1}},
		{rheology.SimpleShear, [3]float64{1, 0, -1}, [3]float64{0.5, 0, -0.5}},
	} {
		add(fmt.Sprintf("factor from %s to invariants, n = 3.5", v.test), "", invariant(v.rate)/math.Pow(invariant(v.stress), 3.5), 1e-12,
			"derived: second invariants of the test's tensors", Derived, func() (float64, error) { return v.test.Factor(3.5), nil })
	}
	add("grain size of olivine at 100 MPa differential stress", "m", 3.281642435924328e-05, 1e-12,
		"van der Wal et al. 1993, Geophys. Res. Lett. 20, 1479, from memory: 15 mm × 100^−1.33", FromMemory, func() (float64, error) {
			p, err := rheology.FindPiezometer("olivine")
			if err != nil {
				return 0, err
			}
			return p.GrainSize(100e6 / math.Sqrt(3)), nil
		})
	plasticChecks(add)
	lawChecks(add)
	return list
}

// cold serves laws that depend on nothing.
var cold = rheology.Conditions{T: 1000}

// invariant is √(½ Σ s_i²).
func invariant(s [3]float64) float64 { return math.Sqrt((s[0]*s[0] + s[1]*s[1] + s[2]*s[2]) / 2) }

// yieldAt15km is the stress in MPa at 15 km in a crust whose creep is far too strong.
func yieldAt15km(sense float64) (float64, error) {
	rock := column.Rock{
		Density: column.Uniform(2800), Conductivity: column.Conductivity{Reference: 2.5},
		Viscosity: column.Viscosity{Creep: &rheology.Creep{Laws: []rheology.Law{{Name: "strong", A: 1e-60, N: 3}}}},
		Friction:  &rheology.Friction{Cohesion: 20e6, Angle: math.Pi / 6, PoreFluid: 0.4},
	}
	s, err := state.New(&column.Column{
		Gravity: g, Sense: sense, Surface: column.Surface{Temperature: 283},
		Layers: []column.Layer{{Name: "crust", Thickness: 30e3, Rock: rock}},
		Base:   column.Base{Boundary: column.Rigid, Temperature: 900, HasTemperature: true},
	}, 1e-15)
	if err != nil {
		return 0, err
	}
	p, err := s.At(0, 15e3)
	return p.Stress / 1e6, err
}

// mixed is the stress of a mixture of a (fraction f) and b at unit strain rate, over
// that of a.
func mixed(rule rheology.Mixing, f float64, a, b []rheology.Law) (float64, error) {
	m := rheology.Mixture{Rule: rule, Phases: []rheology.Phase{{Fraction: f, Laws: a}, {Fraction: 1 - f, Laws: b}}}
	r, err := (&rheology.Creep{Mixtures: []rheology.Mixture{m}}).Respond(1, cold)
	if err != nil {
		return 0, err
	}
	alone, err := (&rheology.Creep{Laws: a}).Respond(1, cold)
	return r.Stress / alone.Stress, err
}

// outOfOrder counts the pairs for which not Reuss ≤ geometric ≤ Voigt at 1e-15 1/s,
// 1200 K, 1 GPa, 1 mm and 100 MPa of water.
func outOfOrder() (float64, error) {
	at := rheology.Conditions{T: 1200, P: 1e9, GrainSize: 1e-3, Water: 100e6, WaterMeasure: rheology.WaterFugacity}
	var wrong, pairs float64
	laws := rheology.Laws()
	for i := range laws {
		for j := range i {
			if laws[i].N != laws[j].N || laws[i].Plastic() || laws[j].Plastic() || laws[i].Water == rheology.WaterContent || laws[j].Water == rheology.WaterContent {
				continue
			}
			pairs++
			last := 0.0
			for _, rule := range []rheology.Mixing{rheology.IsoStress, rheology.Geometric, rheology.IsoStrainRate} {
				m := rheology.Mixture{Rule: rule, Phases: []rheology.Phase{{Fraction: 0.3, Laws: laws[i : i+1]}, {Fraction: 0.7, Laws: laws[j : j+1]}}}
				r, err := (&rheology.Creep{Mixtures: []rheology.Mixture{m}}).Respond(1e-15, at)
				if err != nil {
					return 0, err
				}
				if r.Stress < last*(1-1e-11) { // a rate is a power of the stress
					wrong++
				}
				last = r.Stress
			}
		}
	}
	if pairs == 0 {
		return 0, fmt.Errorf("no two laws of one exponent")
	}
	return wrong, nil
}

// catalogued is ε_II of a law of the catalogue at τ_II.
func catalogued(name string, tau float64, at rheology.Conditions) (float64, error) {
	c, err := creepOf(name)
	if err != nil {
		return 0, err
	}
	return c.StrainRate(tau, at)
}
