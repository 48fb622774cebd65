package drip

import (
	"context"
	"errors"
	"fmt"
	"math"

	"keelfall/solver/growth"
)

// softThrough is a root followed through time whose own strain rate softens its rock.
type softThrough struct {
	through // for take: tape and settings
	course  *softCourse
	until   float64    // s: what takes longer is not looked for
	scale   float64    // of the first amplitude
	list    []softWave // of the last search, by wavelength
	error   float64    // of a step of a descent
	failed  int        // wavelengths whose viscosities did not settle
	ended   string
}

// softWave is one undulation followed: Wavelength of its Descent is the first one, times
// are model times, and Time is that of the best estimate or what was asked for.
type softWave struct {
	Descent
	last     float64   // wavelength at the drip, m
	lengths  []float64 // at the times of Descent.At, m
	straying []float64 // the background's strain rate then, second invariant, 1/s
}

// throughSoft is Through where the drip softens its own rock: the displacements obey
// dξ/dt = A(ξ, t) ξ with A from the closure's fixed point in the column at t and its
// background, interpolated between nodes of time. The times are best estimates: the flow
// is multiplied by what the closure is known to fall short, at the n, kh and share of the
// background of the moment, and what the finite amplitude makes of it.
func throughSoft(ctx context.Context, p Plan, set Settings, o Options) (*Result, error) {
	q, err := newSoftThrough(ctx, p, set, o)
	if err != nil {
		return nil, err
	}
	from, to, err := q.span()
	if err != nil {
		return nil, err
	}
	win, err := q.search(ctx, from, to, 4, 1e-2)
	if err != nil {
		return nil, err
	}
	r := &Result{Outcome: "window", Time: math.Inf(1), TimeLow: math.Inf(1), TimeHigh: math.Inf(1), Unrestricted: Fastest{Time: math.Inf(1)},
		Soft: &SelfSoftened{Slow: math.Inf(1), Best: math.Inf(1), BestLow: math.Inf(1), BestHigh: math.Inf(1), Failed: q.failed}}
	for i := range q.list {
		w := &q.list[i]
		r.Curve.Wavelength, r.Curve.Time = append(r.Curve.Wavelength, w.Wavelength), append(r.Curve.Time, w.Time)
		r.Traces = append(r.Traces, w.trace(false))
		if w.Time < r.Unrestricted.Time {
			r.Unrestricted = Fastest{w.Time, w.last}
		}
	}
	if err := q.answer(ctx, win, r); err != nil || math.IsInf(r.Time, 1) {
		return r, err
	}
	if r.Thermal, err = linearThermal(ctx, p, set, o, r.InitialWavelength); err != nil {
		return nil, err
	}
	return r, q.drips(ctx, win, r)
}

// throughSoftTime is the first drip's best estimate alone, for searches: good to about
// 0.5 %. With o.Near only wavelengths within a factor of 1.7 of that are looked at.
func throughSoftTime(ctx context.Context, p Plan, set Settings, o Options) (float64, error) {
	q, err := newSoftThrough(ctx, p, set, o)
	if err != nil {
		return 0, err
	}
	q.course.spacing = 3 * softSpacing
	if near := o.Near; near > 0 {
		w, err := q.search(ctx, near/1.7, near*1.7, 1, 0.04)
		return w.Time, err
	}
	from, to, err := q.span()
	if err != nil {
		return 0, err
	}
	w, err := q.search(ctx, from, to, 3, 0.04)
	return w.Time, err
}

// throughSoftTimeAt is the best estimate of one wavelength's drip.
func throughSoftTimeAt(ctx context.Context, p Plan, set Settings, wavelength float64) (float64, error) {
	q, err := newSoftThrough(ctx, p, set, Options{Workers: 1})
	if err != nil {
		return 0, err
	}
	w, err := q.follow(ctx, wavelength, best, q.until)
	return w.Time, err
}

