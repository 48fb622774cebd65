package race

import (
	"context"
	"fmt"
	"slices"

	"keelfall/column"
	"keelfall/solver/excision"
	"keelfall/solver/heat"
	"keelfall/solver/state"
)

// Excise returns when the zones have taken the verdict's share of the root of a prepared
// column: in closed form where their rates are given and the column stands still, and by
// following both through time where not.
func Excise(p *Problem, s *state.State) (*excision.Result, error) {
	if p.followsZones() {
		return p.exciseThrough(context.Background(), s)
	}
	r, err := excision.Solve(p.Zones, p.excisionSetting(s))
	if err != nil {
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	return r, nil
}

// ExciseStudy is Excise with the history of every zone and of every layer that is cut.
func ExciseStudy(ctx context.Context, p *Problem, s *state.State) (*excision.Result, error) {
	through, err := p.exciseThrough(ctx, s)
	if err != nil || p.followsZones() {
		return through, err
	}
	r, err := Excise(p, s)
	if err == nil {
		r.History, r.Zones, r.Layers, r.Warnings = through.History, through.Zones, through.Layers, through.Warnings
	}
	return r, err
}

// followsZones says whether what the zones do hangs on how the column changes.
func (p *Problem) followsZones() bool {
	return p.Moving() || slices.ContainsFunc(p.Zones, func(z excision.Zone) bool { return z.Drive != excision.GivenRate })
}

// exciseThrough follows zones and column through time.
func (p *Problem) exciseThrough(ctx context.Context, s *state.State) (*excision.Result, error) {
	plan, err := p.zonePlan(s)
	if err != nil {
		return nil, err
	}
	if _, err := excision.Begin(plan); err != nil {
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	return excision.Run(ctx, plan, p.Share(), p.Drip.Window)
}

// zonePlan is the column and its zones through time as package excision follows them.
func (p *Problem) zonePlan(s *state.State) (excision.Plan, error) {
	c := p.Column
	h := heat.Plan{Column: &c, ExtensionRate: p.Strain.ExtensionRate}
	if c.HasTemperature() || len(p.Events) > 0 {
		var err error
		if h, err = HeatPlan(p); err != nil {
			return excision.Plan{}, err
		}
	}
	h.Tolerance, h.Markers = heatError, nil
	plan := excision.Plan{Heat: h, Zones: p.Zones, ArcWidth: p.ArcWidth, Reference: p.Strain.ReferenceRate}
	if p.Reference == nil {
		return plan, nil
	}
	plan.Weight = func(c *column.Column, hp *heat.Profile) (float64, error) {
		floats, err := IsostasyThrough(p, s, []column.Weight{weigh(c, hp)})
		if err != nil {
			return 0, err
		}
		return floats[0].Force, nil
	}
	return plan, nil
}

// weigh is a column as isostasy sees it, node by node: masses from the pressure, which is
// integrated with the in-situ density.
func weigh(c *column.Column, hp *heat.Profile) column.Weight {
	var w column.Weight
	for i := range hp.Layers {
		l := &hp.Layers[i]
		rho := func(n *heat.Node) float64 {
			return c.Layers[i].Density.At(n.T, n.P, (n.Depth-l.Top)/(l.Bottom-l.Top))
		}
		for j := 1; j < len(l.Nodes); j++ {
			a, b := &l.Nodes[j-1], &l.Nodes[j]
			w.Add(b.Depth-a.Depth, (b.P-a.P)/c.Gravity, rho(a), rho(b))
		}
	}
	return w
}
