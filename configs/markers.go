package configs

import "slices"

// markersCheck checks markers against the layers at the start, clocks against markers.
func (e *Experiment) markersCheck(w *walker, names []string) {
	var depth float64
	deep := true // the column's depth is known
	for i := range e.data.Layers {
		l := e.data.Layers[i].Layer
		deep = deep && l != nil && l.Thickness.given()
		if deep {
			depth += l.Thickness.SI
		}
	}
	markers := []string{}
	for i := range e.data.Markers {
		m := &e.data.Markers[i]
		if m.Name.given() {
			markers = append(markers, m.Name.Value)
		}
		if b := m.BaseOf; b.given() && !slices.Contains(names, b.Value) {
			w.addf(b.n, m.path+".base-of", "%s is not a layer at the start; %s", b.n.show(), didYouMean(b.Value, firstFew(names)))
		}
		if m.Depth.given() && deep && m.Depth.SI > depth*(1+1e-12) {
			w.addf(m.Depth.n, m.path+".depth", "%s lies below the column, which is %.6g km deep", m.Depth.n.show(), depth/1e3)
		}
	}
	for i := range e.data.Clocks {
		c := &e.data.Clocks[i]
		switch {
		case c.at != nil && !hasTemperature(e.filled):
			w.addf(c.at, c.path, "needs a temperature and the experiment has none; %s", howWarm)
		case !c.Marker.given() || slices.Contains(markers, c.Marker.Value):
		case len(markers) == 0:
			w.addf(c.Marker.n, c.path+".marker", "%s is not a marker; there are none: add markers, for example markers: [{name: %s, depth: 30 km}]", c.Marker.n.show(), c.Marker.n.show())
		default:
			w.addf(c.Marker.n, c.path+".marker", "%s is not a marker; %s", c.Marker.n.show(), didYouMean(c.Marker.Value, firstFew(markers)))
		}
	}
}
