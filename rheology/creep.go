package rheology

import (
	"fmt"
	"math"
)

// Creep is a rock's creep laws, acting in parallel at one stress: their strain
// rates add. Factor multiplies the viscosity that follows, before the limits; 0
// means 1. A list that counts one mechanism of one rock twice is too weak by up to a
// factor two: Cautions says so.
type Creep struct {
	Laws   []Law
	Factor float64
	Limits Limits
}

// NeedsError says what a law needs and the rock does not give.
type NeedsError struct{ Law, What string }

func (e *NeedsError) Error() string {
	return fmt.Sprintf("rheology: %s needs %s", e.Law, e.What)
}

// mechanism is one law for one rock: ln ε = c − (e + P v)/T + n ln τ.
type mechanism struct{ c, e, v, n float64 }

// many is how many mechanisms and terms are held without allocation.
const many = 8

// mechanisms appends the rock's laws with its grain size, water and factor put
// in, and the upper limit last.
func (c *Creep) mechanisms(to []mechanism, at *Conditions) ([]mechanism, error) {
	if len(c.Laws) == 0 {
		return nil, fmt.Errorf("rheology: no creep law")
	}
	if c.Factor != 0 && !(c.Factor > 0 && !math.IsInf(c.Factor, 1)) {
		return nil, fmt.Errorf("rheology: viscosity factor %g, must be > 0", c.Factor)
	}
	for i := range c.Laws {
		l := &c.Laws[i]
		p := math.Log(l.A)
		if l.M != 0 {
			if !(at.GrainSize > 0) {
				return nil, &NeedsError{l.Name, "a grain size"}
			}
			p -= l.M * math.Log(at.GrainSize)
		}
		if l.R != 0 {
			if at.WaterMeasure != l.Water || !(at.Water > 0) {
				return nil, &NeedsError{l.Name, l.Water.need()}
			}
			p += l.R * math.Log(at.Water)
		}
		if c.Factor != 0 {
			p -= l.N * math.Log(c.Factor) // the stress, hence η, is that factor higher
		}
		if math.IsNaN(p) || math.IsInf(p, 0) || !(l.N > 0) {
			return nil, fmt.Errorf("rheology: %s: A = %g, n = %g, grain size %g m, water %g give no strain rate", l.Name, l.A, l.N, at.GrainSize, at.Water)
		}
		to = append(to, mechanism{p, l.E / GasConstant, l.V / GasConstant, l.N})
	}
	if c.Limits.Highest > 0 {
		to = append(to, mechanism{c: -math.Log(2 * c.Limits.Highest), n: 1})
	}
	return to, nil
}

// Flow is a Creep made ready for one rock: grain size and water are put in, so that
// only strain rate, temperature and pressure are left. It gives what the Creep gives,
// faster. It may be used by several goroutines at once.
type Flow struct {
	ms     []mechanism
	limits Limits
}

// For returns the rock's flow at the grain size and water of at, whose T and P are
// not used. Errors: a NeedsError where a law lacks its grain size or water.
func (c *Creep) For(at Conditions) (*Flow, error) {
	ms, err := c.mechanisms(nil, &at)
	if err != nil {
		return nil, err
	}
	return &Flow{ms, c.Limits}, nil
}

// Respond is Creep.Respond at the flow's grain size and water, T in K and P in Pa.
func (f *Flow) Respond(eII, T, P float64) (Response, error) {
	return respond(f.ms, f.limits, eII, T, P)
}

// StrainRate is Creep.StrainRate at the flow's grain size and water.
func (f *Flow) StrainRate(tau, T, P float64) (float64, error) {
	return strainRate(f.ms, f.limits, tau, T, P)
}

// Respond returns the stress, the secant viscosity and the tangent exponent at the
// strain rate eII in 1/s, > 0.
//
//	ε = Σ ε_i(τ_c),  τ = τ_c + 2 η_lowest ε,  n = Σ n_i ε_i/Σ ε_i  (no lowest limit)
//
// The upper limit is one more ε_i = τ_c/(2 η_highest). The stress is good to 1e-12.
// It works in logarithms, for rates of 1e-40 to 1 per second and 250 to 2500 K; a
// result beyond the range of a float64 is an error, as are a temperature <= 0 and a
// missing grain size or water value (NeedsError). It does not allocate for up to
// seven laws. Derived from the laws' definition; mechanisms at one stress add rates.
func (c *Creep) Respond(eII float64, at Conditions) (Response, error) {
	var buf [many]mechanism
	ms, err := c.mechanisms(buf[:0], &at)
	if err != nil {
		return Response{}, err
	}
	return respond(ms, c.Limits, eII, at.T, at.P)
}

// StrainRate returns ε_II in 1/s at the stress tau in Pa, > 0: the inverse of
// Respond, with the same limits and errors.
func (c *Creep) StrainRate(tau float64, at Conditions) (float64, error) {
	var buf [many]mechanism
	ms, err := c.mechanisms(buf[:0], &at)
	if err != nil {
		return 0, err
	}
	return strainRate(ms, c.Limits, tau, at.T, at.P)
}

func respond(ms []mechanism, limits Limits, eII, T, P float64) (Response, error) {
	if !(eII > 0) || math.IsInf(eII, 1) {
		return Response{}, fmt.Errorf("rheology: strain rate %g 1/s, must be > 0", eII)
	}
	if err := check(T, P); err != nil {
		return Response{}, err
	}
	var buf [many]term
	ts := terms(buf[:0], ms, T, P)
	x, n, last, err := lnStress(ts, math.Log(eII))
	if err != nil {
		return Response{}, err
	}
	tau := math.Exp(x)
	r := Response{Stress: tau, Exponent: n, Capped: limits.Highest > 0 && last > 0.5}
	if low := limits.Lowest; low > 0 {
		dash := 2 * low * eII
		r.Stress = tau + dash
		r.Exponent = r.Stress / (tau/n + dash) // d ln ε/d ln τ of the two side by side
		r.Floored = dash > tau
	}
	r.Viscosity = r.Stress / eII / 2
	if !inRange(r.Viscosity) || !inRange(r.Stress) {
		return Response{}, fmt.Errorf("rheology: stress exp(%g) Pa at %g 1/s, T = %g K, P = %g Pa is beyond the range of numbers", x, eII, T, P)
	}
	return r, nil
}

func strainRate(ms []mechanism, limits Limits, tau, T, P float64) (float64, error) {
	if !(tau > 0) || math.IsInf(tau, 1) {
		return 0, fmt.Errorf("rheology: stress %g Pa, must be > 0", tau)
	}
	if err := check(T, P); err != nil {
		return 0, err
	}
	var buf [many]term
	ts := terms(buf[:0], ms, T, P)
	lnE, err := lnRate(ts, math.Log(tau), limits.Lowest)
	if err != nil {
		return 0, err
	}
	e := math.Exp(lnE)
	if !inRange(e) {
		return 0, fmt.Errorf("rheology: strain rate exp(%g) 1/s at %g Pa, T = %g K, P = %g Pa is beyond the range of numbers", lnE, tau, T, P)
	}
	return e, nil
}

// check refuses conditions no law can be evaluated at.
func check(T, P float64) error {
	if !(T > 0) || math.IsInf(T, 1) {
		return fmt.Errorf("rheology: T = %g K, must be > 0", T)
	}
	if !(P >= 0) || math.IsInf(P, 1) {
		return fmt.Errorf("rheology: P = %g Pa, must be >= 0", P)
	}
	return nil
}

func inRange(x float64) bool { return x > 0 && !math.IsInf(x, 1) }
