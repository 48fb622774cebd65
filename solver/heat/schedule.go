package heat

import (
	"fmt"
	"math"
	"slices"

	"keelfall/column"
)

// moment is when something begins, ends or happens.
type moment struct {
	t     float64
	order int // ends first, then what happens at once, then beginnings
	event *Event
	name  string // of a sheet
	does  func(*Evolution, *moment) error
}

const (
	ending = iota
	atOnce
	beginning
)

// schedule checks all events and puts their moments in order.
func (ev *Evolution) schedule(events []Event) error {
	own := slices.Clone(events)
	for i := range own {
		e := &own[i]
		if err := ev.possible(e); err != nil {
			return fmt.Errorf("heat: event %d (%s): %w", i+1, e.label(), err)
		}
		for j := range i {
			if what := own[j].overlaps(e); what != "" {
				return fmt.Errorf("heat: event %d (%s) and event %d (%s): %s", j+1, own[j].label(), i+1, e.label(), what)
			}
		}
		ev.moments = append(ev.moments, e.moments()...)
	}
	slices.SortStableFunc(ev.moments, func(a, b moment) int {
		switch {
		case a.t != b.t:
			if a.t < b.t {
				return -1
			}
			return 1
		}
		return a.order - b.order
	})
	return ev.rehearse(own)
}

func (e *Event) label() string {
	if e.Name != "" {
		return e.Verb + " " + e.Name
	}
	if e.Layer != "" {
		return e.Verb + " " + e.Layer
	}
	return e.Verb
}

// lasts says whether the verb has a beginning and an end.
func (e *Event) lasts() bool {
	return e.Verb == "accumulate" || e.Verb == "stretch" || e.Verb == "erode" || e.Verb == "bury"
}

// possible checks an event alone.
func (ev *Evolution) possible(e *Event) error {
	number := func(xs ...float64) bool {
		for _, x := range xs {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return false
			}
		}
		return true
	}
	switch {
	case !number(e.From, e.To, e.Rate, e.Thickness, e.Temperature, e.HeatFlow, e.Share, e.Every) || e.Temperature < 0:
		return fmt.Errorf("a number that is none, or a temperature below 0 K: %s to %s, rate %g, thickness %g m, temperature %g K, heat flow %g W/m², share %g", inMyr(e.From), inMyr(e.To), e.Rate, e.Thickness, e.Temperature, e.HeatFlow, e.Share)
	case e.From < 0:
		return fmt.Errorf("it begins at %s, before the start", inMyr(e.From))
	case e.lasts() && !(e.To > e.From):
		return fmt.Errorf("it ends at %s, not after it begins at %s", inMyr(e.To), inMyr(e.From))
	case e.lasts() && e.Verb != "stretch" && !(e.Rate > 0):
		return fmt.Errorf("rate %g m/s, must be > 0", e.Rate)
	}
	switch e.Verb {
	case "stretch", "erode":
	case "accumulate":
	case "bury":
		return ev.newRock(e)
	case "intrude":
		if !(e.Thickness > 0) || !(e.Temperature > 0) {
			return fmt.Errorf("thickness %g m and temperature %g K, must be > 0", e.Thickness, e.Temperature)
		}
		if e.Times < 0 || e.Times > 1 && !(e.Every > 0) {
			return fmt.Errorf("%d times, every %s", e.Times, inMyr(e.Every))
		}
		return ev.newRock(e)
	case "change-base":
		if !e.HasHeatFlow && !(e.Temperature > 0) {
			return fmt.Errorf("needs a temperature or a heat flow")
		}
		if e.HasHeatFlow && e.Temperature > 0 {
			return fmt.Errorf("has a temperature (%g K) and a heat flow (%g W/m²); one of them", e.Temperature, e.HeatFlow)
		}
	case "remove":
		if !(e.Share > 0 && e.Share <= 1) {
			return fmt.Errorf("share %g, must be above 0 and at most 1", e.Share)
		}
	default:
		return fmt.Errorf("no such verb; known are intrude, accumulate, stretch, erode, bury, change-base, remove")
	}
	return nil
}

// newRock checks the rock of an event as that of a layer.
func (ev *Evolution) newRock(e *Event) error {
	if e.Name == "" {
		return fmt.Errorf("the new rock needs a name")
	}
	c := *ev.column
	c.Geotherm = nil
	c.Base = column.Base{Boundary: column.Rigid, HasTemperature: true, Temperature: 1000}
	c.Layers = []column.Layer{{Name: e.Name, Thickness: 1, Rock: e.Rock}}
	return c.Validate()
}