func newSoftThrough(ctx context.Context, p Plan, set Settings, o Options) (*softThrough, error) {
	if !(set.Window > 0) {
		return nil, fmt.Errorf("drip: window %g s; must be positive", set.Window)
	}
	t, err := newTape(p.Begin)
	if err != nil {
		return nil, err
	}
	q := &softThrough{through: through{plan: p, set: set, o: o, tape: t}, until: 2 * set.Window, scale: 1, error: softError}
	q.course, err = newSoftCourse(p, t, set, q.until)
	return q, err
}

// span is the range of wavelengths asked for, or that of a spectrum.
func (q *softThrough) span() (from, to float64, err error) {
	from, to = q.o.From, q.o.To
	if from <= 0 || to <= 0 {
		s, err := growth.NewSolver(q.course.first().model, courseTolerance)
		if err != nil {
			return 0, 0, err
		}
		a, b := s.Range()
		if from <= 0 {
			from = a
		}
		if to <= 0 {
			to = b
		}
	}
	from, to = q.set.within(from, to)
	return from, math.Max(to, 1.01*from), nil
}

// follow follows one undulation, up to a time in s; what does not settle is left out and
// counted.
func (q *softThrough) follow(ctx context.Context, wavelength float64, b boost, limit float64) (softWave, error) {
	n := q.course.first()
	w := softWave{Descent: Descent{Wavelength: wavelength, Time: math.Inf(1)}}
	a, stop := q.set.AmplitudeAt(wavelength)*q.scale, q.set.Criterion*n.root
	switch {
	case a >= stop && q.scale > 1: // three times the undulation may be the drip itself
		w.Time, w.last = n.t, wavelength
		return w, nil
	case q.set.Start(wavelength, stop) == 0 || a >= stop: // no undulation
		return w, nil
	}
	p := &softPath{ctx: ctx, course: q.course, first: wavelength, boost: b, a0: a / n.root,
		cores: q.o.Workers != 1, seen: map[*softBand]bool{}}
	states, contact := n.lay.displaced()
	r := newSoftRun(p, contact[n.lay.rootBase], q.error, limit)
	r.fades, r.t, r.begun = false, n.t, n.t
	r.slowest = 0.01 / (limit - n.t)
	r.y = make([]float64, len(states))
	r.y[r.base] = a
	r.d.Wavelength = wavelength
	err := p.descend(r)
	w.Descent = r.d
	if cancelled := ctx.Err(); cancelled != nil {
		return w, cancelled
	}
	w.Dropped = math.IsInf(w.Time, 1) && limit < q.until
	if err != nil {
		if !errors.Is(err, errConverge) {
			return w, err
		}
		q.failed++
		w.Time = math.Inf(1)
	}
	if w.Ended != "" {
		q.ended = fmt.Sprintf("%.3g km: %s", wavelength/1e3, w.Ended)
	}
	w.last, w.lengths, w.straying = wavelength*math.Exp(q.course.strain(w.Time)), nil, nil
	for _, t := range w.At {
		w.lengths = append(w.lengths, wavelength*math.Exp(q.course.strain(t)))
		w.straying = append(w.straying, math.Abs(q.course.around(t).back.ExtensionRate))
	}
	return w, nil
}

// descend follows an undulation from stretch to stretch.
func (p *softPath) descend(r *softRun) error {
	for {
		end, err := r.follow()
		if err != nil {
			return err
		}
		if end == overturned {
			a, _, _ := p.nodes(r.t)
			f, err := a.closure(!p.course.fine)
			if err != nil {
				return err
			}
			r.d.Ended = f.overturn(r.y)
		}
		if end != landed || p.at == len(p.course.stretches)-1 || !p.jump(r) {
			return nil
		}
		if dot(r.y, r.y) == 0 { // nothing is undulated any more
			return nil
		}
		if math.Abs(r.y[r.base]) >= p.stop(r.t) { // a root that has thinned may be less than its undulation
			r.d.Time, r.d.Exponent = r.t, r.exponents/(r.t-r.begun)
			return nil
		}
	}
}
