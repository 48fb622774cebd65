package plots

import (
	"math"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/excision"
)

// thickness draws the root's thickness.
func (f fatesFigure) thickness() part {
	var arcLines int
	return part{left: "Root thickness (km)",
		scale: func(p *panel) (left, right []tick) {
			_, hi, _ := bounds(f.column, f.arc)
			if hi <= 0 {
				hi = 1
			}
			p.y = scale{lo: 0, hi: 1.14 * hi}
			return linearTicks(p.y, p.yFits), nil
		},
		curves: func(p *panel) {
			if f.arc != nil {
				p.line("root thickness, arc mean", f.time, f.arc, stroke(blue, medium, dashed))
			}
			arcLines = len(p.lines)
			p.line("root thickness, column", f.time, f.column, stroke(black, thick, solid))
		},
		labels: func(p *panel) {
			f.excisionLabel(p)
			f.windowLabel(p)
			f.lineLabels(p, arcLines)
			switch {
			case f.drips():
				p.place(blue, p.box, atFoot(p, f.drip.Time/myr), "drips")
			case f.silence != "":
				p.place(black, p.box, corner(p, true), f.silence, strings.Replace(f.silence, ": ", ":\n", 1), strings.NewReplacer(": ", ":\n", " too long", "\ntoo long").Replace(f.silence))
			}
		}}
}

// lineLabels names the two thicknesses beside their lines.
func (f fatesFigure) lineLabels(p *panel, arcLines int) {
	if f.arc == nil || arcLines == 0 || arcLines >= len(p.lines) {
		return
	}
	p.place(blue, p.box, beside(p.lines[arcLines-1], true), "arc mean")
	p.place(black, p.box, beside(p.lines[arcLines], false), "column crossed by the zones", "column crossed\nby the zones", "column")
}

// beside are places above or below a line, from its middle outwards.
func beside(line []vg.Point, above bool) []spot {
	var out []spot
	for _, d := range []vg.Length{3, 6, 10} {
		for _, i := range []int{8, 7, 9, 6, 10, 5, 11, 4, 12, 3, 13, 2, 14} {
			at := line[min(len(line)-1, i*len(line)/16)]
			up, down := spot{at.Add(vg.Point{Y: d}), text.XCenter, text.YBottom}, spot{at.Sub(vg.Point{Y: d}), text.XCenter, text.YTop}
			if above {
				out = append(out, up)
			} else {
				out = append(out, down)
			}
		}
	}
	if len(line) > 1 { // then anywhere beside it
		out = append(out, along(line, 3)...)
	}
	return out
}

// excisionLabel marks when the zones have taken the asked share.
func (f fatesFigure) excisionLabel(p *panel) {
	e := f.excision
	t := excisionTime(e) / myr
	share := number(100*e.Share, 2) + " % cut out"
	switch {
	case e.Share <= 0 || math.IsNaN(e.Share):
	case math.IsInf(t, 1):
		p.place(black, p.box, corner(p, true), share+": not within the zones' time", share+":\nnot within the zones' time")
	case p.x.has(t) && t > f.time[len(f.time)-1]*(1+1e-9):
		p.vline(t, stroke(darkGrey, thin, dotted))
		p.place(black, p.box, []spot{{vg.Point{X: p.atX(t) - 3, Y: p.box.Min.Y + 5}, text.XRight, text.YBottom}, {vg.Point{X: p.atX(t) + 3, Y: p.box.Min.Y + 5}, text.XLeft, text.YBottom}},
			share+" at "+number(t, 3)+" Myr", share+"\nat "+number(t, 3)+" Myr")
	case !p.x.has(t) || t > f.time[len(f.time)-1]*(1+1e-9):
		p.place(black, p.box, corner(p, true), share+" at "+number(t, 3)+" Myr", share+"\nat "+number(t, 3)+" Myr")
	default:
		at := p.pt(t, interpolate(f.time, f.column, t))
		p.segment(vg.Point{X: at.X, Y: p.box.Min.Y}, at, stroke(darkGrey, thin, dotted))
		p.lines = append(p.lines, []vg.Point{{X: at.X, Y: p.box.Min.Y}, at})
		p.dot(at, 2, vermillion)
		p.place(black, p.box, append(sides(vg.Point{X: at.X, Y: (p.box.Min.Y + at.Y) / 2}, 3), around(at, 5)...),
			share+" at "+number(t, 3)+" Myr", share+"\nat "+number(t, 3)+" Myr")
	}
}

// excisionTime is when the zones have taken the asked share, at their rates beyond the
// window too.
func excisionTime(e *excision.Result) float64 {
	if math.IsInf(e.Time, 1) && e.LocalBeyond > 0 {
		return e.LocalBeyond
	}
	return e.Time
}

// atFoot are places at the foot of a vertical line at x, close to it before far from it.
func atFoot(p *panel, x float64) []spot {
	var out []spot
	for _, up := range []vg.Length{4, 14, 24, 34} {
		for _, d := range []vg.Length{2, 4, 7} {
			at := vg.Point{X: p.atX(x), Y: p.box.Min.Y + up}
			out = append(out, spot{at.Add(vg.Point{X: d}), text.XLeft, text.YBottom}, spot{at.Sub(vg.Point{X: d}), text.XRight, text.YBottom})
		}
	}
	return out
}

