package drip

import (
	"context"
	"math"

	"keelfall/solver/state"
)

// Time returns only the drip time in s of the root of s, +Inf where it never drips:
// a quicker Solve for searches. With o.Near it starts from the wavelengths within a
// factor of two of that, and goes on to where the first drip is.
func Time(ctx context.Context, s *state.State, set Settings, o Options) (float64, error) {
	p, err := newProblem(s, set, o.Workers)
	if err != nil {
		return 0, err
	}
	const quick = 2e-3 // of the wavelength; a time is good to about the square of that
	lowest, highest := p.solver.Range()
	if o.From > 0 {
		lowest = o.From
	}
	if o.To > 0 {
		highest = o.To
	}
	lowest, highest = set.within(lowest, highest)
	highest = math.Max(highest, 1.01*lowest)
	limit := math.Inf(1)
	if o.Limit > 0 {
		limit = o.Limit
	}
	if o.Near > 0 {
		near := math.Max(lowest, math.Min(highest, o.Near))
		for range 8 { // 8 times a factor of two either way covers a range
			from, to := math.Max(lowest, near/2), math.Min(highest, near*2)
			if err := p.curve(ctx, from, math.Max(to, 1.01*from), 4); err != nil {
				return 0, err
			}
			best, err := p.best(1, limit, quick)
			if err != nil {
				return 0, err
			}
			low, high := best.Wavelength < from*1.05 && from > lowest, best.Wavelength > to/1.05 && to < math.Min(highest, limit)
			if !math.IsInf(best.Time, 1) && !low && !high {
				return p.warmTime(s, best)
			}
			if math.IsInf(best.Time, 1) {
				break // nothing near drips: look everywhere
			}
			near = best.Wavelength
		}
	}
	if err := p.curve(ctx, lowest, highest, 10); err != nil {
		return 0, err
	}
	best, err := p.best(1, limit, quick)
	if err != nil {
		return 0, err
	}
	return p.warmTime(s, best)
}

// best returns the first drip from a times the amplitude among wavelengths up to limit,
// refined to a relative width of its wavelength.
func (p *problem) best(a, limit, width float64) (Fastest, error) {
	best, at := Fastest{Time: math.Inf(1)}, -1
	for i, f := range p.points {
		if f.Wavelength > limit {
			break
		}
		if t := p.time(f, a); t < best.Time {
			best, at = Fastest{t, f.Wavelength}, i
		}
	}
	lo, hi := p.points[0].Wavelength, limit
	if at >= 0 {
		lo = p.points[max(at-1, 0)].Wavelength
		hi = math.Min(limit, p.points[min(at+1, len(p.points)-1)].Wavelength)
	} else if hi = math.Min(hi, p.points[len(p.points)-1].Wavelength); limit < lo {
		lo = limit // the arc is narrower than the range: its own width is the one candidate
	}
	var fail error
	eval := func(x float64) float64 {
		f, err := p.frozen(p.solver, math.Exp(x))
		if err != nil {
			fail = err
			return math.Inf(1)
		}
		return p.time(f, a)
	}
	x0, x3 := math.Log(lo), math.Log(hi)
	if t := eval(x3); t < best.Time { // the limit itself, between two points
		best = Fastest{t, hi}
	}
	if at < 0 {
		return best, fail
	}
	if at, t := minimum(eval, x0, x3, width); t < best.Time {
		best = Fastest{t, math.Exp(at)}
	}
	return best, fail
}

// minimum finds where f is smallest between a and b, to an absolute width, and its
// value there: Brent's method, parabolas where they converge and golden sections where
// they do not. Source: Brent 1973, Algorithms for Minimization without Derivatives,
// chapter 5 (from memory).
func minimum(f func(float64) float64, a, b, width float64) (x, fx float64) {
	const golden = 0.3819660112501051 // (3 − √5)/2
	x = a + golden*(b-a)
	w, v := x, x
	fx = f(x)
	fw, fv := fx, fx
	var step, last float64 // this step and the one before it
	for range 100 {
		mid := (a + b) / 2
		if math.Abs(x-mid) <= 2*width-(b-a)/2 {
			break
		}
		parabola := false
		if math.Abs(last) > width {
			r, q := (x-w)*(fx-fv), (x-v)*(fx-fw)
			p := (x-v)*q - (x-w)*r
			if q = 2 * (q - r); q > 0 {
				p = -p
			}
			q = math.Abs(q)
			// a parabola through infinite times gives NaN and is not taken
			if math.Abs(p) < math.Abs(q*last/2) && p > q*(a-x) && p < q*(b-x) {
				parabola = true
				last, step = step, p/q
				if u := x + step; u-a < 2*width || b-u < 2*width {
					step = math.Copysign(width, mid-x)
				}
			}
		}
		if !parabola {
			last = b - x
			if x >= mid {
				last = a - x
			}
			step = golden * last
		}
		u := x + step
		if math.Abs(step) < width {
			u = x + math.Copysign(width, step)
		}
		fu := f(u)
		if fu <= fx {
			if u >= x {
				a = x
			} else {
				b = x
			}
			v, fv, w, fw, x, fx = w, fw, x, fx, u, fu
			continue
		}
		if u < x {
			a = u
		} else {
			b = u
		}
		if fu <= fw || w == x {
			v, fv, w, fw = w, fw, u, fu
		} else if fu <= fv || v == x || v == w {
			v, fv = u, fu
		}
	}
	return x, fx
}
