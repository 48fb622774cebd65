package heat

import (
	"fmt"
	"math"
	"slices"

	"keelfall/column"
)

// What a column may become. The first and the last are chosen, so that the balance of energy
// closes and a run ends; the second is about the depth of the Earth's mantle.
const (
	thinnest = 1.0    // m; over an open base rock of the base comes in
	deepest  = 3000e3 // m
	turnover = 500.0  // of the column at the start: a step may bring or take 1/150 of it
)

// rehearsal is the column with its layers' names and thicknesses alone. Thicknesses here do
// not know heating and reaction: the column itself is watched as it goes.
type rehearsal struct {
	closed  bool // no rock of the base makes up for what goes
	t, rate float64
	order   []column.Layer
	growing map[string]float64 // by layer, m/s
	eroding float64
	renewed float64   // rock that has come and gone, of the depth at the start
	start   float64   // that depth, m
	active  []*moment // beginnings of what lasts now
}

// rehearse goes through all moments, and on to the time until: unknown layers, names that
// are there already, a column that becomes too thin or too deep.
func (ev *Evolution) rehearse(until float64) error {
	r := rehearsal{closed: !ev.open || ev.base.Boundary == column.Inviscid, rate: ev.background, start: ev.depth0,
		order: slices.Clone(ev.column.Layers), growing: map[string]float64{}}
	for k := range ev.moments {
		m := &ev.moments[k]
		if err := r.pass(m.t); err != nil {
			return err
		}
		before := r.depth()
		if err := r.meet(m, ev.background); err != nil {
			return m.event.mistake(m.index, err)
		}
		if err := r.bounds(r.t, before, m); err != nil {
			return err
		}
	}
	return r.pass(until)
}

func (r *rehearsal) at(name string) int {
	return slices.IndexFunc(r.order, func(l column.Layer) bool { return l.Name == name })
}

func (r *rehearsal) depth() float64 {
	var d float64
	for i := range r.order {
		d += r.order[i].Thickness
	}
	return d
}

// pass lets time go by to t. At the extension rate e a layer that grows at g becomes
//
//	d exp(−eΔt) + g Δt (1 − exp(−eΔt))/(eΔt)
//
// thick, and the column loses as much at its surface for the rate of erosion.
func (r *rehearsal) pass(t float64) error {
	dt := t - r.t
	if !(dt > 0) {
		return nil
	}
	before, x := r.depth(), r.rate*dt
	left, grown := math.Exp(-x), dt
	if x != 0 {
		grown = -math.Expm1(-x) / r.rate
	}
	lost := r.eroding * grown
	if !r.closed {
		r.renewed += max(x, 0)
	}
	r.renewed += r.eroding * dt / r.start
	for _, g := range r.growing {
		r.renewed += g * dt / r.start
	}
	for i := range r.order {
		l := &r.order[i]
		l.Thickness = l.Thickness*left + r.growing[l.Name]*grown
	}
	for i := range r.order {
		l := &r.order[i]
		d := min(lost, l.Thickness)
		l.Thickness -= d
		lost -= d
	}
	r.t = t
	return r.bounds(t, before, nil)
}

// bounds refuses a column that has become too thin or too deep at t from the depth
// before, by the event of m, or else by what matters most of what lasts.
func (r *rehearsal) bounds(t, before float64, m *moment) error {
	d := r.depth()
	sign, what := 0.0, ""
	switch {
	case !(d <= deepest):
		sign, what = 1, fmt.Sprintf("by %s the column is deeper than %.4g km; at most that can be followed", inMyr(t), deepest/1e3)
	case r.renewed > turnover:
		what = fmt.Sprintf("by %s rock %.4g times as thick as the column has come or gone; at most %g times can be followed", inMyr(t), r.renewed, turnover)
	case r.closed && d < thinnest:
		sign, what = -1, fmt.Sprintf("by %s the column is thinner than %g m, or gone; at least that is needed over a base that brings no rock", inMyr(t), thinnest)
	default:
		return nil
	}
	if m == nil {
		m = r.culprit(sign, before)
	}
	if sign < 0 && m != nil && m.event.Verb == "erode" {
		what = fmt.Sprintf("by %s the whole column is eroded away", inMyr(t))
	}
	err := fmt.Errorf("%s (%.4g km before)", what, before/1e3)
	if m == nil {
		return &EventError{Index: -1, Err: fmt.Errorf("at the extension rate %g 1/s %w", r.rate, err)}
	}
	return m.event.mistake(m.index, err)
}

// culprit is the beginning of what most adds to a column of that depth (sign 1) or takes from
// it (−1), or is fastest (0); nil is the background extension rate.
func (r *rehearsal) culprit(sign, depth float64) *moment {
	var m *moment
	signed := func(speed float64) float64 {
		if sign == 0 {
			return math.Abs(speed)
		}
		return sign * speed
	}
	most := signed(-r.rate * depth)
	for _, a := range r.active {
		speed := a.event.Rate
		switch a.event.Verb {
		case "erode":
			speed = -speed
		case "stretch":
			speed *= -depth
		}
		speed = signed(speed)
		if speed >= most {
			most, m = speed, a
		}
	}
	return m
}

// meet is what a moment does.
func (r *rehearsal) meet(m *moment, background float64) error {
	e := m.event
	if m.order == ending {
		r.finish(e, background)
		return nil
	}
	if e.Layer != "" && r.at(e.Layer) < 0 {
		return fmt.Errorf("there is no layer %q at %s", e.Layer, inMyr(m.t))
	}
	if e.Layer == "" && (e.Verb == "intrude" || e.Verb == "accumulate" || e.Verb == "remove") {
		return fmt.Errorf("it needs a layer")
	}
	if e.lasts() {
		r.active = append(r.active, m)
	}
	switch e.Verb {
	case "stretch":
		r.rate = e.Rate
	case "erode":
		r.eroding = e.Rate
	case "accumulate":
		r.growing[e.Layer] += e.Rate
	case "bury":
		if r.at(e.Name) >= 0 {
			return fmt.Errorf("there is a layer %q already", e.Name)
		}
		r.order = slices.Insert(r.order, 0, column.Layer{Name: e.Name, Root: e.Root})
		r.growing[e.Name] += e.Rate
	case "intrude":
		if r.at(m.name) >= 0 {
			return fmt.Errorf("there is a layer %q already", m.name)
		}
		i := r.at(e.Layer)
		root := e.Root || r.order[i].Root && i+1 < len(r.order) && r.order[i+1].Root
		r.order = slices.Insert(r.order, i+1, column.Layer{Name: m.name, Root: root, Thickness: e.Thickness})
	case "remove":
		i := r.at(e.Layer)
		r.order[i].Thickness *= 1 - e.Share
		if e.Share == 1 {
			r.order = slices.Delete(r.order, i, i+1)
			delete(r.growing, e.Layer)
		}
	}
	if between := notRoot(r.order); between != "" {
		return fmt.Errorf("%s comes to lie between root layers and is not part of the root", between)
	}
	return nil
}

// finish ends what lasts. A layer that has gone in the meantime has ceased to grow.
func (r *rehearsal) finish(e *Event, background float64) {
	r.active = slices.DeleteFunc(r.active, func(a *moment) bool { return a.event == e })
	switch e.Verb {
	case "stretch":
		r.rate = background
	case "erode":
		r.eroding = 0
	case "accumulate":
		delete(r.growing, e.Layer)
	case "bury":
		delete(r.growing, e.Name)
	}
}
