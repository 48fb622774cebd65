package plots

import (
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// dripLabels marks the first drip, its range over undulations, and the window.
func (f spectrumFigure) dripLabels(p *panel) {
	d := f.drip
	l, t := d.Wavelength/km, d.Time/myr
	if f.low == nil && f.hasBar() && p.x.has(l) {
		f.bar(p, l)
	}
	if p.x.has(l) && t > 0 && p.y.has(t) {
		at := p.pt(l, t)
		p.dot(at, 1.7, vermillion)
		p.place(black, p.box, append([]spot{{at.Add(vg.Point{X: 4, Y: -4}), text.XLeft, text.YTop},
			{at.Add(vg.Point{X: -4, Y: -4}), text.XRight, text.YTop}}, around(at, 5)...),
			number(l, 3)+" km, "+number(t, 3)+" Myr", number(l, 3)+" km,\n"+number(t, 3)+" Myr")
	}
	if f.low != nil {
		f.bandLabels(p)
	}
	if f.window > 0 && p.y.has(f.window) {
		y := p.atY(f.window)
		var spots []spot
		for _, d := range []vg.Length{2.5, -2.5} {
			align := text.YBottom
			if d < 0 {
				align = text.YTop
			}
			spots = append(spots, spot{vg.Point{X: p.box.Min.X + 3, Y: y + d}, text.XLeft, align},
				spot{vg.Point{X: p.box.Max.X - 3, Y: y + d}, text.XRight, align})
		}
		p.place(vermillion, p.box, spots, "window, "+number(f.window, 3)+" Myr", "window")
	}
}

// bar draws the first drip's range over undulations at its wavelength l in km.
func (f spectrumFigure) bar(p *panel, l float64) {
	d := f.drip
	x := p.atX(l)
	low, top := p.atY(d.TimeLow/myr), p.box.Max.Y-1
	open := math.IsInf(d.TimeHigh, 1) || !p.y.has(d.TimeHigh/myr)
	if !open {
		top = p.atY(d.TimeHigh / myr)
	}
	st := stroke(blue, medium, solid)
	if open {
		p.arrow(vg.Point{X: x, Y: low}, vg.Point{X: x, Y: top}, st)
	} else {
		p.segment(vg.Point{X: x, Y: low}, vg.Point{X: x, Y: top}, st)
		p.segment(vg.Point{X: x - 2.5, Y: top}, vg.Point{X: x + 2.5, Y: top}, st)
	}
	p.segment(vg.Point{X: x - 2.5, Y: low}, vg.Point{X: x + 2.5, Y: low}, st)
	p.lines = append(p.lines, []vg.Point{{X: x, Y: low}, {X: x, Y: top}})
	p.place(blue, p.box, sides(vg.Point{X: x, Y: low}, 4.5), "undulation × 3", "× 3")
	p.place(blue, p.box, sides(vg.Point{X: x, Y: top}, 4.5), "undulation ÷ 3", "÷ 3")
}

// bandLabels names the edges of the band, outside it.
func (f spectrumFigure) bandLabels(p *panel) {
	for _, edge := range []struct {
		times    []float64
		side     vg.Length // up or down
		align    text.YAlignment
		wordings []string
	}{{f.low, -1, text.YTop, []string{"undulation × 3", "× 3"}}, {f.high, 1, text.YBottom, []string{"undulation ÷ 3", "÷ 3"}}} {
		half := width(edge.wordings[0], typeSize)/2 + 2
		var spots []spot
		n := len(edge.times)
		for _, d := range []vg.Length{3, 6, 10} {
			for i := range 9 { // from the middle outwards
				k := n/2 + (i+1)/2*(1-2*(i%2))*n/10
				if k < 0 || k >= n || !p.y.has(edge.times[k]) {
					continue
				}
				at := p.pt(f.dripWavelength[k], edge.times[k])
				for j, t := range edge.times { // the edge over the label's width
					if x := p.atX(f.dripWavelength[j]); x > at.X-half && x < at.X+half && t > 0 && !math.IsInf(t, 1) {
						at.Y = edge.side * max(edge.side*at.Y, edge.side*p.atY(t))
					}
				}
				spots = append(spots, spot{at.Add(vg.Point{Y: edge.side * d}), text.XCenter, edge.align})
			}
		}
		p.place(blue, p.box, spots, edge.wordings...)
	}
}

// sides are the places right and left of a point.
func sides(at vg.Point, d vg.Length) []spot {
	return []spot{
		{at.Add(vg.Point{X: d}), text.XLeft, text.YCenter},
		{at.Sub(vg.Point{X: d}), text.XRight, text.YCenter},
		{at.Sub(vg.Point{Y: d}), text.XCenter, text.YTop},
		{at.Add(vg.Point{Y: d}), text.XCenter, text.YBottom},
	}
}