// overlaps says why two events cannot both be.
func (e *Event) overlaps(o *Event) string {
	if !e.lasts() || !o.lasts() || e.From >= o.To || o.From >= e.To {
		return ""
	}
	pair := func(a, b string) bool { return e.Verb == a && o.Verb == b || e.Verb == b && o.Verb == a }
	switch {
	case pair("stretch", "stretch"):
		return "two extension rates at one time"
	case pair("erode", "bury"), pair("erode", "erode"), pair("bury", "bury"):
		return "two rates at the surface at one time"
	case pair("accumulate", "accumulate") && e.Layer == o.Layer:
		return "both add to one layer at one time"
	}
	return ""
}

// moments are the moments of one event.
func (e *Event) moments() []moment {
	if e.lasts() {
		return []moment{{t: e.From, order: beginning, event: e, does: (*Evolution).starts}, {t: e.To, order: ending, event: e, does: (*Evolution).ends}}
	}
	names := e.Names()
	if len(names) == 0 {
		names = []string{""}
	}
	var out []moment
	for i, name := range names {
		out = append(out, moment{t: e.From + float64(i)*e.Every, order: atOnce, event: e, name: name, does: (*Evolution).happens})
	}
	return out
}

// rehearse goes through all moments with layers' names and thicknesses alone: unknown
// layers, names that are there already, more eroded than there is. Thicknesses here do
// not know heating and reaction: the column itself is watched as it goes.
func (ev *Evolution) rehearse(events []Event) error {
	number := func(e *Event) int {
		for i := range events {
			if &events[i] == e {
				return i + 1
			}
		}
		return 0
	}
	there := map[string]bool{}
	order := []column.Layer{}
	for i := range ev.column.Layers {
		l := ev.column.Layers[i]
		there[l.Name] = true
		order = append(order, l)
	}
	at := func(name string) int {
		return slices.IndexFunc(order, func(l column.Layer) bool { return l.Name == name })
	}
	depth, now, rate := ev.depth0, 0.0, ev.background
	eroding, depositing := 0.0, 0.0
	for k := range ev.moments {
		m := &ev.moments[k]
		e := m.event
		fail := func(format string, args ...any) error {
			return fmt.Errorf("heat: event %d (%s): %s", number(e), e.label(), fmt.Sprintf(format, args...))
		}
		dt := m.t - now
		now = m.t
		depth += dt * (depositing - eroding)
		if rate < 0 || !ev.open {
			depth *= math.Exp(-rate * dt)
		}
		if !(depth > 0) {
			return fail("by %s the whole column is eroded away", inMyr(m.t))
		}
		if e.Layer != "" && at(e.Layer) < 0 {
			return fail("there is no layer %q at %s", e.Layer, inMyr(m.t))
		}
		if e.Layer == "" && (e.Verb == "intrude" || e.Verb == "accumulate" || e.Verb == "remove") {
			return fail("it needs a layer")
		}
		end := m.order == ending
		switch e.Verb {
		case "stretch":
			rate = e.Rate
			if end {
				rate = ev.background
			}
		case "erode":
			eroding = e.Rate
			if end {
				eroding = 0
			}
		case "bury":
			depositing = e.Rate
			if end {
				depositing = 0
				continue
			}
			if at(e.Name) >= 0 {
				return fail("there is a layer %q already", e.Name)
			}
			order = slices.Insert(order, 0, column.Layer{Name: e.Name, Root: e.Root})
		case "intrude":
			if at(m.name) >= 0 {
				return fail("there is a layer %q already", m.name)
			}
			i := at(e.Layer)
			root := e.Root || order[i].Root && i+1 < len(order) && order[i+1].Root
			order = slices.Insert(order, i+1, column.Layer{Name: m.name, Root: root})
			depth += e.Thickness
		case "remove":
			if e.Share == 1 {
				order = slices.Delete(order, at(e.Layer), at(e.Layer)+1)
				if len(order) == 0 && !ev.open {
					return fail("nothing is left of the column")
				}
			}
		}
		if between := notRoot(order); between != "" {
			return fail("%s comes to lie between root layers and is not part of the root", between)
		}
	}
	return nil
}

// notRoot returns the first layer that lies between root layers but is not one.
func notRoot(layers []column.Layer) string {
	c := column.Column{Layers: layers}
	first, last, _ := c.RootSpan()
	for i := max(first, 0); i < last; i++ {
		if !layers[i].Root {
			return layers[i].Name
		}
	}
	return ""
}

// Next returns the next time in s at which something begins, ends or jumps, +Inf where
// there is none.
func (ev *Evolution) Next() float64 {
	if ev.next < len(ev.moments) {
		return ev.moments[ev.next].t
	}
	return inf
}
