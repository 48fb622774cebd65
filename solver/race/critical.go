package race

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"keelfall/column"
)

// Critical is how thick the root can be at the start before it drips within the window.
type Critical struct {
	Thickness float64 // m; NaN where none was found
	Factor    float64 // of the thickness in use; NaN where none was found
	Always    bool    // it drips in time at every thickness searched
	From, To  float64 // m: what was searched
	Reached   float64 // s a root that grows at Rate takes from its thickness to that; NaN where it does not grow, or is thicker already
	Rate      float64 // m/s, at which an event feeds the root; 0 without one
	Until     float64 // s, when that event ends
}

// How thickness is searched: up to mostThicker times and down to a mostThicker-th, in
// steps of thicker, then to criticalError in ln of the drip time over the window.
const (
	mostThicker   = 8.0
	thicker       = math.Sqrt2
	criticalError = 1e-3
)

// CriticalThickness finds the thickness of the root, nearest to the one in use, at which
// it drips just as the window ends. All root layers are scaled by one factor, what lies
// below moves down, and all else stays: a basal temperature then holds at the deeper base.
// near is the drip's wavelength in m, 0 where not known; time is that of the drip in use,
// s, or +Inf.
func CriticalThickness(ctx context.Context, p *Problem, time, near float64) (Critical, error) {
	now, window := p.Column.RootThickness(), p.Drip.Window
	c := Critical{Thickness: math.NaN(), Factor: math.NaN(), From: now, To: now, Reached: math.NaN()}
	c.Rate, c.Until = p.rootRate()
	late := func(f float64) (float64, error) { // ln of the drip time over the window
		t, err := p.thick(f).timeNear(ctx, near*f)
		return math.Log(t / window), err
	}
	a := bracketEnd{1, math.Log(time / window)}
	step := thicker
	if c.Always = a.late <= 0; c.Always {
		step = 1 / thicker
	}
	for f := step; f <= mostThicker*1.001 && f >= 0.999/mostThicker; f *= step {
		l, err := late(f)
		if errors.Is(err, ErrInput) { // too thin for its undulation, or beyond what a geotherm covers
			break
		}
		if err != nil {
			return c, err
		}
		c.From, c.To = math.Min(c.From, f*now), math.Max(c.To, f*now)
		b := bracketEnd{f, l}
		if (b.late <= 0) == (a.late <= 0) {
			a = b
			continue
		}
		if c.Factor, err = between(late, a, b); err != nil {
			return c, err
		}
		c.Thickness, c.Always = c.Factor*now, false
		if c.Rate > 0 && c.Thickness > now {
			c.Reached = (c.Thickness - now) / c.Rate
		}
		return c, nil
	}
	return c, ctx.Err()
}

// bracketEnd is a factor and how late the root drips with it.
type bracketEnd struct{ factor, late float64 }

// between finds the factor between a and b at which late is 0: by the Illinois method
// where both ends have a drip time, else by bisection, in ln of the factor. Source:
// Dowell & Jarratt 1971, BIT 11, 168 (from memory).
func between(late func(float64) (float64, error), a, b bracketEnd) (float64, error) {
	wa, wb := a.late, b.late
	for range 60 {
		x := 0.5
		if !math.IsInf(wa, 0) && !math.IsInf(wb, 0) {
			x = wa / (wa - wb)
		}
		f := a.factor * math.Pow(b.factor/a.factor, x)
		l, err := late(f)
		if err != nil {
			return 0, err
		}
		if math.Abs(l) < criticalError || math.Abs(b.factor/a.factor-1) < 1e-5 {
			return f, nil
		}
		if (l <= 0) == (a.late <= 0) {
			a, wa = bracketEnd{f, l}, l
			if wb /= 2; math.IsInf(b.late, 0) {
				wb = b.late
			}
		} else {
			b, wb = bracketEnd{f, l}, l
			if wa /= 2; math.IsInf(a.late, 0) {
				wa = a.late
			}
		}
	}
	return 0, fmt.Errorf("race: the drip time jumps over the window between thicknesses of × %.6g and × %.6g", a.factor, b.factor)
}

// thick is the problem with a root that is f times as thick.
func (p *Problem) thick(f float64) *Problem {
	q := *p
	q.Column.Layers = slices.Clone(p.Column.Layers)
	for i := range q.Column.Layers {
		if l := &q.Column.Layers[i]; l.Root {
			l.Thickness *= f
		}
	}
	return &q
}

// timeNear is the drip time of a problem that is not prepared.
func (p *Problem) timeNear(ctx context.Context, near float64) (float64, error) {
	if err := p.canDrip(); err != nil {
		return 0, err
	}
	s, err := Prepare(p)
	if err != nil {
		return 0, err
	}
	return p.dripTime(ctx, s, near, 0)
}

// rootRate is the largest rate in m/s at which an event feeds the root, and when it ends, s.
func (p *Problem) rootRate() (rate, until float64) {
	for _, e := range p.Events {
		if e.Verb == "accumulate" && slices.ContainsFunc(p.Column.Layers, func(l column.Layer) bool { return l.Root && l.Name == e.Layer }) {
			if e.Rate > rate {
				rate, until = e.Rate, e.To
			}
		}
	}
	return rate, until
}
