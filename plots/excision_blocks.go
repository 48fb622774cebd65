package plots

import (
	"fmt"
	"math"
	"slices"

	"keelfall/solver/race"
)

// place is a point of a section: x along it down the zones' dip, z the depth, km.
type place struct{ x, z float64 }

// polygon is a convex piece of one stratum.
type polygon struct {
	index   int // of its stratum
	corners []place
}

// segment is a piece of a contact, or of a zone whose index it has.
type segment struct {
	index int
	below bool // the zone's root: it goes on from here as flow
	a, b  place
}

// cut is what one zone does to the section.
type cut struct {
	index                  int // of the zone
	name                   string
	from                   float64 // Myr
	dip, layering          float64 // rad
	depth                  float64 // of the base of its lowest layer at the traverse, km
	slip, heave, throw, up float64 // km; up is by how much the footwall rises at the traverse
	capped                 bool    // its layers were used up before the slip ended
}

// sectionCuts are the zones that moved, in the order in which they began.
func sectionCuts(res *race.Result) ([]cut, error) {
	var out []cut
	last := len(res.Excision.History.Time) - 1
	for i := range min(len(res.Excision.Zones), mostZones) {
		h, zone := &res.Excision.Zones[i], &res.Problem.Zones[i]
		c := cut{index: i, name: literal(zone.Name), from: zone.From, dip: zone.Dip, layering: zone.LayeringDip, slip: h.Slip[last] / km}
		var thickness, z float64
		for k := range res.Problem.Column.Layers {
			l := &res.Problem.Column.Layers[k]
			z += l.Thickness / km
			if slices.Contains(zone.Cuts, l.Name) {
				c.depth, thickness = z, thickness+l.Thickness/km
			}
		}
		if !(c.dip > 0) || c.depth == 0 {
			return nil, fmt.Errorf("plots: the zone %s dips %g° and cuts to %g km", zone.Name, c.dip*180/math.Pi, c.depth)
		}
		if c.slip <= 0 {
			c.slip = 0
		}
		loss := zone.VerticalLoss()
		if c.slip*loss > thickness {
			c.slip, c.capped = thickness/loss, true
		}
		c.heave, c.throw, c.up = c.slip*zone.Heave(), c.slip*zone.Throw(), c.slip*loss
		out = append(out, c)
	}
	slices.SortStableFunc(out, func(a, b cut) int {
		switch {
		case a.from < b.from:
			return -1
		case a.from > b.from:
			return 1
		}
		return 0
	})
	return out, nil
}

// far is beyond every section, km.
const far = 1e4

// blocks are the rock, contacts and zones of a section.
type blocks struct {
	rock             []polygon
	contacts, planes []segment
}

// newBlocks lays the strata out with the layering's dip, and the zones through the
// base of their lowest layer at the traverse.
func newBlocks(s *strata, cuts []cut) blocks {
	var b blocks
	slope := math.Tan(cuts[0].layering)
	line := func(z float64) (left, right place) { return place{-far, z - slope*far}, place{far, z + slope*far} }
	for i, l := range s.all {
		tl, tr := line(l.top)
		bl, br := line(math.Min(l.bottom, far))
		if i == 0 {
			tl.z, tr.z = -2*far, -2*far
		} else {
			b.contacts = append(b.contacts, segment{index: i, a: tl, b: tr})
		}
		if i == len(s.all)-1 {
			bl.z, br.z = 2*far, 2*far
		}
		b.rock = append(b.rock, polygon{i, []place{tl, tr, br, bl}})
	}
	for _, c := range cuts {
		at := place{0, c.depth}
		b.planes = append(b.planes,
			segment{index: c.index, a: place{-c.depth / math.Tan(c.dip), 0}, b: at},
			segment{index: c.index, below: true, a: at, b: place{c.depth / math.Tan(c.dip), 2 * c.depth}})
	}
	return b
}

func (b *blocks) clone() blocks {
	out := blocks{contacts: slices.Clone(b.contacts), planes: slices.Clone(b.planes)}
	for _, q := range b.rock {
		out.rock = append(out.rock, polygon{q.index, slices.Clone(q.corners)})
	}
	return out
}

