package configs

import (
	"cmp"
	"fmt"
	"slices"
)

// happening is one event on the line of time, with what messages need.
type happening struct {
	*event
	block       *block // of the verb
	verb        string
	from, to    quantity // to is from for what happens at once
	layer       text     // acted on, or intruded below
	layerKey    string
	name        text // of the new rock
	temperature quantity
	sheet       int // of those that repeat, from 0
}

// happen puts an event's verbs in one shape; ok is false where there is none, or one
// with mistakes in its times.
func (e *event) happen() (h happening, ok bool) {
	h = happening{event: e}
	switch {
	case e.Intrude != nil:
		i := e.Intrude
		h.block, h.verb, h.from, h.to, h.layer, h.layerKey, h.name, h.temperature = &i.block, "intrude", i.At, i.At, i.Below, "below", i.Name, i.Temperature
	case e.Accumulate != nil:
		a := e.Accumulate
		h.block, h.verb, h.from, h.to, h.layer, h.layerKey, h.temperature = &a.block, "accumulate", a.From, a.To, a.Layer, "layer", a.Temperature
	case e.Stretch != nil:
		h.block, h.verb, h.from, h.to = &e.Stretch.block, "stretch", e.Stretch.From, e.Stretch.To
	case e.Erode != nil:
		h.block, h.verb, h.from, h.to = &e.Erode.block, "erode", e.Erode.From, e.Erode.To
	case e.Bury != nil:
		b := e.Bury
		h.block, h.verb, h.from, h.to, h.name, h.temperature = &b.block, "bury", b.From, b.To, b.Name, b.Temperature
	case e.ChangeBase != nil:
		c := e.ChangeBase
		h.block, h.verb, h.from, h.to, h.temperature = &c.block, "change-base", c.At, c.At, c.Temperature
		if c.HeatFlow.given() {
			h.temperature = c.HeatFlow
		}
	case e.Remove != nil:
		r := e.Remove
		h.block, h.verb, h.from, h.to, h.layer, h.layerKey = &r.block, "remove", r.At, r.At, r.Layer, "layer"
	}
	return h, h.block != nil && h.block.at != nil && h.from.given() && h.to.given()
}

// lasts says whether the event has a beginning and an end.
func (h *happening) lasts() bool { return h.from != h.to }

// timeline checks what events say about one another, the layers and the window. names
// are the layers at the start.
func (e *Experiment) timeline(w *walker, names []string) {
	var all []happening
	for i := range e.data.Events {
		h, ok := e.data.Events[i].happen()
		if !ok {
			names = append(names, e.data.Events[i].born()...) // known, whenever it comes
			continue
		}
		e.window(w, &h)
		all = append(all, h)
	}
	if !hasTemperature(e.filled) {
		for i := range all {
			if t := all[i].temperature; t.given() {
				w.addf(t.n, all[i].block.path, "%s has no meaning, because the experiment has no temperature; %s", t.n.show(), howWarm)
			}
		}
	}
	overlaps(w, all)
	inTime(all)
	before := len(w.mistakes)
	e.order(w, sheets(all), names)
	if len(w.mistakes) == before && len(all) == len(e.data.Events) {
		e.rootKept(w, slices.DeleteFunc(all, func(h happening) bool { return h.Intrude == nil }))
	}
}

// born are the names of the layers an event makes.
func (e *event) born() []string {
	p := e.problem()
	if p.Name == "" {
		return nil
	}
	return p.Names()
}

// window refuses what lies before the start, or begins after the experiment's end.
func (e *Experiment) window(w *walker, h *happening) {
	key := ".at"
	if h.lasts() {
		key = ".from"
	}
	if h.from.SI < 0 {
		w.addf(h.from.n, h.block.path+key, "%s lies before the start, 0 Myr; put what happened earlier into the column", h.from.n.show())
		return
	}
	d := e.data.Drip
	if d == nil || !d.Window.given() {
		return
	}
	end := d.Window
	say := func(n *node, what string) {
		w.addf(n, h.block.path+key, "%s lies after the window's end, %s, and would never be seen; make drip.window longer, or leave the event out", what, end.n.show())
	}
	switch {
	case h.from.SI > end.SI || h.lasts() && h.from.SI == end.SI:
		say(h.from.n, h.from.n.show())
	case h.Intrude != nil && h.Intrude.Repeat != nil && h.Intrude.Repeat.Times.n != nil && h.Intrude.Repeat.Every.given():
		r := h.Intrude.Repeat
		if last := h.from.SI + float64(r.Times.N-1)*r.Every.SI; last > end.SI*(1+1e-12) {
			key = ".repeat"
			say(r.at, fmt.Sprintf("the last of %d sheets, at %.6g Myr,", r.Times.N, last/(1e6*secondsPerYear)))
		}
	}
}

