package plots

import (
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

const yTop = text.YTop

// geotherms draws temperature against depth at the times shown, each labelled where it
// keeps farthest from the others.
func (f *historyFigure) geotherms(p *panel) {
	shown := f.shown()
	ts, zs := make([][]float64, len(shown)), make([][]float64, len(shown))
	hi := 0.0
	lo := math.Inf(1)
	for i, s := range shown {
		ts[i], zs[i], _ = geotherm(s.Profile)
		for j, z := range zs[i] {
			if z <= f.depth.hi {
				lo, hi = math.Min(lo, ts[i][j]), math.Max(hi, ts[i][j])
			}
		}
	}
	p.x = scale{lo: math.Min(0, lo), hi: hi + 0.06*(hi-math.Min(0, lo))}
	if !(p.x.hi > p.x.lo) {
		p.x = linear(lo, hi)
	}
	p.horizontal("Temperature (°C)", linearTicks(p.x, p.xFits), false)
	for i, s := range shown {
		word, _ := f.when(s.Time)
		width := medium
		if i == 0 || i == len(shown)-1 {
			width = 1.1
		}
		var dashes []vg.Length
		if i == 0 {
			dashes = dashed
		}
		p.line("geotherm at "+word, ts[i], zs[i], stroke(ageing(i, len(shown)), width, dashes))
	}
	for i, s := range shown {
		if z, ok := rootBase(s.Column); ok {
			t, d, _ := at(s.Profile, z)
			if p.y.has(d) {
				p.dot(p.pt(t, d), 1.5, ageing(i, len(shown)))
			}
		}
	}
	for i, s := range shown {
		whole, short := f.when(s.Time)
		p.place(ageing(i, len(shown)), p.box, f.apart(p, i, ts, zs), whole, short)
	}
}

// apart lists places beside curve i, those first where it is farthest from the others.
func (f *historyFigure) apart(p *panel, i int, ts, zs [][]float64) []spot {
	type place struct {
		at  vg.Point
		far float64
	}
	var all []place
	const steps = 40
	for k := 2; k < steps-1; k++ {
		z := f.depth.hi * float64(k) / steps
		if z > zs[i][len(zs[i])-1] {
			break
		}
		t := interpolate(zs[i], ts[i], z)
		far := math.Inf(1)
		for j := range ts {
			if j != i {
				far = math.Min(far, math.Abs(t-interpolate(zs[j], ts[j], z)))
			}
		}
		all = append(all, place{p.pt(t, z), far})
	}
	slices.SortStableFunc(all, func(a, b place) int {
		switch {
		case a.far > b.far:
			return -1
		case a.far < b.far:
			return 1
		}
		return 0
	})
	var out []spot
	for _, d := range []vg.Length{3, 7, 12} {
		for _, a := range all {
			if a.far < 0.3*all[0].far {
				break // the curve lies close to another there
			}
			out = append(out, spot{a.at.Add(vg.Point{X: d}), text.XLeft, text.YCenter}, spot{a.at.Sub(vg.Point{X: d}), text.XRight, text.YCenter})
		}
	}
	return out
}

// layers draws the contacts' depth against time, the root tinted.
func (f *historyFigure) layers(p *panel) {
	snaps := f.History.Snapshots
	type edge struct{ t, top, base float64 }
	edges := map[string][]edge{}
	root := map[string]bool{}
	var names []string
	for _, s := range snaps {
		z := 0.0
		for i := range s.Column.Layers {
			l := &s.Column.Layers[i]
			if _, seen := edges[l.Name]; !seen {
				names = append(names, l.Name)
			}
			edges[l.Name] = append(edges[l.Name], edge{s.Time / myr, z / km, (z + l.Thickness) / km})
			root[l.Name] = l.Root
			z += l.Thickness
		}
	}
	for _, n := range names {
		if !root[n] {
			continue
		}
		e := edges[n]
		var x, y []float64
		for _, v := range e {
			x, y = append(x, v.t), append(y, v.top)
		}
		for i := len(e) - 1; i >= 0; i-- {
			x, y = append(x, e[i].t), append(y, e[i].base)
		}
		p.area(x, y, rootTint)
	}
	f.moments(p)
	for _, n := range names {
		var t, z []float64
		for _, v := range edges[n] {
			t, z = append(t, v.t), append(z, v.base)
		}
		p.line("base of "+n, t, z, stroke(darkGrey, thin, solid))
	}
	for _, n := range names {
		var spots []spot
		e := edges[n]
		for _, u := range []float64{0.5, 0.3, 0.7, 0.15, 0.85, 0, 1} {
			v := e[int(u*float64(len(e)-1))]
			if mid := (v.top + math.Min(v.base, f.depth.hi)) / 2; mid < f.depth.hi {
				at := p.pt(v.t, mid)
				if p.atY(v.top)-p.atY(math.Min(v.base, f.depth.hi)) < typeSize {
					continue // too thin for its name
				}
				spots = append(spots, spot{at, text.XCenter, text.YCenter}, spot{vg.Point{X: p.box.Min.X + 4, Y: at.Y}, text.XLeft, text.YCenter})
			}
		}
		p.placeClear(black, spots, shorten(literal(n), typeSize, 0.6*(p.box.Max.X-p.box.Min.X)))
	}
}

// placeClear writes the first of the wordings that has a spot clear of all texts and
// lines, or nothing and reports false.
func (p *panel) placeClear(c color.Color, spots []spot, wordings ...string) bool {
	for _, txt := range wordings {
		if sp, n := p.best(txt, p.box, spots); n == 0 {
			p.text(sp.at, txt, textStyle{color: c, x: sp.x, y: sp.y})
			return true
		}
	}
	return false
}

// strip draws every event as a bar or a tick on the time axis, with its words.
func (f *historyFigure) strip(p *panel) {
	p.y = linear(0, 1)
	y := p.box.Max.Y - 1.5 - rowHeight/2
	for i := range f.events {
		e := &f.events[i]
		words := eventWords(e)
		from, to := p.atX(e.From/myr), p.atX(math.Min(e.To/myr, p.x.hi))
		for _, t := range moments(e) {
			if x := p.atX(t / myr); e.To <= e.From && x <= p.box.Max.X+0.1 {
				p.rect(vg.Rectangle{Min: vg.Point{X: x - 0.7, Y: y - 3.2}, Max: vg.Point{X: x + 0.7, Y: y + 3.2}}, darkGrey)
				to = max(to, x)
			}
		}
		if e.To > e.From {
			p.rect(vg.Rectangle{Min: vg.Point{X: from, Y: y - 3.6}, Max: vg.Point{X: to, Y: y + 3.6}}, eventTint)
		}
		f.row(p, words, from, to, y, e.To > e.From)
		y -= rowHeight
	}
	if f.more > 0 {
		p.text(vg.Point{X: p.box.Min.X + 3, Y: y}, "and "+number(float64(f.more), 4)+" more", textStyle{y: text.YCenter})
	}
}

// row writes an event's words in its bar, behind it or before it, wherever they fit.
func (f *historyFigure) row(p *panel, words string, from, to, y vg.Length, inside bool) {
	const gap = 3
	w := width(words, typeSize)
	after, before := p.box.Max.X-to-gap, from-gap-p.box.Min.X
	right, left := textStyle{x: text.XLeft, y: text.YCenter}, textStyle{x: text.XRight, y: text.YCenter}
	switch {
	case inside && w <= to-from-2*gap:
		p.text(vg.Point{X: from + gap, Y: y}, words, right)
	case w <= after:
		p.text(vg.Point{X: to + gap, Y: y}, words, right)
	case w <= before:
		p.text(vg.Point{X: from - gap, Y: y}, words, left)
	case inside && to-from >= max(after, before):
		p.text(vg.Point{X: from + gap, Y: y}, shorten(words, typeSize, to-from-2*gap), right)
	case after >= before:
		p.text(vg.Point{X: to + gap, Y: y}, shorten(words, typeSize, after), right)
	default:
		p.text(vg.Point{X: from - gap, Y: y}, shorten(words, typeSize, before), left)
	}
}

// curves sets the scales of the temperature of the root's base and of the surface heat
// flow and returns their ticks; finish draws them once the panel has its place.
func (f *historyFigure) curves(p *panel) (left, right []tick, finish func()) {
	h := f.History
	time, flow := divided(h.Time, myr), divided(h.SurfaceFlow, 1e-3)
	base := make([]float64, len(h.RootBase))
	for i, T := range h.RootBase {
		if base[i] = T - zeroCelsius; T <= 0 {
			base[i] = math.NaN()
		}
	}
	lo, hi, _ := bounds(flow)
	flows := padded(lo, hi, 0.12)
	if d := 0.02 * math.Max(math.Abs(hi), 1); hi-lo < d { // no wiggle of what is constant
		flows = padded((lo+hi)/2-d, (lo+hi)/2+d, 0.12)
	}
	q := *p
	q.y = flows
	if !f.hasRoot() {
		p.y = flows
		left = linearTicks(p.y, p.yFits)
		return left, nil, func() {
			p.line("surface heat flow", time, flow, stroke(blue, thick, dashed))
			p.vertical("Heat flow (mW/m²)", left, false)
		}
	}
	lo, hi, _ = bounds(base)
	p.y = padded(lo, hi, 0.12)
	if hi-lo < 10 {
		p.y = padded((lo+hi)/2-5, (lo+hi)/2+5, 0.12)
	}
	left, right = linearTicks(p.y, p.yFits), linearTicks(q.y, q.yFits)
	return left, right, func() {
		q.box, q.x = p.box, p.x
		p.line("temperature of the root's base", time, base, stroke(black, thick, solid))
		first := len(p.lines)
		q.line("surface heat flow", time, flow, stroke(blue, medium, dashed))
		p.vertical("Temperature (°C)", left, false)
		q.vertical("Heat flow (mW/m²)", right, true)
		if first > 0 {
			p.place(black, p.box, along(p.lines[first-1], 3), "root's base")
		}
		if len(p.lines) > first {
			p.place(blue, p.box, along(p.lines[first], 3), "surface heat flow", "heat flow")
		}
	}
}
