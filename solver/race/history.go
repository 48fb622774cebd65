package race

import (
	"fmt"
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
)

// Moving says whether the column changes with time whatever its root does: by events,
// by a background strain, or by a reaction that runs.
func (p *Problem) Moving() bool {
	return len(p.Events) > 0 || p.Strain.ExtensionRate != 0 || slices.ContainsFunc(p.Column.Layers, func(l column.Layer) bool { return reacts(l.Density) })
}

// reacts says whether a rock's density changes by a reaction with time.
func reacts(d column.Density) bool {
	switch d := d.(type) {
	case column.Molten:
		return reacts(d.Solid)
	case column.Varying: // it goes on where less has reacted than can
		r, ok := d.Of.(column.Reaction)
		return ok && reacts(r.WithExtent(slices.Min(d.Extent)))
	case column.Reaction:
		return d.Kinetics != nil && d.Kinetics.Prefactor > 0 && d.Extent < d.Cap
	}
	return false
}

// zonesStill refuses shear zones in a column with events: what zones cut is computed for
// the column as it is at the start.
func (p *Problem) zonesStill() error {
	if len(p.Events) == 0 || len(p.Zones) == 0 {
		return nil
	}
	return fmt.Errorf("%w: events and shear zones together: what zones cut out is computed for the column as it is at the start; leave one of them out (keelfall history follows the events)", ErrInput)
}

// brings are the verbs that do nothing at the rate 0, where a sweep may well begin.
var brings = map[string]bool{"accumulate": true, "erode": true, "bury": true}

// HeatPlan is the column's thermal history as package heat takes it, from the start
// temperatures of the steady or given geotherm. A column without a temperature has none.
func HeatPlan(p *Problem) (heat.Plan, error) {
	if !p.Column.HasTemperature() {
		return heat.Plan{}, fmt.Errorf("%w: a thermal history needs a temperature and the experiment has none; add base.temperature or base.heat-flow, or a geotherm", ErrInput)
	}
	c := p.Column
	events := slices.DeleteFunc(slices.Clone(p.Events), func(e heat.Event) bool { return e.Rate == 0 && brings[e.Verb] })
	return heat.Plan{Column: &c, ExtensionRate: p.Strain.ExtensionRate, Events: events, Markers: p.Markers}, nil
}
