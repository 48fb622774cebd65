package drip

import (
	"context"
	"math"
)

// warmed is a root followed through time with perturbations of temperature, on a course of
// its own from where that of another begins.
func (d *through) warmed(ctx context.Context, wavelengths []float64, keep bool) (*through, error) {
	k := d.tape.kept[d.course.first.mark]
	h := &through{plan: d.plan, set: d.set, o: d.o, tape: &tape{motion: k.motion.Copy(), strain: k.strain}}
	h.plan.thermal = d.set.Thermal
	if err := h.restart(); err != nil {
		return nil, err
	}
	var err error
	if h.grid, err = newGroup(h.course, h.set, wavelengths, h.o.Workers); err != nil {
		return nil, err
	}
	if !keep {
		h.grid.stopAt = 1
	}
	return h, h.to(ctx, 2*h.set.Window)
}

// warmAnswer finds the first drip with perturbations of temperature, near a wavelength (at
// the start) that drips first without, from each of amplitudes; first is the best one's.
func (d *through) warmAnswer(ctx context.Context, wavelength float64) (h *through, t [3]float64, first float64, err error) {
	near := []float64{wavelength / neighbour, wavelength, wavelength * neighbour}
	if h, err = d.warmed(ctx, near, true); err != nil {
		return nil, t, 0, err
	}
	times := func(w float64) ([3]float64, error) {
		for _, f := range h.grid.list {
			if f.first == w {
				return h.within(f), nil
			}
		}
		f, err := h.one(ctx, w, -1, false)
		if err != nil {
			return [3]float64{}, err
		}
		return h.within(f), nil
	}
	// a drip's wavelength is held to the limit at its own time
	limit := d.limit() / d.stretched(h.grid.list[1].times[1])
	t, first, err = warmBest(times, wavelength, math.Max(limit, wavelength))
	return h, t, first, err
}

// within are a follower's times, +Inf where its wavelength is beyond the limit by then.
func (d *through) within(f *follower) [3]float64 {
	t := f.times
	for i := range t {
		if f.first*d.stretched(t[i]) > d.limit()*(1+1e-3) {
			t[i] = math.Inf(1)
		}
	}
	return t
}

// warm gives r, whose times are those without T', what T' makes of them, and goes on in
// the column with it. Curve and Traces stay without.
func (d *through) warm(ctx context.Context, r *Result) error {
	if math.IsInf(r.Time, 1) || !d.set.mayWarm(d.course.first.s) {
		return nil
	}
	h, t, first, err := d.warmAnswer(ctx, r.InitialWavelength)
	if err != nil {
		return err
	}
	r.Thermal = &Thermal{Mode: d.set.Thermal, Without: r.Time, With: t[1], Included: true}
	r.warmed(t, first, first*h.stretched(t[1]), d.set.Window)
	d.tape, d.course, d.grid = h.tape, h.course, h.grid
	if math.IsInf(r.Time, 1) {
		return nil
	}
	f, err := d.one(ctx, first, 1, true)
	if err != nil {
		return err
	}
	if r.First, err = d.firstTrace(f); err != nil {
		return err
	}
	r.History.Time, r.History.Base = r.First.Time, r.First.Base
	return nil
}

// warmNext is a later drip with T', of the wavelength that drips first without.
func (d *through) warmNext(ctx context.Context, f Fastest) (Fastest, error) {
	if math.IsInf(f.Time, 1) || !d.set.mayWarm(d.course.first.s) {
		return f, nil
	}
	h, err := d.warmed(ctx, []float64{f.Wavelength}, false)
	if err != nil {
		return f, err
	}
	d.tape, d.course, d.grid = h.tape, h.course, h.grid
	return Fastest{h.grid.list[0].times[1], f.Wavelength}, nil
}

// linearThermal is what T' makes of the drip time of linear theory, without softening, of
// a wavelength at the start; nil where nothing drips in twice the window.
func linearThermal(ctx context.Context, p Plan, set Settings, o Options, wavelength float64) (*Thermal, error) {
	set.Softening = "none"
	d, err := newThrough(ctx, p, set, o)
	if err != nil || !set.mayWarm(d.course.first.s) {
		return nil, err
	}
	if d.grid, err = newGroup(d.course, set, []float64{wavelength}, 1); err != nil {
		return nil, err
	}
	d.grid.stopAt = 1
	if err := d.to(ctx, 2*set.Window); err != nil {
		return nil, err
	}
	without := Fastest{d.grid.list[0].times[1], wavelength}
	if math.IsInf(without.Time, 1) {
		return nil, nil
	}
	with, err := d.warmNext(ctx, without)
	return &Thermal{Mode: set.Thermal, Without: without.Time, With: with.Time}, err
}
