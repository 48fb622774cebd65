package drip

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// follow goes on from y at t, until something ends it.
func (r *softRun) follow() (why, error) {
	r.pace = 0
	s, err := r.system(r.t, r.y)
	if err != nil {
		return late, err
	}
	if len(r.d.At) == 0 {
		r.note(r.t, math.Abs(r.y[r.base]), s.flow)
	}
	if r.h == 0 {
		r.h = firstStep / mat.Norm(s.a, math.Inf(1))
	}
	for r.d.Steps < mostSoft {
		h := r.h
		if fast := mat.Norm(s.a, math.Inf(1)); !(h*fast < fastSpan) {
			h = fastSpan / fast
		}
		end, err := r.in.end(r.t + 2*h*s.pace)
		if err != nil {
			return late, err
		}
		if end-r.t <= 1e-12*r.limit {
			return landed, nil
		}
		landing := r.t+1.3*h*s.pace >= end
		if r.pace = 0; landing {
			r.pace = s.pace
			h = (end - r.t) / s.pace
		}
		next, dt, miss, err := r.step(s, h)
		if err != nil {
			if r.tries++; r.tries > mostTries {
				return late, err
			}
			r.in.unsettled(r.t)
			r.h = h / 4
			continue
		}
		r.d.Steps++
		if !(miss <= r.tolerance) {
			r.h = h * math.Max(0.2, math.Min(0.7, 0.8*math.Cbrt(r.tolerance/miss)))
			continue
		}
		if !landing && r.t+dt > end {
			r.h = 0.7 * h
			continue
		}
		after, err := r.system(r.t+dt, next)
		if err != nil {
			return late, err
		}
		if w := r.accept(s, after, next, h, dt); w != onward {
			return w, nil
		}
		more := math.Min(6, 0.8*math.Cbrt(r.tolerance/math.Max(miss, 1e-9)))
		if landing {
			r.t, r.h = end, math.Max(r.h, h*more)
			return landed, nil
		}
		s, r.h = after, h*more
	}
	return late, fmt.Errorf("drip: wavelength %g m: %d steps reach %g s and an amplitude of %g m", r.d.Wavelength, mostSoft, r.t, math.Abs(r.y[r.base]))
}

// accept moves on over a step that leads from s to after.
func (r *softRun) accept(s, after system, next []float64, h, dt float64) why {
	d, y := &r.d, r.y
	d.over = after.flow.over
	ratio := r.in.share(after.flow.exponent)
	if at := math.Abs(next[r.base]); at >= r.in.stop(r.t+dt) && next[r.base]*y[r.base] > 0 {
		now := func(x float64) float64 { t, _ := hermite(x, 0, dt, h*s.pace, h*after.pace); return t }
		a, b := math.Log(math.Abs(y[r.base])), math.Log(at)
		lo, hi := 0.0, 1.0
		for range 60 {
			mid := (lo + hi) / 2
			if v, _ := hermite(mid, a, b, h*s.slope, h*after.slope); v < math.Log(r.in.stop(r.t+now(mid))) {
				lo = mid
			} else {
				hi = mid
			}
		}
		dt = now(hi)
		if r.t+dt > r.limit {
			return late
		}
		d.Time, d.Best = r.t+dt, r.best+dt*ratio
		d.Exponent = (r.exponents + dt*after.flow.exponent) / (d.Time - r.begun)
		r.note(d.Time, r.in.stop(d.Time), after.flow)
		return dripped
	}
	r.t += dt
	r.y = next
	r.best, r.exponents = r.best+dt*ratio, r.exponents+dt*after.flow.exponent
	var most float64
	for _, v := range next {
		most = math.Max(most, math.Abs(v))
	}
	switch {
	case r.t >= r.limit:
		return late
	case r.fades && most < gone*d.Base[0]:
		return faded
	case most > r.in.depth(r.t):
		return overturned
	}
	r.note(r.t, math.Abs(next[r.base]), after.flow)
	return onward
}
