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
	index int    // of the event in the plan
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
			return e.mistake(i, err)
		}
		for j := range i {
			if what := own[j].overlaps(e); what != "" {
				return e.mistake(i, fmt.Errorf("with events[%d] (%s): %s", j, own[j].label(), what))
			}
		}
		for _, m := range e.moments() {
			m.index = i
			ev.moments = append(ev.moments, m)
		}
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
	return ev.rehearse(0)
}

// EventError is what is wrong with an event of a plan, before the run or on its way.
type EventError struct {
	Index int    // in Plan.Events; −1: the background extension rate
	Event string // its verb and what it is about
	Err   error
}

func (e *EventError) Error() string {
	if e.Index < 0 {
		return fmt.Sprintf("heat: %v", e.Err)
	}
	return fmt.Sprintf("heat: events[%d] (%s): %v", e.Index, e.Event, e.Err)
}

func (e *EventError) Unwrap() error { return e.Err }

func (e *Event) mistake(index int, err error) error {
	return &EventError{Index: index, Event: e.label(), Err: err}
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
	case e.lasts() && e.Verb != "stretch" && !(e.Rate >= 0):
		return fmt.Errorf("rate %g m/s, must not be below 0", e.Rate)
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

// idle says whether the event does nothing: rock that comes or goes at the rate 0.
func (e *Event) idle() bool { return e.lasts() && e.Verb != "stretch" && e.Rate == 0 }

// overlaps says why two events cannot both be.
func (e *Event) overlaps(o *Event) string {
	if e.idle() || o.idle() {
		return ""
	}
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
	if e.idle() {
		return nil
	}
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
