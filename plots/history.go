package plots

import (
	"fmt"
	"image/color"
	"math"
	"strings"

	"gonum.org/v1/plot/vg"

	"keelfall/solver/heat"
)

// History draws a thermal history: geotherms at a few times (a), the depth of the
// layers against time with the events in words (b), and below them the temperature of
// the root's base and the surface heat flow against time (c), and elevation and force (d). width is ColumnWidth
// where 0.
func History(t *Thermal, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if err := t.check(); err != nil {
		return Figure{}, err
	}
	f := &historyFigure{Thermal: t, events: heat.InOrder(t.Events)}
	f.depth = f.depthScale()
	f.time = linear(0, f.end())
	if n := len(f.events); n > mostRows {
		f.more = n - mostRows + 1
		f.events = f.events[:mostRows-1]
	}
	height := f.stripHeight() + 146*vg.Millimeter
	if t.HasTimeZero {
		height += xAxisHeight(1)
	}
	if t.stands() {
		height += elevationHeight
	}
	return Figure{Name: "history", Caption: f.caption(), Width: width, Height: height, draw: f.draw}, nil
}

const (
	mostRows            = 12  // of events in words
	rowHeight           = 9.5 // points
	panelGap  vg.Length = 6
)

type historyFigure struct {
	*Thermal
	depth, time scale
	events      []heat.Event // those that have a row
	more        int          // those that have none
}

// depthScale runs to the deepest column, or some way below the root of a column that
// goes on more than three times as deep.
func (f *historyFigure) depthScale() scale {
	var deep, root float64
	for _, s := range f.History.Snapshots {
		deep = math.Max(deep, s.Column.Depth()/km)
		if z, ok := rootBase(s.Column); ok {
			root = math.Max(root, z/km)
		}
	}
	if root > 0 && deep > 3*root {
		step := niceStep(root / 12)
		deep = math.Ceil(1.6*root/step) * step
	}
	return scale{lo: 0, hi: deep, down: true}
}

func (f *historyFigure) stripHeight() vg.Length {
	n := len(f.events)
	if f.more > 0 {
		n++
	}
	if n == 0 {
		return 0
	}
	return vg.Length(n)*rowHeight + 3 + panelGap
}

func (f *historyFigure) hasRoot() bool {
	for _, v := range f.History.RootBase {
		if v > 0 {
			return true
		}
	}
	return false
}

func (f *historyFigure) caption() string {
	var times []string
	for _, s := range f.shown() {
		w, _ := f.when(s.Time)
		times = append(times, plain(w))
	}
	s := "The column's thermal history: temperature against depth at " + strings.Join(times, ", ")
	if f.hasRoot() {
		s += ", dots at the root's base"
	}
	s += " (a); the layers' depths against time, the root tinted, with what happens (b); "
	if f.hasRoot() {
		s += "temperature of the root's base (solid) and surface heat flow (dashed) (c)."
	} else {
		s += "surface heat flow (c)."
	}
	if f.stands() {
		s = strings.TrimSuffix(s, ".") + "; elevation of the surface above sea level by local isostasy (solid) and the force that drives extension, or below 0 shortening (dashed) (d)."
	}
	if f.more > 0 {
		s += fmt.Sprintf(" %d later events have no line of their own.", f.more)
	}
	var deepest float64
	for _, sn := range f.History.Snapshots {
		deepest = math.Max(deepest, sn.Column.Depth()/km)
	}
	if deepest > f.depth.hi*(1+1e-9) {
		s += fmt.Sprintf(" The column goes on to %s km below the depth shown.", plain(number(deepest, 3)))
	}
	return s
}

