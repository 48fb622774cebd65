package configs

import (
	"fmt"

	"keelfall/solver/heat"
)

type event struct {
	_ struct{} `exactly:"intrude accumulate stretch erode bury change-base remove"`
	block
	Intrude    *intrude    `key:"intrude" doc:"a sheet comes in"`
	Accumulate *accumulate `key:"accumulate" doc:"a layer grows from below"`
	Stretch    *stretch    `key:"stretch" doc:"the column stretches; negative thickens"`
	Erode      *erode      `key:"erode" doc:"rock goes from the surface"`
	Bury       *bury       `key:"bury" doc:"rock comes onto the surface"`
	ChangeBase *changeBase `key:"change-base" doc:"the base's temperature or heat flow changes"`
	Remove     *removal    `key:"remove" doc:"part of a layer goes; rock of the base takes its place"`
}

type intrude struct {
	_ struct{} `required:"density" exactly:"viscosity creep"`
	rock
	Name        text     `key:"name,required" as:"name" doc:"of the layer that the sheet makes; sheets that repeat are numbered: name 1, name 2"`
	At          quantity `key:"at,required" dim:"time"`
	Below       text     `key:"below,required" as:"name" doc:"the layer above the sheet"`
	Thickness   quantity `key:"thickness,required" dim:"length" range:"(0 m,1000 km]"`
	Temperature quantity `key:"temperature,required" dim:"temperature" range:"(0 K,5000 K]"`
	Root        flag     `key:"root" doc:"the sheet is part of the root whose fate is asked; between two root layers it is so anyway"`
	Repeat      *repeat  `key:"repeat" doc:"further sheets like it"`
}

type repeat struct {
	block
	Times count    `key:"times,required" range:"[1,10000]" doc:"how many sheets in all"`
	Every quantity `key:"every,required" dim:"duration" range:"(0 s,5000 Myr]" eg:"0.5 Myr" doc:"time from one to the next"`
}

