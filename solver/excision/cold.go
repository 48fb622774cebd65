package excision

import (
	"keelfall/column"
)

// coldPoints is the number of cells of a column without temperature: only its layers count.
const coldPoints = 40

// lukewarm is a column without a temperature at one and the same temperature, in which
// nothing depends on it: no heat flows, so that any conductivity will do.
func lukewarm(c *column.Column) *column.Column {
	const T = 1000 // K
	w := *c
	w.Surface.Temperature = T
	w.Base.HasTemperature, w.Base.Temperature = true, T
	inert := func(r *column.Rock) {
		r.Conductivity, r.HeatCapacity, r.HeatProduction = column.Conductivity{Reference: 3}, 1000, column.HeatProduction{}
	}
	inert(&w.Base.Rock)
	w.Layers = append([]column.Layer(nil), c.Layers...)
	for i := range w.Layers {
		inert(&w.Layers[i].Rock)
	}
	return &w
}

// unheated takes the temperature off a column again.
func (ev *Evolution) unheated(c *column.Column) *column.Column {
	c.Surface, c.Base, c.Geotherm = ev.start.Surface, ev.start.Base, nil
	for i := range c.Layers {
		l := &c.Layers[i]
		from := &ev.start.Base.Rock
		for k := range ev.start.Layers {
			if ev.start.Layers[k].Name == l.Name {
				from = &ev.start.Layers[k].Rock
			}
		}
		l.Conductivity, l.HeatCapacity, l.HeatProduction = from.Conductivity, from.HeatCapacity, from.HeatProduction
	}
	return c
}
