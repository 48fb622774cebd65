package heat

import (
	"context"
	"fmt"
	"math"
	"slices"
)

// Advance moves the column on to the model time in s. The times of all events are hit
// exactly; what happens at that time itself has happened when it returns.
//
// Errors: a time before the present one or not finite, the context's, and the first
// depth and time at which the physics has no value (a density outside its table, a
// conductivity that is not positive, a column eroded away).
func (ev *Evolution) Advance(ctx context.Context, to float64) error {
	if !(to >= ev.t) || math.IsInf(to, 1) {
		return fmt.Errorf("heat: cannot advance from %s to %s", inMyr(ev.t), inMyr(to))
	}
	for {
		if err := ev.moment(); err != nil {
			return err
		}
		if ev.t >= to {
			return ev.bounded()
		}
		if err := ctx.Err(); err != nil {
			return err
		}
		until := min(to, ev.Next())
		if err := ev.step(until - ev.t); err != nil {
			return err
		}
		if until-ev.t < 1e-12*math.Abs(until) {
			ev.t = until
		}
	}
}

// moment does all that is due.
func (ev *Evolution) moment() error {
	done := false
	for ev.next < len(ev.moments) && ev.moments[ev.next].t <= ev.t {
		m := &ev.moments[ev.next]
		ev.next++
		if err := m.does(ev, m); err != nil {
			return m.event.mistake(m.index, fmt.Errorf("at %s: %w", inMyr(ev.t), err))
		}
		done = true
	}
	if !done {
		return ev.err
	}
	if err := ev.restart(); err != nil {
		return err
	}
	ev.chart()
	if ev.record != nil {
		ev.record()
	}
	return nil
}

// starts begins an event that lasts.
func (ev *Evolution) starts(m *moment) error {
	e := m.event
	switch e.Verb {
	case "stretch":
		ev.strain(e.Rate)
	case "erode":
		ev.eroding = e.Rate
	case "accumulate":
		if _, ok := ev.find(e.Layer); !ok {
			return fmt.Errorf("the layer is gone")
		}
		ev.growing = append(ev.growing, Flux{Layer: e.Layer, Rate: e.Rate, Temperature: e.Temperature})
	case "bury":
		T := e.Temperature
		if T == 0 {
			T = ev.surfaceAt(ev.t)
		}
		s := newStratum(e.Name, e.Rock, e.Root, 0)
		ev.add(0, s, ev.rock(&s, sliver, T, 0, 0, 1), false)
		ev.growing = append(ev.growing, Flux{Layer: e.Name, AtTop: true, Rate: e.Rate, Temperature: T})
	}
	return nil
}

func (ev *Evolution) ends(m *moment) error {
	e := m.event
	name := e.Layer
	switch e.Verb {
	case "stretch":
		ev.strain(ev.background)
		return nil
	case "erode":
		ev.eroding = 0
		return nil
	case "bury":
		name = e.Name
	}
	ev.growing = slices.DeleteFunc(ev.growing, func(f Flux) bool { return f.Layer == name && f.AtTop == (e.Verb == "bury") })
	return nil
}

// happens does what happens at once.
func (ev *Evolution) happens(m *moment) error {
	e := m.event
	switch e.Verb {
	case "change-base":
		ev.base.HasHeatFlow, ev.base.HasTemperature = e.HasHeatFlow, !e.HasHeatFlow
		ev.base.Temperature, ev.base.HeatFlow = e.Temperature, e.HeatFlow
	case "remove":
		return ev.remove(e.Layer, e.Share)
	case "intrude":
		i, ok := ev.find(e.Layer)
		if !ok {
			return fmt.Errorf("the layer is gone")
		}
		c := &ev.cells[ev.strata[i].hi-1]
		root := e.Root || ev.strata[i].root && i+1 < len(ev.strata) && ev.strata[i+1].root
		s := newStratum(m.name, e.Rock, root, e.Thickness)
		n := int(math.Max(2*leastEach, math.Ceil(2*e.Thickness/ev.dmax)))
		ev.add(i+1, s, ev.rock(&s, e.Thickness, e.Temperature, c.P+ev.gravity*c.m/2, ev.gravity, n), false)
		return ev.level()
	}
	return ev.err
}

