package configs

import (
	"fmt"
	"math"
	"slices"
)

// zones checks zones against the layers at the start, the strain and one another.
func (e *Experiment) zones(w *walker, names []string) {
	if e.data.Excision == nil {
		return
	}
	zs := e.data.Excision.Zones
	for i := range zs {
		z := &zs[i]
		if z.at == nil {
			continue
		}
		z.cutting(w, names)
		e.driven(w, z)
		z.overlaps(w, zs[:i])
	}
	sharesLeft(w, zs)
}

// cutting refuses layers that are not there, or not neighbours from above downwards.
func (z *zone) cutting(w *walker, names []string) {
	before := -1
	for j, cut := range z.Cuts {
		if !cut.given() {
			return
		}
		path := fmt.Sprintf("%s.cuts[%d]", z.path, j)
		k := slices.Index(names, cut.Value)
		switch {
		case k < 0:
			w.addf(cut.n, path, "%s is not a layer; %s", cut.n.show(), didYouMean(cut.Value, firstFew(names)))
			return
		case before >= 0 && k != before+1:
			w.addf(cut.n, path, "%s does not lie directly below %s; a zone cuts adjacent layers, named from above", cut.Value, z.Cuts[j-1].Value)
			return
		}
		before = k
	}
}

// driven refuses a zone whose slip would follow from what the experiment does not give.
func (e *Experiment) driven(w *walker, z *zone) {
	d := &e.data
	wide := d.Arc != nil && d.Arc.Width.given()
	if n := z.Share.n; n != nil {
		if !wide {
			w.addf(n, z.path+".share", "is a share of the arc's extension, which needs its width; %s", howWide)
		} else if z.dated() && !e.extends(z.From.SI, z.To.SI) {
			w.addf(n, z.path+".share", "is a share of the arc's extension, and nothing extends the arc from %s to %s; add strain.extension-rate or a stretch event", z.From.n.show(), z.To.n.show())
		}
	}
	if z.Force == nil {
		return
	}
	at := z.at.get("force")
	if !wide {
		w.addf(at, z.path+".force", "stretches what lies below the zone over the arc's width; %s", howWide)
	}
	if !hasTemperature(e.filled) {
		w.addf(at, z.path+".force", "needs a temperature and the experiment has none; %s", howWarm)
	}
	if top := d.Layers[0].Layer; z.Friction == nil && top != nil && top.Friction == nil {
		w.addf(z.at, z.path+".friction", "is missing, and the rock at the surface, %s, has none either: nothing could break it; a force balance needs one, for example friction: {cohesion: 10 MPa, angle: 30 deg, pore-fluid-factor: 0.4}", top.Name.Value)
	}
}

// howWide says how an experiment gets its width.
const howWide = "add arc.width, for example arc: {width: 160 km}"

// dated says whether the zone's interval is known and in order.
func (z *zone) dated() bool { return z.From.given() && z.To.given() && z.From.SI < z.To.SI }

// until is when it stops, s; +Inf where nothing says so.
func (z *zone) until() float64 {
	if z.To.n.from == fromDefault {
		return math.Inf(1)
	}
	return z.To.SI
}

// extends says whether the column is stretched at any time from from to to, s.
func (e *Experiment) extends(from, to float64) bool {
	d := &e.data
	if d.Strain == nil || !d.Strain.ExtensionRate.given() {
		return true // not known
	}
	at := []float64{from}
	for i := range d.Events {
		if s := d.Events[i].Stretch; s != nil {
			if !s.From.given() || !s.To.given() || !s.Rate.given() {
				return true
			}
			at = append(at, s.From.SI, s.To.SI)
		}
	}
	return slices.ContainsFunc(at, func(t float64) bool { return t >= from && t < to && e.stretching(t) > 0 })
}

// stretching is the rate in 1/s that holds from time t on: an event's, or the background's.
func (e *Experiment) stretching(t float64) float64 {
	for i := range e.data.Events {
		if s := e.data.Events[i].Stretch; s != nil && s.From.SI <= t && t < s.To.SI {
			return s.Rate.SI
		}
	}
	return e.data.Strain.ExtensionRate.SI
}

// overlaps refuses a layer that an earlier zone cuts at the same time, as which of them
// takes its rock would be open, and a force that is not that of another zone.
func (z *zone) overlaps(w *walker, earlier []zone) {
	if !z.dated() {
		return
	}
	for i := range earlier {
		o := &earlier[i]
		if !o.dated() || z.From.SI >= o.until() || o.From.SI >= z.until() {
			continue
		}
		if z.Force != nil && o.Force != nil && z.Force.FarField.given() && o.Force.FarField.given() && z.Force.FarField.SI != o.Force.FarField.SI {
			w.addf(z.Force.FarField.n, z.path+".force.far-field", "%s is not the %s of %s%s, which is active at the same time; both lie in one plate and bear one force",
				z.Force.FarField.n.show(), o.Force.FarField.n.show(), o.path, line(o.at))
		}
		for j, cut := range z.Cuts {
			if !cut.given() || !slices.ContainsFunc(o.Cuts, func(c text) bool { return c.Value == cut.Value }) {
				continue
			}
			w.addf(cut.n, fmt.Sprintf("%s.cuts[%d]", z.path, j), "%s is cut from %s to %s, and by %s from %s to %s%s; one zone cuts a layer at a time",
				cut.Value, z.From.n.show(), z.To.n.show(), o.path, o.From.n.show(), o.To.n.show(), line(o.at))
			return
		}
	}
}

// sharesLeft refuses zones that together take more than all of the extension.
func sharesLeft(w *walker, zs []zone) {
	for i := range zs {
		z := &zs[i]
		if !z.dated() || !z.Share.given() {
			continue
		}
		sum := 0.0 // when this zone begins: a sum is largest where one does
		for j := range zs {
			o := &zs[j]
			if began := o.From.SI < z.From.SI || o.From.SI == z.From.SI && j <= i; began && o.dated() && o.Share.given() && z.From.SI < o.To.SI {
				sum += o.Share.SI
			}
		}
		if sum > 1+1e-9 && math.Abs(sum-z.Share.SI) > 1e-9 {
			w.addf(z.Share.n, z.path+".share", "makes the zones' shares %.4g together from %s on; needs 1 or less", sum, z.From.n.show())
		}
	}
}
