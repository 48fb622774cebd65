package plots

import (
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// hasBar reports whether the first drip's time is known for other undulations.
func (f spectrumFigure) hasBar() bool {
	d := f.drip
	return d != nil && d.TimeLow > 0 && d.TimeHigh > d.TimeLow && !math.IsInf(d.TimeLow, 1)
}

// dripTimes draws drip time on a log axis; wavelengths whose drip time is not on it are
// marked at the top.
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
	room := 1.25
	if f.low != nil {
		room = 1.8 // for the name of the band's lower edge
	}
	return logarithmic(lo/room, hi*1.25)
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

// Why a wavelength has no drip time on the axis.
const (
	onAxis  = ""
	later   = "later"            // its drip time lies above the axis
	tooSlow = "later than shown" // no drip time was found, though it grows
	noDrip  = "no drip"          // nor does it grow
	unfound = "no drip found"    // nor is it known whether it grows
)

// missing says why wavelength i has no drip time on the axis.
func (f spectrumFigure) missing(p *panel, i int) string {
	t, l := f.dripTime[i], f.dripWavelength[i]
	n := len(f.wavelength)
	switch {
	case t > p.y.hi && !math.IsInf(t, 1):
		return later
	case !math.IsInf(t, 1):
		return onAxis
	case n == 0 || l < f.wavelength[0]*(1-1e-9) || l > f.wavelength[n-1]*(1+1e-9):
		return unfound
	case interpolate(f.wavelength, f.rate, l) > 0:
		return tooSlow
	}
	return noDrip
}

// never marks wavelengths without a drip time on the axis along the top of the panel,
// and says why: those that drip later in pale grey, the others in grey.
func (f spectrumFigure) never(p *panel) {
	named := map[string]bool{}
	for i := 0; i < len(f.dripTime); i++ {
		why := f.missing(p, i)
		if why == onAxis {
			continue
		}
		j := i
		for j+1 < len(f.dripTime) && f.missing(p, j+1) == why {
			j++
		}
		a, b := p.atX(f.dripWavelength[i]), p.atX(f.dripWavelength[j])
		bar := vg.Rectangle{Min: vg.Point{X: a, Y: p.box.Max.Y - 2.5}, Max: vg.Point{X: max(b, a+1), Y: p.box.Max.Y}}
		grey := midGrey
		if why == later || why == tooSlow {
			grey = lineGrey
		}
		p.rect(p.within(bar), grey)
		if !named[why] {
			at := vg.Point{X: (a + b) / 2, Y: bar.Min.Y - 2.5}
			spots := []spot{{at, text.XCenter, text.YTop},
				{vg.Point{X: a + 1.5, Y: at.Y}, text.XLeft, text.YTop}, {vg.Point{X: b - 1.5, Y: at.Y}, text.XRight, text.YTop}}
			if _, lines := p.best(why, p.box, spots); why == later && lines > 0 {
				i = j
				continue // the curve itself is seen to leave the panel
			}
			named[why] = p.place(darkGrey, p.box, spots, why, strings.Replace(why, " than", "\nthan", 1))
		}
		i = j
	}
}
