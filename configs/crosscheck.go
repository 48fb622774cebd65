package configs

import "slices"

// crossCheck checks what layers, events, markers and zones say about one another. It works on a tree
// that may have other mistakes, and then leaves out what it cannot know.
func (e *Experiment) crossCheck(w *walker) {
	names := []string{}
	complete := true // no layer whose name is unknown
	last := -1
	for i := range e.data.Layers {
		l := e.data.Layers[i].Layer
		if l == nil || !l.Name.given() {
			complete = false
			continue
		}
		names = append(names, l.Name.Value)
		if !l.Root.On {
			continue
		}
		if last >= 0 && last != i-1 {
			w.addf(l.Root.n, l.path+".root", "is not adjacent to the root layer %s; root layers follow one another", e.data.Layers[last].Layer.Name.Value)
		}
		last = i
	}
	if complete {
		e.undulation(w)
		e.timeline(w, slices.Clone(names))
		e.markersCheck(w, names)
		e.zones(w, names)
	}
}

func firstFew(names []string) []string { return names[:min(len(names), 200)] }

// undulation refuses an amplitude that is a drip at the start. A written amplitude is
// named itself; where it is the default, the mistake stands at the thickness of the
// lowest root layer.
func (e *Experiment) undulation(w *walker) {
	d := e.data.Drip
	if d == nil || !d.Amplitude.given() || !d.Criterion.given() {
		return
	}
	var thickness float64
	var lowest quantity
	for i := range e.data.Layers {
		l := e.data.Layers[i].Layer
		if !l.Root.On {
			continue
		}
		if !l.Thickness.given() {
			return
		}
		thickness, lowest = thickness+l.Thickness.SI, l.Thickness
	}
	if thickness == 0 || d.Amplitude.SI < d.Criterion.SI*thickness {
		return
	}
	at, is := d.Amplitude.n, d.Amplitude.n.show()
	if at.from == fromDefault {
		at, is = lowest.n, is+" (the default)"
	}
	w.addf(at, "drip.amplitude", "%s is a drip already at the start; needs less than criterion × root thickness, %s × %.6g km = %.6g km",
		is, d.Criterion.n.show(), thickness/1e3, d.Criterion.SI*thickness/1e3)
}
