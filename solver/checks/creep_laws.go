package checks

import (
	"fmt"
	"math"

	"keelfall/rheology"
)

type adder func(name, unit string, want, tolerance float64, source string, status Status, f func() (float64, error))

const (
	goetze      = "dry olivine low-temperature plasticity Goetze 1979"
	mei         = "dry olivine low-temperature plasticity Mei 2010"
	dislocation = "dry olivine dislocation Hirth 2003"
	diffusion   = "dry olivine diffusion Hirth 2003"
)

// plasticChecks: low-temperature plasticity and melt. Digits by hand in arbitrary precision.
func plasticChecks(add adder) {
	rate := func(name string, MPa, T float64) func() (float64, error) {
		return func() (float64, error) {
			return catalogued(name, MPa*1e6/math.Sqrt(3), rheology.Conditions{T: T})
		}
	}
	add("low-temperature plasticity of Goetze & Evans 1979, 600 degC, 1 GPa differential stress", "1/s", 5.972794010188124e-14, 1e-11,
		"(√3/2) 5.7e11 exp[−535 kJ/mol/(R 873.15 K) (1 − 1000/8500)²], law from memory", FromMemory, rate(goetze, 1000, 873.15))
	add("the same at 200 MPa, where we keep it out of low stresses", "1/s", 9.501659737289988e-20, 1e-11,
		"as written times 1 − exp(−1), a choice of our own; law from memory", FromMemory, rate(goetze, 200, 873.15))
	add("low-temperature plasticity of Mei et al. 2010, 600 degC, 1 GPa differential stress", "1/s", 6.632461128194828e-13, 1e-11,
		"(√3/2) 1.4e-7 × 1000² exp[−320 kJ/mol/(R 873.15 K) (1 − √(1000/5900))], law from memory", FromMemory, rate(mei, 1000, 873.15))
	add("the same at its Peierls stress, where there is no barrier", "1/s", math.Sqrt(3)/2*1.4e-7*5900*5900, 1e-11,
		"derived: (√3/2) A σ_P², law from memory", Derived, rate(mei, 5900, 700))
	add("strength of olivine in low-temperature plasticity, 600 degC, 1e-15 1/s", "MPa", 737.2894541172296, 1e-11,
		"derived: 8500 {1 − √[(RT/E) ln((√3/2) A/ε)]}, law of Goetze & Evans 1979 from memory", Derived, func() (float64, error) {
			c, err := creepOf(goetze)
			if err != nil {
				return 0, err
			}
			r, err := c.Respond(1e-15, rheology.Conditions{T: 873.15})
			return r.Stress * math.Sqrt(3) / 1e6, err
		})

	three := rheology.Conditions{T: 1073.15, P: 500e6, GrainSize: 100e-6}
	const tau = 400e6 / 1.7320508075688772
	together := "dislocation, diffusion and low-temperature plasticity of olivine, 800 degC, 0.5 GPa, 100 µm, 400 MPa differential stress"
	add(together, "1/s", 2.208879524376285e-12, 1e-11, "derived: sum of 8.8846e-13, 2.0760e-13 and 1.1128e-12; laws from memory", Derived, func() (float64, error) {
		c, err := creepOf(dislocation, diffusion, goetze)
		if err != nil {
			return 0, err
		}
		return c.StrainRate(tau, three)
	})
	exponent := func(eII float64) (n, stress float64, err error) {
		c, err := creepOf(dislocation, diffusion, goetze)
		if err != nil {
			return 0, 0, err
		}
		r, err := c.Respond(eII, three)
		return r.Exponent, r.Stress, err
	}
	add("their tangent exponent", "", 4.211018487850615, 1e-10, "derived: Σ n_i ε_i/Σ ε_i with n = 3.5, 1 and 5.3777", Derived,
		func() (float64, error) { n, _, err := exponent(2.208879524376285e-12); return n, err })
	add("their tangent exponent over its finite difference", "", 1, 1e-7, "derived: d ln ε/d ln τ at 1e-15 1/s, step 1e-4", Derived, func() (float64, error) {
		const h = 1e-4
		n, _, err := exponent(1e-15)
		if err != nil {
			return 0, err
		}
		_, up, err := exponent(1e-15 * math.Exp(h))
		if err != nil {
			return 0, err
		}
		_, down, err := exponent(1e-15 * math.Exp(-h))
		return n * math.Log(up/down) / (2 * h), err
	})

	melting := &rheology.Creep{Laws: []rheology.Law{{Name: "check", A: 1 / 2e22, N: 1}}, Weakening: 30}
	some := func(T, P float64) float64 { return 0.04 }
	weaker := func(highest float64) (float64, error) {
		c := *melting
		c.Limits.Highest = highest
		a, err := c.Respond(1e-15, cold)
		if err != nil {
			return 0, err
		}
		c.Melt = some
		b, err := c.Respond(1e-15, cold)
		return a.Viscosity / b.Viscosity, err
	}
	add("4 % of melt, exponent 30: how much weaker", "times", math.Exp(1.2), 1e-12, "derived: exp(αφ), the form of Hirth & Kohlstedt 2003 from memory", Derived,
		func() (float64, error) { return weaker(0) })
	add("the same beside an upper limit as strong as the rock", "times", (math.Exp(1.2)+1)/2, 1e-12, "derived: the limit is no creep and does not weaken", Derived,
		func() (float64, error) { return weaker(1e22) })
}