// rock makes n cells of new rock under the pressure P at its top; with g = 0 the pressure
// stays.
func (ev *Evolution) rock(s *stratum, thickness, T, P, g float64, n int) []cell {
	cells := make([]cell, n)
	d := thickness / float64(n)
	for i := range cells {
		c := &cells[i]
		c.x = (float64(i) + 0.5) / float64(n)
		if s.react != nil {
			c.X = s.react.Extent
		}
		c.T, c.P = T, P
		for range 4 { // the pressure at the middle and the density agree
			c.m = d * s.bulk(s.density(T, c.P, c.x, c.X), T, c.P)
			c.P = P + g*c.m/2
		}
		P += g * c.m
		top := d * float64(i)
		c.H = (s.rock.HeatProduction.Integral(top+d) - s.rock.HeatProduction.Integral(top)) / c.m
		c.e, _ = s.enthalpy(c.T, c.P)
	}
	return cells
}

// add inserts new rock in front of stratum at, and books it.
func (ev *Evolution) add(at int, s stratum, cells []cell, below bool) {
	for i := range cells {
		ev.gain(cells[i].m, cells[i].e, below)
	}
	ev.insert(at, s, cells)
	lo := ev.strata[at].lo
	for i := range cells {
		ev.touch(&ev.cells[lo+i])
	}
	ev.press(true)
}

// insertFoot begins the rock of the base at the column's foot.
func (ev *Evolution) insertFoot() {
	c := &ev.cells[len(ev.cells)-1]
	s := newStratum(ev.footName(), ev.base.Rock, false, 0)
	s.below = true
	P := c.P + ev.gravity*c.m/2
	ev.add(len(ev.strata), s, ev.rock(&s, sliver, ev.footT(), P, ev.gravity, 1), true)
}

// Flux sets the rock that comes and goes at layers' edges, in place of what was set
// before. A layer that is used up, or was never there, takes no part.
//
// Errors: a rate or temperature that is not finite, a temperature below 0 K.
func (ev *Evolution) Flux(f ...Flux) error {
	for i := range f {
		if math.IsNaN(f[i].Rate) || math.IsInf(f[i].Rate, 0) || !(f[i].Temperature >= 0) || math.IsInf(f[i].Temperature, 1) {
			return fmt.Errorf("heat: flux at %s: rate %g m/s, temperature %g K", f[i].Layer, f[i].Rate, f[i].Temperature)
		}
	}
	ev.fluxes = append(ev.fluxes[:0], f...)
	ev.fresh = false
	return nil
}

// Heat sets the sources of heat in place of those before.
//
// Errors: a power or depth that is not finite, a layer that is not there.
func (ev *Evolution) Heat(sources ...Source) error {
	for _, s := range sources {
		if math.IsNaN(s.Power) || math.IsInf(s.Power, 0) || !(s.Depth >= 0) || math.IsInf(s.Depth, 1) || !(s.Height >= 0) || math.IsInf(s.Height, 1) {
			return fmt.Errorf("heat: source of %g W/m² at %g m, over %g m", s.Power, s.Depth, s.Height)
		}
		if _, ok := ev.find(s.BaseOf); !ok && s.BaseOf != "" {
			return fmt.Errorf("heat: source at the base of %s, which is not there", s.BaseOf)
		}
	}
	ev.sources = append(ev.sources[:0], sources...)
	ev.fresh = false
	return nil
}

// Time returns the model time, s.
func (ev *Evolution) Time() float64 { return ev.t }

// ExtensionRate returns the rate at which the column itself stretches now, 1/s.
func (ev *Evolution) ExtensionRate() float64 { return ev.rate }

// ArcRate returns the extension rate in force now, 1/s: that of Plan or of a stretch event.
func (ev *Evolution) ArcRate() float64 { return ev.arc }

// Stretch sets how much of the extension rate in force stretches the column itself, where
// shear zones take the rest, and a rate in 1/s that it stretches at besides:
//
//	ExtensionRate = own × ArcRate + extra
//
// Until it is called own is 1 and extra 0. Errors: a number that is not finite.
func (ev *Evolution) Stretch(own, extra float64) error {
	if math.IsNaN(own+extra) || math.IsInf(own+extra, 0) {
		return fmt.Errorf("heat: stretching by %g of the extension rate and %g 1/s", own, extra)
	}
	ev.own, ev.extra = own, extra
	ev.strain(ev.arc)
	return nil
}

// strain puts an extension rate in force.
func (ev *Evolution) strain(arc float64) {
	ev.arc = arc
	if rate := ev.own*arc + ev.extra; rate != ev.rate {
		ev.rate, ev.fresh = rate, false
	}
}
