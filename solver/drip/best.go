package drip

import (
	"context"
	"math"
)

// one follows an undulation of a given first wavelength through the course that is there;
// with keep its displacements are stored.
func (d *through) one(ctx context.Context, wavelength float64, stopAt int, keep bool) (*follower, error) {
	g, err := newGroup(d.course, d.set, []float64{wavelength}, 1)
	if err != nil {
		return nil, err
	}
	g.stopAt = stopAt
	if f := g.list[0]; keep {
		f.trace, f.keep, f.every = &Trace{}, true, traceSpan*d.course.span
		f.note(g, d.course.first, 0)
		f.store(g, d.course.first, f.y, f.log)
	}
	return g.list[0], g.again(ctx, d.course)
}

// stretched is by how much a wavelength has grown at time t since the course began.
func (d *through) stretched(t float64) float64 {
	a := d.course.first
	for _, l := range d.course.legs {
		if b := l.end; t <= b.t {
			if b.t == l.from.t {
				return math.Exp(b.strain - a.strain)
			}
			return math.Exp(l.from.strain + (b.strain-l.from.strain)*(t-l.from.t)/(b.t-l.from.t) - a.strain)
		}
	}
	return math.Exp(d.course.last().strain - a.strain)
}

// best returns the first drip from amplitude j among wavelengths that are up to limit at
// their drip, refined to a relative width of its first wavelength; Wavelength is the
// first one.
func (d *through) best(ctx context.Context, j int, limit, width float64) (Fastest, error) {
	best, at := Fastest{Time: math.Inf(1)}, -1
	fits := func(w, t float64) bool { return math.IsInf(limit, 1) || w*d.stretched(t) <= limit*(1+1e-12) }
	list := d.grid.list
	for i, f := range list {
		if t := f.times[j]; t < best.Time && fits(f.first, t) {
			best, at = Fastest{t, f.first}, i
		}
	}
	var fail error
	eval := func(x float64) float64 {
		f, err := d.one(ctx, math.Exp(x), j, false)
		if err != nil {
			fail = err
			return math.Inf(1)
		}
		return f.times[j]
	}
	lo, hi := list[0].first, list[len(list)-1].first
	if at >= 0 {
		lo, hi = list[max(at-1, 0)].first, list[min(at+1, len(list)-1)].first
	}
	if !math.IsInf(limit, 1) { // the first wavelength that just fits at its drip
		x := math.Min(hi, limit)
		for range 6 {
			t := eval(math.Log(x))
			if math.IsInf(t, 1) {
				t = d.course.last().t
			}
			next := math.Min(limit/d.stretched(t), math.Max(hi, lo))
			if math.Abs(next/x-1) < 1e-9 {
				break
			}
			x = next
		}
		if at < 0 || x < hi {
			hi = x
			if t := eval(math.Log(hi)); t < best.Time && fits(hi*(1-1e-8), t) {
				best = Fastest{t, hi}
			}
		}
	}
	if at < 0 || !(hi > lo) {
		return best, fail
	}
	x, t := minimum(eval, math.Log(lo), math.Log(hi), width)
	if t < best.Time && fits(math.Exp(x), t) {
		best = Fastest{t, math.Exp(x)}
	}
	return best, fail
}

// spacing returns the range of wavelengths at time t whose own drips come within 10 % of
// it, as far as the course knows.
func (d *through) spacing(t, first float64) (from, to float64) {
	var list []Fastest
	for _, f := range d.grid.list {
		list = append(list, Fastest{f.times[1], f.first})
	}
	s := d.stretched(t)
	from, to = around(list, t, first, d.limit()/s)
	return from * s, to * s
}