// draw lays out geotherms, layers, events, and the curves against time.
func (f *historyFigure) draw(s *sheet) {
	const head = 13 // room above a panel for its letter
	ages := vg.Length(0)
	if f.HasTimeZero {
		ages = xAxisHeight(1)
	}
	axis := xAxisHeight(1) + 2
	last := vg.Length(0)
	if f.stands() {
		last = elevationHeight
	}
	room := s.Max.Y - s.Min.Y - 2*axis - ages - f.stripHeight() - 2*head - panelGap - last
	slot := func(top, height vg.Length) *panel {
		return &panel{sheet: s, box: vg.Rectangle{Min: vg.Point{Y: top - height}, Max: vg.Point{Y: top}}}
	}
	a := slot(s.Max.Y-head, 0.42*room)
	b := slot(a.box.Min.Y-axis-head-ages, 0.29*room)
	strip := slot(b.box.Min.Y-panelGap, f.stripHeight()-panelGap)
	c := slot(b.box.Min.Y-panelGap-f.stripHeight(), 0.29*room)
	a.y, b.y = f.depth, f.depth
	d := slot(c.box.Min.Y-panelGap, last-panelGap)
	b.x, strip.x, c.x, d.x = f.time, f.time, f.time, f.time

	depthsA, depthsB := linearTicks(a.y, a.yFits), linearTicks(b.y, b.yFits)
	left, right, finish := f.curves(c)
	margin := max(yAxisWidth(depthsA), yAxisWidth(depthsB), yAxisWidth(left)) + 2
	far := vg.Length(8)
	if right != nil {
		far = yAxisWidth(right) + 2
	}
	finishD := func() {}
	if f.stands() {
		left, right, finishD = f.elevations(d)
		margin, far = max(margin, yAxisWidth(left)+2), max(far, yAxisWidth(right)+2)
	}
	for _, p := range []*panel{a, b, strip, c, d} {
		p.box.Min.X, p.box.Max.X, p.overhang = s.Min.X+margin, s.Max.X-far, far-1
	}
	a.letter("(a)")
	f.geotherms(a)
	a.frame()
	a.vertical("Depth (km)", depthsA, false)

	times := linearTicks(b.x, b.xFits)
	s.text(vg.Point{X: b.box.Min.X, Y: b.box.Max.Y + ages + 3.5}, "(b)", textStyle{size: letterSize})
	f.layers(b)
	b.frame()
	b.vertical("Depth (km)", depthsB, false)
	b.horizontal("", unlabelled(times), false)
	if f.HasTimeZero {
		b.horizontal("Age (Ma)", ageTicks(b, f.TimeZero/myr), true)
	}
	if f.stripHeight() > 0 {
		f.strip(strip)
	}
	s.text(vg.Point{X: s.Min.X + 1, Y: c.box.Max.Y}, "(c)", textStyle{size: letterSize, y: yTop})
	f.moments(c)
	finish()
	c.frame()
	lowest := c
	if f.stands() {
		c.horizontal("", unlabelled(times), false)
		s.text(vg.Point{X: s.Min.X + 1, Y: d.box.Max.Y}, "(d)", textStyle{size: letterSize, y: yTop})
		f.moments(d)
		finishD()
		d.frame()
		lowest = d
	}
	lowest.horizontal("Time (Myr)", times, false)
}

// moments draws a line where an event begins or ends.
func (f *historyFigure) moments(p *panel) {
	for i := range f.events {
		for _, t := range append(moments(&f.events[i]), f.events[i].To) {
			if x := t / myr; x > 0 && p.x.has(x) {
				p.segment(vg.Point{X: p.atX(x), Y: p.box.Min.Y}, vg.Point{X: p.atX(x), Y: p.box.Max.Y}, stroke(lineGrey, hair, solid))
			}
		}
	}
}

// ageTicks are round ages in Ma at their times in Myr.
func ageTicks(p *panel, zero float64) []tick {
	place := func(ts []tick) []tick {
		out := make([]tick, len(ts))
		for i, t := range ts {
			out[len(ts)-1-i] = tick{zero - t.at, t.label}
		}
		return out
	}
	return place(linearTicks(linear(zero-p.x.hi, zero-p.x.lo), func(ts []tick) bool { return p.xFits(place(ts)) }))
}

// ageing is the colour of the i-th of n curves that follow in time, later ones darker.
func ageing(i, n int) color.Color {
	u := float64(i) / math.Max(float64(n-1), 1)
	if u < 0.5 {
		return tint(blue, 0.6+0.8*u)
	}
	return shade(blue, 1-1.6*(u-0.5))
}