// corner is the place for what lies beyond the time axis.
func corner(p *panel, bottom bool) []spot {
	out := []spot{{vg.Point{X: p.box.Max.X - 4, Y: p.box.Min.Y + 5}, text.XRight, text.YBottom},
		{vg.Point{X: p.box.Min.X + 4, Y: p.box.Min.Y + 5}, text.XLeft, text.YBottom}}
	if !bottom {
		out = []spot{{vg.Point{X: p.box.Min.X + 4, Y: p.box.Max.Y - 4}, text.XLeft, text.YTop}}
	}
	return append(out, nearby(out[0].at, p.box, 500)...)
}

// windowLabel names the window's end.
func (f fatesFigure) windowLabel(p *panel) {
	if f.window <= 0 || !p.x.has(f.window) {
		return
	}
	x := p.atX(f.window)
	var spots []spot
	for _, y := range []vg.Length{p.box.Max.Y - 3, p.box.Max.Y - 12, p.box.Min.Y + 12} {
		spots = append(spots, spot{vg.Point{X: x - 3, Y: y}, text.XRight, text.YTop}, spot{vg.Point{X: x + 3, Y: y}, text.XLeft, text.YTop})
	}
	p.place(vermillion, p.box, spots, "window ends", "window\nends", "window")
}

// amplitudes draws the undulation's amplitude on a log axis, with the drip times of
// other undulations as a band.
func (f fatesFigure) amplitudes() part {
	lo, hi := math.Inf(1), f.tip
	for _, a := range f.amplitude {
		hi = math.Max(hi, a)
		if a > 0 {
			lo = math.Min(lo, a)
		}
	}
	return part{left: "Undulation amplitude (km)", labels: f.dripLabels,
		scale: func(p *panel) (left, right []tick) {
			p.y = logarithmic(math.Max(lo, hi*1e-4)/1.3, hi*1.9)
			return logTicks(p.y, true, p.yFits), nil
		},
		curves: func(p *panel) {
			if f.hasBand() {
				p.bandX(f.drip.TimeLow/myr, math.Min(f.drip.TimeHigh/myr, p.x.hi), paleGrey)
			}
			if f.tip > 0 {
				p.hline(f.tip, stroke(darkGrey, thin, dotted))
			}
			p.line("amplitude", f.dripTime, f.amplitude, stroke(black, thick, solid))
		}}
}

// dripLabels marks the drip, what counts as one, and the band's ends.
func (f fatesFigure) dripLabels(p *panel) {
	t := f.drip.Time / myr
	if f.drips() {
		last := f.amplitude[len(f.amplitude)-1]
		if t <= f.dripTime[len(f.dripTime)-1]*(1+1e-6) {
			last = interpolate(f.dripTime, f.amplitude, t)
		}
		at := p.pt(t, last)
		p.dot(at, 2, vermillion)
		p.place(blue, p.box, append([]spot{{at.Add(vg.Point{X: 4, Y: -5}), text.XLeft, text.YTop}}, around(at, 6)...),
			"drips at "+number(t, 3)+" Myr", "drips at\n"+number(t, 3)+" Myr")
	} else {
		words := []string{"no drip within the window", "no drip within\nthe window"}
		switch at := "would drip at " + number(t, 3) + " Myr"; {
		case !p.x.has(t) && !math.IsInf(t, 1):
			words = []string{at + ", far beyond the time shown", at + ",\nbeyond the time shown", at}
			if t < 10*p.x.hi {
				words[0] = at + ", beyond the time shown"
			}
		case !math.IsInf(t, 1):
			words = []string{at, "would drip at\n" + number(t, 3) + " Myr"}
		}
		middle := vg.Point{X: (p.box.Min.X + p.box.Max.X) / 2, Y: (p.box.Min.Y + p.box.Max.Y) / 2}
		p.place(black, p.box, append([]spot{{middle, text.XCenter, text.YCenter}}, corner(p, true)...), words...)
	}
	if f.tip > 0 && p.y.has(f.tip) {
		var spots []spot
		for i := range 10 {
			at := vg.Point{X: p.box.Min.X + 3 + vg.Length(i)*(p.box.Max.X-p.box.Min.X)/10, Y: p.atY(f.tip)}
			spots = append(spots, spot{at.Add(vg.Point{Y: 3}), text.XLeft, text.YBottom}, spot{at.Sub(vg.Point{Y: 3}), text.XLeft, text.YTop})
		}
		p.place(darkGrey, p.box, spots, "drip: tip "+number(f.tip, 3)+" km down")
	}
	if f.hasBand() {
		for _, b := range []struct {
			t    float64
			word string
		}{{f.drip.TimeLow / myr, "undulation × 3"}, {f.drip.TimeHigh / myr, "undulation ÷ 3"}} {
			if p.x.has(b.t) {
				p.place(darkGrey, p.box, atFoot(p, b.t), b.word, strings.Replace(b.word, " ", "\n", 1))
			}
		}
	}
	if f.excision == nil {
		f.windowLabel(p)
	}
}

// interpolate returns y at x in the piecewise linear table xs, ys.
func interpolate(xs, ys []float64, x float64) float64 {
	for i := 1; i < len(xs); i++ {
		if x <= xs[i] && xs[i] > xs[i-1] {
			return ys[i-1] + (ys[i]-ys[i-1])*math.Max(0, x-xs[i-1])/(xs[i]-xs[i-1])
		}
	}
	return ys[len(ys)-1]
}
