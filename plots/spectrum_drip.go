package plots

import (
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// hasBar reports whether the first drip's time is known for other undulations.
func (f spectrumFigure) hasBar() bool {
	d := f.drip
	return d != nil && d.TimeLow > 0 && d.TimeHigh > d.TimeLow && !math.IsInf(d.TimeLow, 1)
}

// dripTimes draws drip time on a log axis; wavelengths that never drip are marked at
// the top.
func (f spectrumFigure) dripTimes() part {
	return part{left: "Drip time (Myr)", labels: f.dripLabels,
		scale: func(p *panel) (left, right []tick) {
			p.y = f.dripScale()
			return logTicks(p.y, true, p.yFits), nil
		},
		curves: func(p *panel) {
			f.band(p)
			f.spacings(p)
			if f.window > 0 {
				p.hline(f.window, stroke(vermillion, medium, dashed))
			}
			p.line("drip time", f.dripWavelength, f.dripTime, stroke(black, 1.1, solid))
			f.never(p)
		}}
}

// dripScale takes in the curve up to far beyond the window, the window, and the range
// over undulations.
func (f spectrumFigure) dripScale() scale {
	lo, hi, _ := bounds(f.dripTime, f.low)
	hi = math.Min(hi, 20*math.Max(lo, f.window))
	if f.hasBar() {
		lo = math.Min(lo, f.drip.TimeLow/myr)
		if !math.IsInf(f.drip.TimeHigh, 1) {
			hi = math.Max(hi, f.drip.TimeHigh/myr)
		}
	}
	if f.window > 0 {
		lo, hi = math.Min(lo, f.window), math.Max(hi, f.window)
	}
	return logarithmic(lo/1.25, hi*1.25)
}

// band fills the drip times of other undulations.
func (f spectrumFigure) band(p *panel) {
	shown := func(i int) bool { return f.low[i] > 0 && !math.IsInf(f.low[i], 1) }
	for i := 0; i < len(f.low); i++ {
		if !shown(i) {
			continue
		}
		j := i
		for j+1 < len(f.low) && shown(j+1) {
			j++
		}
		x, y := slices.Clone(f.dripWavelength[i:j+1]), slices.Clone(f.low[i:j+1])
		for k := j; k >= i; k-- {
			x, y = append(x, f.dripWavelength[k]), append(y, math.Min(f.high[k], 100*p.y.hi))
		}
		p.area(x, y, tint(blue, 0.3))
		i = j
	}
}

// spacings underlays the wavelengths whose drips would follow close upon the first.
func (f spectrumFigure) spacings(p *panel) {
	from, to := f.drip.SpacingFrom/km, f.drip.SpacingTo/km
	if !(from > 0 && to > from) {
		return
	}
	var pts []vg.Point
	for i, l := range f.dripWavelength {
		if l >= from*(1-1e-9) && l <= to*(1+1e-9) && !math.IsInf(f.dripTime[i], 1) && f.dripTime[i] > 0 {
			pts = append(pts, p.pt(l, f.dripTime[i]))
		}
	}
	p.StrokeLines(stroke(midGrey, 4.5, solid), p.clip().ClipLinesXY(pts)...)
}

// never marks wavelengths without a drip along the top of the panel.
func (f spectrumFigure) never(p *panel) {
	named := false
	for i := 0; i < len(f.dripTime); i++ {
		if !math.IsInf(f.dripTime[i], 1) {
			continue
		}
		j := i
		for j+1 < len(f.dripTime) && math.IsInf(f.dripTime[j+1], 1) {
			j++
		}
		a, b := p.atX(f.dripWavelength[i]), p.atX(f.dripWavelength[j])
		bar := vg.Rectangle{Min: vg.Point{X: a, Y: p.box.Max.Y - 2.5}, Max: vg.Point{X: max(b, a+1), Y: p.box.Max.Y}}
		p.rect(p.within(bar), midGrey)
		if !named {
			at := vg.Point{X: (a + b) / 2, Y: bar.Min.Y - 2.5}
			named = p.place(darkGrey, p.box, []spot{{at, text.XCenter, text.YTop},
				{vg.Point{X: a + 1.5, Y: at.Y}, text.XLeft, text.YTop}, {vg.Point{X: b, Y: at.Y}, text.XRight, text.YTop}}, "no drip")
		}
		i = j
	}
}

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
	p.place(blue, p.box, sides(vg.Point{X: x, Y: top}, 4.5), "÷ 3")
}

// bandLabels names the edges of the band.
func (f spectrumFigure) bandLabels(p *panel) {
	for _, edge := range []struct {
		times    []float64
		below    bool
		wordings []string
	}{{f.low, true, []string{"undulation × 3", "× 3"}}, {f.high, false, []string{"÷ 3"}}} {
		var spots []spot
		n := len(edge.times)
		for _, d := range []vg.Length{3, 6, 10} {
			for i := range 9 { // from the middle outwards
				k := n/2 + (i+1)/2*(1-2*(i%2))*n/10
				if k < 0 || k >= n || !p.y.has(edge.times[k]) {
					continue
				}
				at := p.pt(f.dripWavelength[k], edge.times[k])
				if edge.below {
					spots = append(spots, spot{at.Sub(vg.Point{Y: d}), text.XCenter, text.YTop})
				} else {
					spots = append(spots, spot{at.Add(vg.Point{Y: d}), text.XCenter, text.YBottom})
				}
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
