package rheology

import (
	"fmt"
	"math"
)

// Respond is Creep.Respond at the flow's grain size, water and sense, T in K, P in Pa.
func (f *Flow) Respond(eII, T, P float64) (Response, error) {
	if !(eII > 0) || math.IsInf(eII, 1) {
		return Response{}, fmt.Errorf("rheology: strain rate %g 1/s, must be > 0", eII)
	}
	if err := check(T, P); err != nil {
		return Response{}, err
	}
	var buf [many]term
	t := tree{terms(buf[:], f.ms, T, P), f.nodes, f.follows}
	err := f.soften(t.ts, T, P)
	if err != nil {
		return Response{}, err
	}
	y := math.Log(eII)
	var c point
	var last float64 // the last mechanism's share of the rate
	if len(f.nodes) == 1 {
		c.x, c.n, last, err = lnStress(t.ts, y)
		if c.held = c.n; f.follows {
			c.held = heldMean(t.ts, c.x)
		}
	} else if c = t.groupAt(0, y); f.limits.Highest > 0 {
		limit := t.ts[f.nodes[0].b-1]
		last = math.Exp(limit.lnC + c.x - y)
	}
	if err != nil || math.IsNaN(c.x) {
		return Response{}, fmt.Errorf("rheology: no stress found for %g 1/s at T = %g K, P = %g Pa", eII, T, P)
	}
	tau, n, yields, limited := f.capped(&c, P)
	r := Response{Stress: tau, Exponent: n, Slope: 1 / c.n, Yielding: yields, Limited: limited, Capped: f.limits.Highest > 0 && last > 0.5 && !yields}
	if f.follows {
		r.GrainSize = f.piezo.GrainSize(math.Exp(c.x))
	}
	if low := f.limits.Lowest; low > 0 {
		dash := 2 * low * eII
		r.Stress = tau + dash
		r.Exponent = r.Stress / (tau/n + dash) // d ln ε/d ln τ of the two side by side
		r.Slope = (tau/c.n + dash) / r.Stress
		r.Floored = dash > tau
	}
	r.Viscosity = r.Stress / eII / 2
	if !inRange(r.Viscosity) || !inRange(r.Stress) {
		return Response{}, fmt.Errorf("rheology: stress exp(%g) Pa at %g 1/s, T = %g K, P = %g Pa is beyond the range of numbers", c.x, eII, T, P)
	}
	return r, nil
}

// soften multiplies the rates of creep by exp(αφ); the upper limit is not creep.
func (f *Flow) soften(ts []term, T, P float64) error {
	if f.melt == nil {
		return nil
	}
	phi := f.melt(T, P)
	if !(phi >= 0 && phi <= 1) {
		return fmt.Errorf("rheology: melt fraction %g at T = %g K, P = %g Pa, must be 0 to 1", phi, T, P)
	}
	limit := -1
	if f.limits.Highest > 0 {
		limit = f.nodes[0].b - 1
	}
	for i := range ts {
		if i != limit {
			ts[i].lnC += f.weakening * phi
		}
	}
	return nil
}

// capped returns the stress of creep under friction, its exponent, whether friction
// decides and whether the exponent is limited. c.n becomes the slope of that stress along
// the curve, without a limit.
func (f *Flow) capped(c *point, P float64) (tau, n float64, yields, limited bool) {
	if !f.frictional {
		return math.Exp(c.x), c.held, false, false
	}
	lnY := math.Log(f.yield + f.yieldPerPa*P)
	tau, gain := yieldAt(c.x, lnY)
	c.n *= gain
	n = c.held * gain
	most := max(MaxExponent, c.held) // creep may be more non-linear by itself
	return tau, min(n, most), c.x > lnY, n >= most && gain > 1
}

// StrainRate is Creep.StrainRate at the flow's grain size, water and sense.
func (f *Flow) StrainRate(tau, T, P float64) (float64, error) {
	if !(tau > 0) || math.IsInf(tau, 1) {
		return 0, fmt.Errorf("rheology: stress %g Pa, must be > 0", tau)
	}
	if err := check(T, P); err != nil {
		return 0, err
	}
	var buf [many]term
	t := tree{terms(buf[:], f.ms, T, P), f.nodes, f.follows}
	err := f.soften(t.ts, T, P)
	if err != nil {
		return 0, err
	}
	var y float64
	if len(f.nodes) == 1 && !f.frictional && !f.bent {
		y, err = lnRate(t.ts, math.Log(tau), f.limits.Lowest)
	} else {
		y, err = f.lnRate(&t, tau, P)
	}
	if err != nil {
		return 0, err
	}
	e := math.Exp(y)
	if !inRange(e) {
		return 0, fmt.Errorf("rheology: strain rate exp(%g) 1/s at %g Pa, T = %g K, P = %g Pa is beyond the range of numbers", y, tau, T, P)
	}
	return e, nil
}

// lnRate inverts Respond for mixtures and friction.
func (f *Flow) lnRate(t *tree, tau, P float64) (float64, error) {
	x := math.Log(tau)
	xc := x
	if f.frictional {
		xc = unyield(x, math.Log(f.yield+f.yieldPerPa*P))
	}
	y := math.Inf(1) // at or above the root
	if !math.IsInf(xc, 1) {
		if y = t.groupUnder(0, xc).y; math.IsNaN(y) {
			return 0, fmt.Errorf("rheology: no strain rate found for %g Pa at P = %g Pa", tau, P)
		}
	}
	low := f.limits.Lowest
	if low <= 0 {
		if math.IsInf(y, 1) {
			return 0, fmt.Errorf("rheology: %g Pa is not below the yield stress at P = %g Pa, %g Pa: no strain rate belongs to it", tau, P, f.yield+f.yieldPerPa*P)
		}
		return y, nil
	}
	y = min(y, x-math.Log(2*low))
	var s search
	for s.begin(); s.more(); y += s.dx {
		c := t.groupAt(0, y)
		stress, _, _, _ := f.capped(&c, P)
		dash := 2 * low * math.Exp(y)
		if sum := stress + dash; s.try(y, math.Log(sum)-x, (stress/c.n+dash)/sum) {
			return y + s.dx, nil
		}
	}
	return 0, fmt.Errorf("rheology: no strain rate found for %g Pa at P = %g Pa after %d steps", tau, P, newtonSteps)
}
