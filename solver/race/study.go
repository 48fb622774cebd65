package race

import (
	"context"
	"fmt"
	"math"

	"keelfall/solver/state"
)

// Study is what is asked of a drip beside its time.
type Study struct {
	Critical    *Critical    // nil where no thickness was looked for
	Exponents   []float64    // ∂ln t/∂ln η of each layer, the base last; nil where there is no drip time
	Undulations []Undulation // the drip time for other undulations; nil without one
}

// DripStudy computes when the root of a prepared column drips, and what that time hangs on.
func DripStudy(ctx context.Context, p *Problem, s *state.State) (*Result, error) {
	r := &Result{Problem: p, State: s}
	var err error
	if r.Drip, err = Drip(ctx, p, s); err != nil {
		return nil, err
	}
	if err := r.strainRates(ctx); err != nil {
		return nil, err
	}
	return r, r.study(ctx, func(string) {})
}

// study fills r.Study. What cannot be found beside a drip time that was found is a
// warning, not an error.
func (r *Result) study(ctx context.Context, say func(string)) error {
	p, d := r.Problem, r.Drip
	if d.Outcome == "buoyant" {
		return nil
	}
	miss := func(what string, err error) {
		if err != nil && ctx.Err() == nil {
			d.Warnings = append(d.Warnings, fmt.Sprintf("%s was not found: %v", what, err))
		}
	}
	say("the root's critical thickness")
	c, err := CriticalThickness(ctx, p, d.Time, d.InitialWavelength)
	if err == nil {
		r.Study.Critical = &c
	}
	miss("the root's critical thickness", err)
	if math.IsInf(d.Time, 1) {
		return ctx.Err()
	}
	say("which layer's viscosity sets the drip time")
	r.Study.Exponents, err = Exponents(ctx, p, d.InitialWavelength)
	miss("which layer's viscosity sets the drip time", err)
	say("the drip at other undulations")
	r.Study.Undulations, err = TimeAgainstAmplitude(ctx, p, r.State, d.InitialWavelength)
	miss("the drip time for other undulations", err)
	return ctx.Err()
}

// DripsAlongStrike returns how many drips at a spacing in m find room along the arc's
// length; ok is false where that is not given or nothing drips.
func (r *Result) DripsAlongStrike(spacing float64) (n int, ok bool) {
	if r.Drip == nil || math.IsInf(r.Drip.Time, 1) || !(r.Problem.ArcLength > 0) || !(spacing > 0) {
		return 0, false
	}
	return int(r.Problem.ArcLength / spacing * (1 + 1e-9)), true
}