type accumulate struct {
	block
	Layer       text     `key:"layer,required" as:"name"`
	From        quantity `key:"from,required" dim:"time"`
	To          quantity `key:"to,required" dim:"time"`
	Rate        quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"(0 K,5000 K]" doc:"of the rock that comes; that of the layer's base if left out"`
}

func (e *accumulate) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type stretch struct {
	block
	From quantity `key:"from,required" dim:"time"`
	To   quantity `key:"to,required" dim:"time"`
	Rate quantity `key:"rate,required" dim:"strain-rate" range:"[-1e-10 1/s,1e-10 1/s]"`
}

func (e *stretch) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type erode struct {
	block
	From quantity `key:"from,required" dim:"time"`
	To   quantity `key:"to,required" dim:"time"`
	Rate quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
}

func (e *erode) check(w *walker) { w.increasing(e.From, e.To, e.path) }

type bury struct {
	_ struct{} `required:"density" exactly:"viscosity creep"`
	rock
	Name        text     `key:"name,required" as:"name"`
	From        quantity `key:"from,required" dim:"time"`
	To          quantity `key:"to,required" dim:"time"`
	Rate        quantity `key:"rate,required" dim:"velocity" range:"[0 m/s,1 m/yr]"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"(0 K,5000 K]" doc:"of the rock that comes; that of the surface if left out"`
}

func (e *bury) check(w *walker) {
	e.rock.check(w)
	w.increasing(e.From, e.To, e.path)
}

type changeBase struct {
	_ struct{} `exactly:"temperature heat-flow"`
	block
	At          quantity `key:"at,required" dim:"time"`
	Temperature quantity `key:"temperature" dim:"temperature" range:"(0 K,5000 K]"`
	HeatFlow    quantity `key:"heat-flow" dim:"heat-flow" range:"[-1 W/m2,10 W/m2]"`
}

type removal struct {
	block
	At    quantity `key:"at,required" dim:"time"`
	Layer text     `key:"layer,required" as:"name"`
	Share quantity `key:"share,required" dim:"number" range:"(0,1]"`
}

// rock is what a layer that the event makes is made of; nil where it makes none.
func (e *event) rock() *rock {
	switch {
	case e.Intrude != nil:
		return &e.Intrude.rock
	case e.Bury != nil:
		return &e.Bury.rock
	}
	return nil
}

// problem is the event as package heat takes it, without its rock.
func (e *event) problem() heat.Event {
	switch {
	case e.Intrude != nil:
		i := e.Intrude
		out := heat.Event{Verb: "intrude", Name: i.Name.Value, Layer: i.Below.Value, From: i.At.SI, To: i.At.SI,
			Thickness: i.Thickness.SI, Temperature: i.Temperature.SI, Root: i.Root.On, Times: 1}
		if i.Repeat != nil {
			out.Times, out.Every = i.Repeat.Times.N, i.Repeat.Every.SI
		}
		return out
	case e.Accumulate != nil:
		a := e.Accumulate
		return heat.Event{Verb: "accumulate", Layer: a.Layer.Value, From: a.From.SI, To: a.To.SI, Rate: a.Rate.SI, Temperature: a.Temperature.SI}
	case e.Stretch != nil:
		return heat.Event{Verb: "stretch", From: e.Stretch.From.SI, To: e.Stretch.To.SI, Rate: e.Stretch.Rate.SI}
	case e.Erode != nil:
		return heat.Event{Verb: "erode", From: e.Erode.From.SI, To: e.Erode.To.SI, Rate: e.Erode.Rate.SI}
	case e.Bury != nil:
		b := e.Bury
		return heat.Event{Verb: "bury", Name: b.Name.Value, From: b.From.SI, To: b.To.SI, Rate: b.Rate.SI, Temperature: b.Temperature.SI}
	case e.ChangeBase != nil:
		c := e.ChangeBase
		return heat.Event{Verb: "change-base", From: c.At.SI, To: c.At.SI, Temperature: c.Temperature.SI, HeatFlow: c.HeatFlow.SI, HasHeatFlow: c.HeatFlow.given()}
	case e.Remove != nil:
		r := e.Remove
		return heat.Event{Verb: "remove", Layer: r.Layer.Value, From: r.At.SI, To: r.At.SI, Share: r.Share.SI}
	}
	return heat.Event{}
}

// events are those of the experiment, in its order.
func (e *Experiment) events(w *walker) []heat.Event {
	var out []heat.Event
	for i := range e.data.Events {
		ev := &e.data.Events[i]
		h := ev.problem()
		if r := ev.rock(); r != nil {
			h.Rock = e.rock(w, r)
			e.temperatureNeeds(w, r, &h.Rock, hasTemperature(e.filled))
		}
		out = append(out, h)
	}
	return out
}

// AtEvent words what is wrong with an event, counted from 0, as a mistake of the file; an
// index of no event, −1, is the extension rate in force outside of stretch events.
func (e *Experiment) AtEvent(i int, what string) Mistakes {
	w := *e.walk
	w.mistakes = nil
	if i < 0 || i >= len(e.data.Events) {
		w.addf(e.filled, "", "%s", what)
		return w.mistakes
	}
	h, ok := e.data.Events[i].happen()
	if !ok {
		w.addf(e.filled, fmt.Sprintf("events[%d]", i), "%s", what)
		return w.mistakes
	}
	w.addf(h.block.at, h.block.path, "%s", what)
	return w.mistakes
}

// markers and clocks as package heat takes them.
func (e *Experiment) markers() (markers []heat.Marker, clocks []heat.Clock) {
	for i := range e.data.Markers {
		m := &e.data.Markers[i]
		markers = append(markers, heat.Marker{Name: m.Name.Value, BaseOf: m.BaseOf.Value, Depth: m.Depth.SI})
	}
	for i := range e.data.Clocks {
		c := &e.data.Clocks[i]
		clocks = append(clocks, heat.Clock{Name: c.Name.Value, Marker: c.Marker.Value, ActivationEnergy: c.ActivationEnergy.SI,
			Diffusivity: c.Diffusivity.SI, Radius: c.Radius.SI, Geometry: c.Geometry.Value})
	}
	return markers, clocks
}
