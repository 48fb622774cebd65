package heat

import (
	"cmp"
	"fmt"
	"slices"

	"keelfall/column"
)

// Event is one thing that happens to the column. Verb says which; the fields that
// the verb does not use are zero. Times are seconds of model time.
//
//	intrude      at From: a sheet of Rock, Thickness thick at Temperature, below Layer
//	accumulate   From to To: Layer grows at its base at Rate, at Temperature
//	stretch      From to To: Rate replaces the background extension rate
//	erode        From to To: rock leaves at the surface at Rate
//	bury         From to To: Rock settles on the surface at Rate, at Temperature
//	change-base  at From: the base gets Temperature or, with HasHeatFlow, HeatFlow
//	remove       at From: Share of Layer's mass goes, from its base
//
// Rates of rock are m/s of the thickness the rock has where it comes or goes. A
// Temperature of 0 is the one there: of the layer's base for accumulate, of the surface
// for bury; intrude and change-base need one.
type Event struct {
	Verb        string
	Name, Layer string      // of the new rock; the layer acted on or intruded below
	From, To    float64     // s; equal for what happens at once
	Rate        float64     // m/s, or 1/s for stretch (negative thickens)
	Thickness   float64     // m, at Temperature and the pressure there
	Temperature float64     // K
	HeatFlow    float64     // W/m², used where HasHeatFlow
	HasHeatFlow bool        // change-base to a heat flow
	Share       float64     // removed share, above 0 to 1
	Times       int         // intrude: how many sheets in all; 0 and 1 are one
	Every       float64     // s between them
	Rock        column.Rock // of intrude and bury
	Root        bool        // the new rock is part of the root
}

// Names returns the names of the layers that the event makes: of an intrusion that
// repeats, its name with a number ("sheet 1", "sheet 2").
func (e *Event) Names() []string {
	switch {
	case e.Verb == "bury":
		return []string{e.Name}
	case e.Verb != "intrude":
		return nil
	case e.Times <= 1:
		return []string{e.Name}
	}
	names := make([]string, e.Times)
	for i := range names {
		names[i] = fmt.Sprintf("%s %d", e.Name, i+1)
	}
	return names
}

// Marker is a point carried with the rock, at a depth or at a layer's base.
type Marker struct {
	Name, BaseOf string
	Depth        float64 // m, at the start; unused with BaseOf
}

// Clock is a closure-temperature system read at a marker (Dodson 1973).
type Clock struct {
	Name, Marker     string
	ActivationEnergy float64 // J/mol
	Diffusivity      float64 // m²/s
	Radius           float64 // m
	Geometry         string  // sphere, cylinder or sheet
}

// InOrder returns the events by their beginning; those of one time keep their order.
func InOrder(events []Event) []Event {
	out := slices.Clone(events)
	slices.SortStableFunc(out, func(a, b Event) int { return cmp.Compare(a.From, b.From) })
	return out
}