// slip moves what lies above the zone down its dip, and what lies below it up by what
// is then missing at the traverse, so that the surface stays where it is there.
func (b *blocks) slip(c cut) {
	plane := b.at(c.index)
	hanging := place{c.heave, c.throw - c.up}
	footwall := place{0, -c.up}
	side := func(p place) float64 { // above the zone where positive
		return (p.x-plane.x)*math.Sin(c.dip) - (p.z-plane.z)*math.Cos(c.dip)
	}
	var rock []polygon
	for _, q := range b.rock {
		for _, up := range []bool{true, false} {
			sign, move := 1.0, hanging
			if !up {
				sign, move = -1, footwall
			}
			if k := q.half(func(p place) float64 { return sign * side(p) }); len(k.corners) > 2 {
				rock = append(rock, k.moved(move))
			}
		}
	}
	b.rock = rock
	b.contacts = cutSegments(b.contacts, side, hanging, footwall, -1)
	b.planes = cutSegments(b.planes, side, hanging, footwall, c.index)
}

// at is the lower end of a zone, where it met the traverse.
func (b *blocks) at(zone int) place {
	var tip place
	for _, l := range b.planes {
		if l.index == zone && !l.below {
			tip = l.b // of the deepest piece
		}
	}
	return tip
}

// cutSegments splits segments at a zone and moves the two sides; the zone itself goes
// with its footwall.
func cutSegments(all []segment, side func(place) float64, hanging, footwall place, self int) []segment {
	var out []segment
	for _, l := range all {
		sa, sb := side(l.a), side(l.b)
		switch {
		case l.index == self || sa <= 0 && sb <= 0:
			out = append(out, l.moved(footwall))
		case sa >= 0 && sb >= 0:
			out = append(out, l.moved(hanging))
		default:
			u := sa / (sa - sb)
			m := place{l.a.x + u*(l.b.x-l.a.x), l.a.z + u*(l.b.z-l.a.z)}
			one, two := l, l
			one.b, two.a = m, m
			if sa > 0 {
				out = append(out, one.moved(hanging), two.moved(footwall))
			} else {
				out = append(out, one.moved(footwall), two.moved(hanging))
			}
		}
	}
	return out
}

func (l segment) moved(by place) segment {
	l.a, l.b = place{l.a.x + by.x, l.a.z + by.z}, place{l.b.x + by.x, l.b.z + by.z}
	return l
}

func (q polygon) moved(by place) polygon {
	for i := range q.corners {
		q.corners[i] = place{q.corners[i].x + by.x, q.corners[i].z + by.z}
	}
	return q
}

// half is the part of a convex polygon where side is not negative.
func (q polygon) half(side func(place) float64) polygon {
	out := polygon{index: q.index}
	for i, b := range q.corners {
		a := q.corners[(i+len(q.corners)-1)%len(q.corners)]
		sa, sb := side(a), side(b)
		if (sa > 0) != (sb > 0) && sa != sb {
			u := sa / (sa - sb)
			out.corners = append(out.corners, place{a.x + u*(b.x-a.x), a.z + u*(b.z-a.z)})
		}
		if sb > 0 {
			out.corners = append(out.corners, b)
		}
	}
	return out
}

// columns are the corners' x and z.
func (q polygon) columns() (x, z []float64) {
	for _, c := range q.corners {
		x, z = append(x, c.x), append(z, c.z)
	}
	return x, z
}

// span is the polygon's depth range at x, cut to the depth shown; ok is false where it
// has none there.
func (q polygon) span(x, bottom float64) (top, base float64, ok bool) {
	top, base = math.Inf(1), math.Inf(-1)
	for i, b := range q.corners {
		a := q.corners[(i+len(q.corners)-1)%len(q.corners)]
		if a.x == b.x || (x-a.x)*(x-b.x) > 0 {
			continue
		}
		z := a.z + (x-a.x)/(b.x-a.x)*(b.z-a.z)
		top, base = math.Min(top, z), math.Max(base, z)
	}
	top, base = math.Max(top, 0), math.Min(base, bottom)
	return top, base, base > top
}