// overlaps refuses two of a kind that act at one time: which of them does would be open.
func overlaps(w *walker, all []happening) {
	group := func(h *happening) string {
		switch h.verb {
		case "erode", "bury":
			return "the surface erodes or is buried by one event at a time"
		case "stretch":
			return "the column stretches by one event at a time"
		case "accumulate":
			return h.layer.Value + " grows by one event at a time"
		}
		return ""
	}
	for i := range all {
		for j := range i {
			a, b := &all[j], &all[i]
			if g := group(b); g == "" || g != group(a) || b.from.SI >= a.to.SI || a.from.SI >= b.to.SI {
				continue
			}
			w.addf(b.block.at, b.block.path, "from %s to %s overlaps %s from %s to %s%s; %s", b.from.n.show(), b.to.n.show(),
				a.block.path, a.from.n.show(), a.to.n.show(), line(a.block.at), group(b))
			break
		}
	}
}

// line says where something else stands.
func line(n *node) string {
	if n.line > 0 {
		return fmt.Sprintf(" (line %d)", n.line)
	}
	return ""
}

// sheets are happenings with one for each sheet of an intrusion that repeats, in order.
func sheets(all []happening) []happening {
	var out []happening
	for _, h := range all {
		out = append(out, h)
		if h.Intrude == nil || h.Intrude.Repeat == nil || !h.Intrude.Repeat.Every.given() {
			continue
		}
		for k := 1; k < h.Intrude.Repeat.Times.N; k++ {
			h.sheet = k
			h.from.SI += h.Intrude.Repeat.Every.SI
			h.to.SI = h.from.SI
			out = append(out, h)
		}
	}
	inTime(out)
	return out
}

// inTime sorts by the beginning; what lasts comes after what happens at once.
func inTime(all []happening) {
	slices.SortStableFunc(all, func(a, b happening) int {
		if c := cmp.Compare(a.from.SI, b.from.SI); c != 0 || a.lasts() == b.lasts() {
			return c
		} else if a.lasts() {
			return 1
		}
		return -1
	})
}

// names are the layers that come with it; of sheets that repeat, its own.
func (h *happening) names() []string {
	n := h.born()
	if h.Intrude != nil && h.sheet < len(n) {
		return n[h.sheet : h.sheet+1]
	}
	return n
}

// when is the time it begins, as written or of its sheet.
func (h *happening) when() string {
	if h.sheet == 0 {
		return h.from.n.show()
	}
	return fmt.Sprintf("%.6g Myr", h.from.SI/(1e6*secondsPerYear))
}

// order follows the layers through the events, which come in order of time: a layer has
// to be there when something is done to it, and a name is free when a layer is born.
func (e *Experiment) order(w *walker, all []happening, names []string) {
	there := map[string]string{} // "" or what took the layer away
	for _, n := range names {
		there[n] = ""
	}
	later := map[string]*happening{} // born by an event to come
	for i := range all {
		for _, n := range all[i].names() {
			if _, ok := later[n]; !ok {
				later[n] = &all[i]
			}
		}
	}
	known := slices.Clone(names)
	for i := range all {
		h := &all[i]
		if l := h.layer; l.given() {
			gone, ok := there[l.Value]
			path := h.block.path + "." + h.layerKey
			switch {
			case ok && gone != "":
				w.addf(l.n, path, "%s is gone by then: %s", l.n.show(), gone)
			case !ok && later[l.Value] != nil:
				w.addf(l.n, path, "%s is not there yet: it comes with %s at %s", l.n.show(), later[l.Value].block.path, later[l.Value].when())
			case !ok:
				w.addf(l.n, path, "%s is not a layer; %s", l.n.show(), didYouMean(l.Value, firstFew(known)))
			case h.Remove != nil && h.Remove.Share.SI == 1:
				there[l.Value] = fmt.Sprintf("%s takes all of it at %s", h.block.path, h.from.n.show())
			}
		}
		for _, n := range h.names() {
			if _, ok := there[n]; ok {
				w.addf(h.name.n, h.block.path+".name", "%s is the name of another layer too; names of layers are unique", shorten(n))
				break
			}
			there[n] = ""
			known = append(known, n)
		}
	}
}

// rootKept refuses a sheet of the root that would lie apart from it. One between two
// root layers is part of the root whether it says so or not.
func (e *Experiment) rootKept(w *walker, sheets []happening) {
	names, root := []string{}, map[string]bool{}
	for i := range e.data.Layers {
		l := e.data.Layers[i].Layer
		names = append(names, l.Name.Value)
		root[l.Name.Value] = l.Root.On
	}
	rooted := slices.ContainsFunc(names, func(n string) bool { return root[n] })
	for i := range sheets {
		s := sheets[i].Intrude
		at := slices.Index(names, s.Below.Value) + 1
		above, below := root[s.Below.Value], at < len(names) && root[names[at]]
		if s.Root.On && !above && !below && rooted {
			w.addf(s.Root.n, s.path+".root", "%s comes in below %s, apart from the root; root layers follow one another", s.Name.Value, s.Below.Value)
		}
		for _, n := range sheets[i].born() { // each right below the same layer
			names = slices.Insert(names, at, n)
			root[n] = s.Root.On || above && below
		}
	}
}
