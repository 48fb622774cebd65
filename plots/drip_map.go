package plots

import (
	"fmt"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// mapFigure is growth against wavelength and time.
type mapFigure struct {
	dripSetting
	x, y   scale
	all    []undulated
	levels []float64 // of the growth rate, 1/Myr, increasing; the last band is open
	shrink bool      // some of it shrinks
}

// dripMap draws the growth rate of the root's base against wavelength and time; nil where
// too little was followed.
func dripMap(res *race.Result, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	set, err := dripSettingOf(res)
	if err != nil {
		return nil, err
	}
	f := mapFigure{dripSetting: set}
	if f.all, err = undulations(res.Drip); err != nil || len(f.all) < 4 {
		return nil, err
	}
	followed := slices.DeleteFunc(slices.Clone(f.all), func(u undulated) bool { // given up long before the first drip
		return math.IsInf(u.drip, 1) && !math.IsInf(f.time, 1) && u.time[len(u.time)-1] < 0.9*math.Min(f.time, f.last())
	})
	if len(followed) >= 4 {
		f.all = followed
	}
	if !slices.IsSortedFunc(f.all, func(a, b undulated) int { return int(math.Copysign(1, a.first-b.first)) }) {
		return nil, fmt.Errorf("plots: wavelengths of the undulations do not increase")
	}
	f.x, f.y = logarithmic(f.all[0].first, f.all[len(f.all)-1].first), linear(0, f.last())
	if f.level(); len(f.levels) < 2 {
		return nil, nil // nothing grows
	}
	return &Figure{Name: "drip-map", Caption: f.caption(), Width: width, Height: 80 * vg.Millimeter, draw: f.draw}, nil
}

// level chooses the levels: even steps, or 1-2-5 where rates differ by more than a factor
// of 15.
func (f *mapFigure) level() {
	var rates []float64
	for _, u := range f.all {
		for i, q := range u.growth {
			if u.time[i] > f.y.hi {
				break
			}
			if q > 0 {
				rates = append(rates, q)
			} else if i > 0 {
				f.shrink = true
			}
		}
	}
	if len(rates) == 0 {
		return
	}
	slices.Sort(rates)
	lo, hi := rates[len(rates)/10], rates[len(rates)*97/100]
	if hi/lo > 15 {
		for v := hi; v > hi/3e3 && v > lo/2 && len(f.levels) < 9; {
			p := math.Pow(10, math.Floor(math.Log10(v)+1e-9))
			for _, m := range []float64{5, 2, 1} {
				if m*p <= v*(1+1e-9) {
					f.levels = append([]float64{m * p}, f.levels...)
					v = m * p * 0.99
					break
				}
			}
		}
		f.levels = append([]float64{0}, f.levels...)
		return
	}
	step := niceStep(hi / 8)
	for i := 0; float64(i)*step < hi && i < 10; i++ {
		f.levels = append(f.levels, float64(i)*step)
	}
}

// shadeOf is the colour of a band, darker for faster growth.
func (f *mapFigure) shadeOf(band int) color.NRGBA {
	if band < 0 {
		return lineGrey
	}
	x := (float64(band) + 0.4) / float64(len(f.levels))
	if x <= 0.75 {
		return tint(blue, 0.08+0.92*x/0.75)
	}
	return shade(blue, 1-0.65*(x-0.75)/0.25)
}

// band of a growth rate; −1 where it shrinks.
func (f *mapFigure) band(q float64) int {
	n := -1
	for n+1 < len(f.levels) && q > f.levels[n+1] {
		n++
	}
	return n
}

// rateAt interpolates the growth rate of a trace; ok is false beyond its ends.
func (u *undulated) rateAt(t float64) (float64, bool) {
	if n := len(u.time); t < u.time[0] || t > u.time[n-1] {
		return 0, false
	}
	i, _ := slices.BinarySearch(u.time, t)
	if i = max(i, 1); u.time[i] == t {
		return u.growth[i], true
	}
	a, b := u.time[i-1], u.time[i]
	return u.growth[i-1] + (u.growth[i]-u.growth[i-1])*(t-a)/(b-a), true
}

// at is the growth rate at a wavelength in km and a time in Myr; ok is false where it has
// dripped or was not followed.
func (f *mapFigure) at(i int, share, t float64) (q float64, ok bool) {
	a, b := &f.all[i], &f.all[min(i+1, len(f.all)-1)]
	enda, endb := a.time[len(a.time)-1], b.time[len(b.time)-1]
	end := enda + share*(endb-enda)
	if t > end {
		return 0, false
	}
	ta, tb := t, t
	if !math.IsInf(a.drip, 1) && !math.IsInf(b.drip, 1) && a.drip <= 1.001*enda && b.drip <= 1.001*endb {
		ta, tb = t*enda/end, t*endb/end // so that both are as far on their way to the drip
	}
	qa, oka := a.rateAt(ta)
	qb, okb := b.rateAt(tb)
	switch {
	case oka && okb && qa > 0 && qb > 0:
		return qa * math.Pow(qb/qa, share), true
	case oka && okb:
		return qa + share*(qb-qa), true
	case oka:
		return qa, true
	case okb:
		return qb, true
	}
	return 0, false
}

// fill paints the panel in narrow columns that overlap, so that no seams show.
func (f *mapFigure) fill(p *panel) {
	const wide, rows = 0.5, 320 // pt
	n := int((p.box.Max.X - p.box.Min.X) / wide)
	i := 0
	for c := range n {
		x0 := p.box.Min.X + vg.Length(c)*wide
		l := f.x.lo * math.Pow(f.x.hi/f.x.lo, (float64(c)+0.5)/float64(n))
		for i+1 < len(f.all)-1 && f.all[i+1].first < l {
			i++
		}
		share := math.Log(l/f.all[i].first) / math.Log(f.all[i+1].first/f.all[i].first)
		share = math.Min(1, math.Max(0, share))
		const none = -2
		last, from := none, 0
		for r := 0; r <= rows; r++ {
			now := none
			if r < rows {
				if q, ok := f.at(i, share, f.y.hi*(float64(r)+0.5)/rows); ok {
					now = f.band(q)
				}
			}
			if r > 0 && now != last {
				if last != none {
					y0, y1 := p.atY(f.y.hi*float64(from)/rows), p.atY(f.y.hi*float64(r)/rows)
					p.rect(p.within(vg.Rectangle{Min: vg.Point{X: x0, Y: y0}, Max: vg.Point{X: x0 + 1.6*wide, Y: y1}}), f.shadeOf(last))
				}
				from = r
			}
			last = now
		}
	}
}

func (f mapFigure) caption() string {
	s := "Growth rate of the root's base, d ln|ξ|/dt, against wavelength at the start and time; white above: it has dripped, or was not followed any further."
	if f.shrink {
		s += " Grey: it shrinks."
	}
	s += " Black line: the drip."
	if f.arc > f.x.lo && f.arc < 0.99*f.x.hi {
		s += fmt.Sprintf(" Dashed: the %s, %s km.", f.limitIs, plain(number(f.arc, 3)))
	}
	return s
}

func (f mapFigure) draw(s *sheet) {
	const bar, barGap = 7, 8
	var names []tick
	for i, v := range f.levels {
		names = append(names, tick{float64(i), number(v, 2)})
	}
	room := bar + barGap + yAxisWidth(names)
	p := &panel{sheet: s, x: f.x, y: f.y}
	p.box.Min.Y, p.box.Max.Y = s.Min.Y+xAxisHeight(1)+2, s.Max.Y-6
	left := linearTicks(p.y, p.yFits)
	p.box.Min.X, p.box.Max.X = s.Min.X+2+yAxisWidth(left), s.Max.X-room-2
	p.overhang = 4
	f.fill(p)
	if f.window > 0 && f.window < 0.99*f.y.hi {
		p.hline(f.window, stroke(vermillion, medium, dashed))
	}
	if f.arc < 0.99*f.x.hi {
		f.arcLine(p)
	}
	f.dripLine(p)
	p.frame()
	p.vertical("Time (Myr)", left, false)
	p.horizontal("Wavelength at the start (km)", logTicks(p.x, true, p.xFits), false)
	f.bar(p, bar, barGap, names)
	f.labels(p)
}

// dripLine draws when each wavelength drips.
func (f *mapFigure) dripLine(p *panel) {
	var l, t []float64
	for _, u := range f.all {
		l, t = append(l, u.first), append(t, u.drip)
	}
	p.line("drip time", l, t, stroke(black, thick, solid))
}

// bar draws the colour bar, each band as high as the others.
func (f *mapFigure) bar(p *panel, wide, gap vg.Length, names []tick) {
	b := &panel{sheet: p.sheet, y: scale{lo: 0, hi: float64(len(f.levels))}}
	b.box = vg.Rectangle{Min: vg.Point{X: p.box.Max.X + gap, Y: p.box.Min.Y}, Max: vg.Point{X: p.box.Max.X + gap + wide, Y: p.box.Max.Y}}
	for i := range f.levels {
		b.rect(vg.Rectangle{Min: vg.Point{X: b.box.Min.X, Y: b.atY(float64(i))}, Max: vg.Point{X: b.box.Max.X, Y: b.atY(float64(i + 1))}}, f.shadeOf(i))
	}
	b.frame()
	b.vertical("Growth rate (1/Myr)", names, true)
}

func (f *mapFigure) labels(p *panel) {
	if p.x.has(f.wavelength) && p.y.has(f.time) && f.wavelength > 0 {
		at := p.pt(f.wavelength, f.time)
		p.dot(at, 1.8, vermillion)
		p.tag(append([]spot{{at.Add(vg.Point{Y: 6}), text.XCenter, text.YBottom}}, around(at, 6)...), number(f.wavelength, 3)+" km,\n"+number(f.time, 3)+" Myr")
	}
	if f.window > 0 && p.y.has(f.window) {
		y := p.atY(f.window)
		var spots []spot
		for _, d := range []vg.Length{-3.5, 3.5} {
			align := map[bool]text.YAlignment{true: text.YTop, false: text.YBottom}[d < 0]
			spots = append(spots, spot{vg.Point{X: p.box.Min.X + 4, Y: y + d}, text.XLeft, align}, spot{vg.Point{X: p.box.Max.X - 4, Y: y + d}, text.XRight, align})
		}
		p.tag(spots, "window ends", "window")
	}
	if f.arc > f.x.lo && f.arc < 0.99*f.x.hi {
		p.tag(besideLine(p, f.arc, 3.5), f.limitIs)
	}
}