// lawChecks: what sources say of their laws, and what moving a law within its errors does.
func lawChecks(add adder) {
	hot := rheology.Conditions{T: 1473, P: 300e6, Water: 300e6, WaterMeasure: rheology.WaterFugacity}
	ratio := func(a, b string, at rheology.Conditions) (float64, error) {
		x, err := catalogued(a, 100e6/math.Sqrt(3), at)
		if err != nil {
			return 0, err
		}
		y, err := catalogued(b, 100e6/math.Sqrt(3), at)
		return x / y, err
	}
	add("wet over dry olivine, dislocation creep, 1473 K, 300 MPa of pressure and water", "times", 25.3965175979398, 1e-10,
		"Hirth & Kohlstedt 2003, Table 1, from memory; Mei & Kohlstedt 2000 report 5 to 6", FromMemory,
		func() (float64, error) { return ratio("wet olivine dislocation Hirth 2003", dislocation, hot) })
	add("Columbia over Maryland diabase", "times", 190.0/8, 1e-10, "Mackwell et al. 1998, JGR 103, 975: abstract, Maryland the stronger; prefactors from memory", FromMemory,
		func() (float64, error) {
			return ratio("dry Columbia diabase Mackwell 1998", "dry Maryland diabase Mackwell 1998", hot)
		})
	add("eclogite at 3 GPa: activation energy found from the rates of Zhang & Green 2007", "kJ/mol", 480, 30.0/480,
		"Jin et al. 2001, Geology 29, 667: 480 ± 30 at 3 GPa", Published, func() (float64, error) {
			a, err := catalogued("dry eclogite Zhang 2007", 1e8, rheology.Conditions{T: 1500, P: 3e9})
			if err != nil {
				return 0, err
			}
			b, err := catalogued("dry eclogite Zhang 2007", 1e8, rheology.Conditions{T: 1510, P: 3e9})
			return math.Log(b/a) * rheology.GasConstant / (1.0/1500 - 1.0/1510) / 1e3, err
		})
	add("earlier laws of wet quartz that Lusk 2021 does not outrun tenfold, 350 degC, 0.3 GPa, 150 MPa water, 100 MPa differential stress", "laws", 0, 0.5,
		"Lusk et al. 2021, JGR (abstract): over one order faster at geological conditions; conditions ours", Published, func() (float64, error) {
			at := rheology.Conditions{T: 623.15, P: 300e6, Water: 150e6, WaterMeasure: rheology.WaterFugacity}
			slow := 0.0
			for _, old := range []string{"Gleason 1995", "Hirth 2001", "Luan 1992", "Paterson 1990", "Rutter 2004"} {
				x, err := ratio("wet quartz below 560 MPa Lusk 2021", "wet quartzite "+old, at)
				if err != nil {
					return 0, err
				}
				if !(x > 10) {
					slow++
				}
			}
			return slow, nil
		})
	add("eclogite with E two standard deviations up, about the middle of its experiments: rate there", "of the rate", 1, 1e-10, "derived: E and A of a fit move together", Derived,
		func() (float64, error) {
			c, err := creepOf("dry eclogite Zhang 2007")
			if err != nil {
				return 0, err
			}
			p, ok := c.Laws[0].Tested.Pivot()
			if !ok {
				return 0, fmt.Errorf("checks: eclogite has no range of experiments")
			}
			at := rheology.Conditions{T: p.T, P: p.P}
			a, err := c.StrainRate(p.Stress/math.Sqrt(3), at)
			if err != nil {
				return 0, err
			}
			if c.Laws[0], err = c.Laws[0].Varied([5]float64{3: 2}, &p); err != nil {
				return 0, err
			}
			b, err := c.StrainRate(p.Stress/math.Sqrt(3), at)
			return b / a, err
		})
}

// creepOf is laws of the catalogue in parallel.
func creepOf(names ...string) (*rheology.Creep, error) {
	c := &rheology.Creep{}
	for _, name := range names {
		law, err := rheology.Find(name)
		if err != nil {
			return nil, err
		}
		c.Laws = append(c.Laws, law)
	}
	return c, nil
}
