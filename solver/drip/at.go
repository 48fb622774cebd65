package drip

import (
	"context"
	"math"

	"keelfall/solver/state"
)

// TimeAt returns when an undulation of one wavelength in m drips, s; +Inf where it never
// does. It follows the closure where set asks for softening by the drip itself.
func TimeAt(ctx context.Context, s *state.State, set Settings, wavelength float64) (float64, error) {
	p, err := newProblem(s, set, 1)
	if err != nil {
		return 0, err
	}
	if set.Softening == "self" {
		f, err := NewSoft(s, Background{})
		if err != nil {
			return 0, err
		}
		run := softSearch{soft: f, set: set, stop: p.stop, depth: p.thickness, horizon: Horizon}
		d, err := run.follow(ctx, wavelength, math.Inf(1))
		return run.best(d), err
	}
	f, err := p.frozen(p.solver, wavelength)
	if err != nil {
		return 0, err
	}
	return p.warmTime(s, Fastest{p.time(f, 1), wavelength})
}

// ThroughTimeAt is TimeAt in a column that changes with time, of a wavelength at its
// start; +Inf where nothing drips in twice the window.
func ThroughTimeAt(ctx context.Context, p Plan, set Settings, wavelength float64) (float64, error) {
	if set.Softening == "self" {
		return throughSoftTimeAt(ctx, p, set, wavelength)
	}
	d, err := newThrough(ctx, p, set, Options{Workers: 1})
	if err != nil {
		return 0, err
	}
	if d.grid, err = newGroup(d.course, set, []float64{wavelength}, 1); err != nil {
		return 0, err
	}
	d.grid.stopAt = 1
	if err := d.to(ctx, 2*set.Window); err != nil {
		return 0, err
	}
	return d.grid.list[0].times[1], nil
}
