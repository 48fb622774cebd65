package race

import (
	"context"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/solver/drip"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// heatError is the error of a step of the heat under drips, K: a drip time moves by
// about 1e-5 with a tenth of it.
const heatError = 0.02

// Drip returns when the root of a prepared column drips: followed through time where the
// column moves, the exact solution of the frozen column where it does not.
func Drip(ctx context.Context, p *Problem, s *state.State) (*drip.Result, error) {
	if err := p.canDrip(); err != nil {
		return nil, err
	}
	if !p.Moving() {
		return drip.Solve(ctx, s, p.dripSettings(), p.dripOptions())
	}
	plan, err := p.dripPlan()
	if err != nil {
		return nil, err
	}
	r, err := drip.Through(ctx, plan, p.dripSettings(), p.dripOptions())
	if err == nil && r.Mode != nil && len(r.Mode.DissipationShare) != len(p.Column.Layers)+1 {
		r.Mode = nil // of layers that are not those of the start
	}
	return r, err
}

// dripSettings are p.Drip, without softening where no rock can be softened: the closure
// would find the same viscosities.
func (p *Problem) dripSettings() drip.Settings {
	set := p.Drip
	if !p.softens() {
		set.Softening = "none"
	}
	set.Thermal = p.ThermalBuoyancy
	return set
}

// dripTime returns the drip time of a prepared column alone; near, where not 0, is a
// wavelength in m to look around; until, where not 0, is a time in s after which a drip
// counts as none. In a column that moves, perturbations of temperature count as they do for
// the drip of Run, by their ratio there.
func (p *Problem) dripTime(ctx context.Context, s *state.State, near, until float64) (float64, error) {
	o := p.dripOptions()
	o.Near, o.Until = near, until
	switch {
	case !p.Moving() && p.softens():
		return drip.SoftenedTime(ctx, s, p.dripSettings(), o)
	case !p.Moving():
		return drip.Time(ctx, s, p.dripSettings(), o)
	}
	plan, err := p.dripPlan()
	if err != nil {
		return 0, err
	}
	t, err := drip.ThroughTime(ctx, plan, p.dripSettings(), o)
	if p.warmth > 0 {
		t *= p.warmth
	}
	return t, err
}

// dripPlan is the column through time as package drip follows it.
func (p *Problem) dripPlan() (drip.Plan, error) {
	plan := drip.Plan{AlongStrike: p.Strain.Wavevector == AlongStrike, Reference: p.Strain.ReferenceRate}
	if !p.Column.HasTemperature() && len(p.Events) == 0 {
		c := p.Column
		plan.Begin = func() (drip.Motion, error) { return drip.NewCold(&c, p.Strain.ExtensionRate), nil }
		return plan, nil
	}
	h, err := HeatPlan(p)
	if err != nil {
		return plan, err
	}
	h.Tolerance, h.Markers = heatError, nil
	plan.Begin = func() (drip.Motion, error) {
		ev, err := heat.Begin(h)
		if err != nil {
			return nil, fmt.Errorf("%w: %w", ErrInput, err)
		}
		return drip.Heated{Evolution: ev}, nil
	}
	return plan, nil
}

// canDrip refuses what no drip can be asked of: no root, a root on a wall, an
// undulation that already is the drip.
func (p *Problem) canDrip() error {
	_, last, ok := p.Column.RootSpan()
	if !ok {
		return fmt.Errorf("%w: %w", ErrInput, drip.ErrNoRoot)
	}
	if last == len(p.Column.Layers)-1 && p.immovable() {
		return fmt.Errorf("%w: the root lies on a wall that cannot move; give it a half-space or inviscid base, or a layer below", ErrInput)
	}
	if tip := p.Drip.Criterion * p.Column.RootThickness(); p.Drip.Dripped(tip) {
		return fmt.Errorf("%w: an undulation of %.4g m already is the drip: %g × the root's thickness is %.4g m", ErrInput, p.Drip.Least(), p.Drip.Criterion, tip)
	}
	return nil
}

// strainRates computes the drip time at three times and a third of the reference
// strain rate, which nothing depends on where the column is strained.
func (r *Result) strainRates(ctx context.Context) error {
	p := r.Problem
	r.Rate = RateBand{Used: p.Strain.ExtensionRate == 0 && !p.softens() && drip.RateDependent(r.State), AtThrice: math.Inf(1), AtOneThird: math.Inf(1)}
	if !r.Rate.Used {
		r.Rate.AtThrice, r.Rate.AtOneThird = r.Drip.Time, r.Drip.Time
		return nil
	}
	for _, f := range []float64{3, 1.0 / 3} {
		q := *p
		q.Strain.ReferenceRate *= f
		s, err := Prepare(&q)
		if err != nil {
			return err
		}
		t, err := q.dripTime(ctx, s, r.Drip.Wavelength, 0)
		if err != nil {
			return err
		}
		if f > 1 {
			r.Rate.AtThrice = t
		} else {
			r.Rate.AtOneThird = t
		}
	}
	return nil
}

// immovable says whether the base is a wall.
func (p *Problem) immovable() bool {
	b := p.Column.Base.Boundary
	return b != column.HalfSpace && b != column.Inviscid
}
