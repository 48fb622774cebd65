package plots

import (
	"fmt"
	"math"
	"slices"

	"keelfall/column"
	"keelfall/solver/heat"
)

// Thermal is a column's thermal history to be drawn, in SI.
type Thermal struct {
	History     *heat.History
	Shown       []float64    // s: times of the snapshots drawn as geotherms; the others say where the contacts are
	Events      []heat.Event // in any order
	Fit         *heat.Fit    // of the geotherm at the start to samples; nil without
	Elevation   []float64    // m above sea level, at the history's times; nil where it is not known
	Force       []float64    // N/m, > 0 extensional, at the same times
	HasTimeZero bool
	TimeZero    float64 // s, age of model time 0
}

// check refuses what cannot be drawn.
func (t *Thermal) check() error {
	h := t.History
	if h == nil || len(h.Time) == 0 || len(h.Snapshots) == 0 {
		return fmt.Errorf("plots: there is no thermal history to draw")
	}
	errs := []error{finite("time", h.Time...), finite("surface heat flow", h.SurfaceFlow...), finite("temperature of the root's base", h.RootBase...),
		sameLength("surface heat flow and time", len(h.SurfaceFlow), len(h.Time)), sameLength("temperature of the root's base and time", len(h.RootBase), len(h.Time))}
	if t.stands() {
		errs = append(errs, finite("elevation", t.Elevation...), finite("force", t.Force...),
			sameLength("elevation and time", len(t.Elevation), len(h.Time)), sameLength("force and time", len(t.Force), len(h.Time)))
	}
	for i := range h.Paths {
		p := &h.Paths[i]
		errs = append(errs, finite("path of "+p.Name, slices.Concat(p.Time, p.T, p.P)...),
			sameLength("temperatures and times of "+p.Name, len(p.T), len(p.Time)), sameLength("pressures and times of "+p.Name, len(p.P), len(p.Time)))
	}
	for i := range h.Snapshots {
		s := &h.Snapshots[i]
		if s.Column == nil || s.Profile == nil {
			return fmt.Errorf("plots: snapshot %d has no column or no temperatures", i+1)
		}
		errs = append(errs, sameLength("layers of a snapshot's column and profile", len(s.Column.Layers), len(s.Profile.Layers)))
	}
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

// end is the last time, Myr.
func (t *Thermal) end() float64 { return t.History.Time[len(t.History.Time)-1] / myr }

// when says a time in s as an age where there is a time zero.
func (t *Thermal) when(s float64) (whole, short string) {
	unit, x := " Myr", s/myr
	if t.HasTimeZero {
		unit, x = " Ma", (t.TimeZero-s)/myr
	}
	short = number(math.Round(100*x)/100, 4)
	return short + unit, short
}

// shown are the snapshots drawn as geotherms.
func (t *Thermal) shown() []heat.Snapshot {
	var out []heat.Snapshot
	for _, s := range t.History.Snapshots {
		if slices.Contains(t.Shown, s.Time) {
			out = append(out, s)
		}
	}
	return out
}

// geotherm is temperature in °C against depth in km and pressure in GPa; every layer
// on its own nodes and between them.
func geotherm(p *heat.Profile) (t, z, pressure []float64) {
	const parts = 3
	add := func(l *heat.Layer, depth float64) {
		T, P, _ := l.At(depth)
		t, z, pressure = append(t, T-zeroCelsius), append(z, depth/km), append(pressure, P/gpa)
	}
	for i := range p.Layers {
		l := &p.Layers[i]
		nodes := l.Nodes
		for j := 1; j < len(nodes); j++ {
			for k := range parts {
				add(l, nodes[j-1].Depth+(nodes[j].Depth-nodes[j-1].Depth)*float64(k)/parts)
			}
		}
		if len(nodes) > 0 {
			add(l, nodes[len(nodes)-1].Depth)
		}
	}
	return t, z, pressure
}

// at returns temperature in °C, depth in km and pressure in GPa at a depth in m.
func at(p *heat.Profile, depth float64) (t, z, pressure float64) {
	for i := range p.Layers {
		if l := &p.Layers[i]; depth <= l.Bottom || i == len(p.Layers)-1 {
			T, P, _ := l.At(depth)
			return T - zeroCelsius, depth / km, P / gpa
		}
	}
	return math.NaN(), depth / km, math.NaN()
}

// rootBase is the depth of the root's base in m; ok is false without a root.
func rootBase(c *column.Column) (depth float64, ok bool) {
	_, last, ok := c.RootSpan()
	if !ok {
		return 0, false
	}
	for i := range last + 1 {
		depth += c.Layers[i].Thickness
	}
	return depth, true
}

// eventWords says in a few words what an event does.
func eventWords(e *heat.Event) string {
	rate := number(e.Rate*1e3*myr/1e6, 2) + " mm/yr"
	switch e.Verb {
	case "intrude":
		words := fmt.Sprintf("%s, %s km at %s °C", literal(e.Name), number(e.Thickness/km, 3), number(e.Temperature-zeroCelsius, 4))
		if e.Times > 1 {
			words = fmt.Sprintf("%d × ", e.Times) + words
		}
		return words
	case "accumulate":
		return literal(e.Layer) + " grows " + rate
	case "stretch":
		word := "stretching "
		if e.Rate < 0 {
			word = "thickening "
		}
		return word + number(math.Abs(e.Rate), 2) + " 1/s"
	case "erode":
		return "erosion " + rate
	case "bury":
		return "burial by " + literal(e.Name) + " " + rate
	case "change-base":
		if e.HasHeatFlow {
			return "base at " + number(e.HeatFlow*1e3, 3) + " mW/m²"
		}
		return "base at " + number(e.Temperature-zeroCelsius, 4) + " °C"
	case "remove":
		return number(100*e.Share, 3) + " % of " + literal(e.Layer) + " goes"
	}
	return literal(e.Verb)
}

// moments are the times in s at which a sheet comes in, or the event's beginning.
func moments(e *heat.Event) []float64 {
	out := []float64{e.From}
	for i := 1; e.Verb == "intrude" && i < e.Times; i++ {
		out = append(out, e.From+float64(i)*e.Every)
	}
	return out
}
