package plots

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// amplitudesFigure is amplitude against time.
type amplitudesFigure struct {
	dripSetting
	x, y           scale
	shown          []undulated // other wavelengths
	first          undulated
	soft, moving   bool
	plain          undulated // exponential growth at the first rate, where soft
	strain, stress float64   // at the drip, 1/s and Pa; 0 where not known
}

// dripAmplitudes draws the amplitude of the leading wavelengths against time; nil where
// nothing was followed.
func dripAmplitudes(res *race.Result, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	set, err := dripSettingOf(res)
	if err != nil {
		return nil, err
	}
	all, err := undulations(res.Drip)
	if err != nil || len(all) == 0 || !(set.wavelength > 0) || math.IsInf(set.time, 1) {
		return nil, err
	}
	f := amplitudesFigure{dripSetting: set, soft: res.Drip.Soft != nil, moving: res.Problem.Moving()}
	one := *res.Drip
	if one.Traces = one.Traces[:0:0]; len(res.Drip.First.Time) > 2 {
		one.Traces = append(one.Traces, res.Drip.First)
	}
	first, err := undulations(&one)
	if err != nil || len(first) == 0 {
		return nil, err
	}
	f.first = first[0]
	f.choose(all)
	f.axes()
	if n := len(res.Drip.First.StrainRate); n > 0 {
		f.strain, f.stress = res.Drip.First.StrainRate[n-1], res.Drip.First.Stress[n-1]
	}
	return &Figure{Name: "drip-amplitude", Caption: f.caption(), Width: width, Height: 72 * vg.Millimeter, draw: f.draw}, nil
}

// choose picks other wavelengths, some shorter and some longer than the first drip's.
func (f *amplitudesFigure) choose(all []undulated) {
	for _, ratio := range []float64{0.4, 0.65, 1.6, 2.5} {
		best, off := -1, math.Log(1.2)
		for i, u := range all {
			if d := math.Abs(math.Log(u.first / (ratio * f.wavelength))); d < off {
				best, off = i, d
			}
		}
		if best >= 0 && f.apart(&all[best]) {
			f.shown = append(f.shown, all[best])
		}
	}
	if u := f.first; f.soft && len(u.time) > 1 {
		q := math.Log(u.base[1]/u.base[0]) / (u.time[1] - u.time[0])
		last := f.last()
		for i := range 41 {
			t := last * float64(i) / 40
			f.plain.time, f.plain.base = append(f.plain.time, t), append(f.plain.base, u.base[0]*math.Exp(q*t))
		}
	}
}

// apart says whether a line keeps clear of those already shown.
func (f *amplitudesFigure) apart(u *undulated) bool {
	for _, v := range f.shown {
		t := 0.85 * math.Min(u.time[len(u.time)-1], v.time[len(v.time)-1])
		if math.Abs(math.Log(interpolate(u.time, u.base, t)/interpolate(v.time, v.base, t))) < 0.06*math.Log(f.tip/f.first.base[0]) {
			return false
		}
	}
	return true
}

// curved is a line through few points of an undulation that only grows, in a column that
// stands still: smooth in time against ln of the amplitude, as it may end all but upright.
// Where the column moves, its events break the slope.
func (u *undulated) curved(still bool) (time, base []float64) {
	if len(u.base) > 60 || !still {
		return u.time, u.base
	}
	for i := 1; i < len(u.base); i++ {
		if !(u.base[i] > u.base[i-1]) {
			return u.time, u.base
		}
	}
	base, time = smooth(logs(u.base), u.time)
	return time, exps(base)
}

func (f *amplitudesFigure) axes() {
	f.x = linear(0, 1.03*f.last())
	hi, lo := f.tip, math.Inf(1)
	for _, u := range append([]undulated{f.first}, f.shown...) {
		for _, b := range u.base {
			hi = math.Max(hi, b)
			if b > 0 {
				lo = math.Min(lo, b)
			}
		}
	}
	if !(f.tip > 0) || hi > 3*f.tip {
		hi = math.Max(f.tip, f.first.base[len(f.first.base)-1])
	}
	f.y = logarithmic(math.Max(lo, f.first.base[0]*0.1)/1.4, hi*1.9)
}

func (f amplitudesFigure) caption() string {
	s := fmt.Sprintf("Amplitude of undulations of the root's base against time, by their wavelength at the start. Thick: the first to drip, %s km, at %s. Dotted: the descent that counts as a drip, %s km at the start.",
		plain(number(f.wavelength, 3)), plain(span(f.time*myr)), plain(number(f.tip, 3)))
	if f.soft {
		s += " Dashed: growth at the rate of the start, exponential; the drip softens its own rock and outruns it."
	}
	if f.strain > 0 {
		s += fmt.Sprintf(" At the drip its own strain rate at the root's base is %s 1/s and its stress %s MPa (second invariants, the largest along the base).",
			plain(number(f.strain, 2)), plain(number(f.stress/mpa, 2)))
	}
	return s
}

func (f amplitudesFigure) draw(s *sheet) {
	starts := make([]int, 0, len(f.shown))
	s.stack([]part{{left: "Undulation amplitude (km)",
		scale: func(p *panel) (left, right []tick) {
			p.y = f.y
			return logTicks(p.y, true, p.yFits), nil
		},
		curves: func(p *panel) {
			if f.tip > 0 {
				p.hline(f.tip, stroke(darkGrey, thin, dotted))
			}
			for _, u := range f.shown {
				st := stroke(blue, thin, solid)
				if f.arc > 0 && u.last > f.arc {
					st = stroke(midGrey, thin, dashed)
				}
				starts = append(starts, len(p.lines))
				time, base := u.curved(!f.moving)
				p.line(number(u.first, 2)+" km", time, base, st)
			}
			starts = append(starts, len(p.lines))
			if f.plain.time != nil {
				p.line("exponential", f.plain.time, f.plain.base, stroke(black, medium, dashed))
			}
			starts = append(starts, len(p.lines))
			time, base := f.first.curved(!f.moving)
			p.line("first drip", time, base, stroke(black, thick, solid))
		},
		front: func(p *panel) {
			if f.window > 0 {
				p.vline(f.window, stroke(vermillion, medium, dashed))
			}
		},
		labels: func(p *panel) { f.labels(p, starts) }}},
		f.x, s.Min.Y+xAxisHeight(1)+2, s.Max.Y-6, "Time (Myr)", func(p *panel) []tick { return linearTicks(p.x, p.xFits) })
}

// labels names the lines; line i of the shown ones is the starts[i]-th on the sheet.
func (f amplitudesFigure) labels(p *panel, starts []int) {
	if p.x.has(f.time) && p.y.has(f.tip) {
		at := p.pt(f.time, f.first.base[len(f.first.base)-1])
		p.dot(at, 2, vermillion)
		p.place(black, p.box, around(at, 5), number(f.wavelength, 3)+" km drips at "+number(f.time, 3)+" Myr", number(f.wavelength, 3)+" km drips\nat "+number(f.time, 3)+" Myr")
	}
	if f.window > 0 && p.x.has(f.window) {
		p.place(vermillion, p.box, besideLine(p, f.window, 2.5), "window ends", "window\nends", "window")
	}
	for i, u := range f.shown {
		if starts[i] >= len(p.lines) || starts[i] == starts[i+1] {
			continue
		}
		c := blue
		if f.arc > 0 && u.last > f.arc {
			c = darkGrey
		}
		p.place(c, p.box, endOf(p.lines[starts[i]]), number(u.first, 2)+" km")
	}
	if n := len(starts); f.plain.time != nil && starts[n-2] < len(p.lines) && starts[n-2] != starts[n-1] {
		p.place(black, p.box, endOf(p.lines[starts[n-2]]), "at the first rate", "at the\nfirst rate")
	}
	if f.tip > 0 && p.y.has(f.tip) {
		var spots []spot
		for i := range 10 {
			at := vg.Point{X: p.box.Min.X + 3 + vg.Length(i)*(p.box.Max.X-p.box.Min.X)/10, Y: p.atY(f.tip)}
			spots = append(spots, spot{at.Sub(vg.Point{Y: 3}), text.XLeft, text.YTop}, spot{at.Add(vg.Point{Y: 3}), text.XLeft, text.YBottom})
		}
		words := "drip: tip " + number(f.tip, 3) + " km down"
		if n := len(f.first.base); math.Abs(f.first.base[n-1]/f.tip-1) > 0.01 { // the root has another thickness by then
			words += " at the start"
		}
		p.place(darkGrey, p.box, spots, words, strings.Replace(words, ": ", ":\n", 1))
	}
}

// endOf are places about a line's end, then along its later half.
func endOf(line []vg.Point) []spot {
	n := len(line)
	if n < 2 {
		return nil
	}
	at := line[n-1]
	out := []spot{{at.Add(vg.Point{X: 2.5}), text.XLeft, text.YCenter}, {at.Add(vg.Point{X: 2, Y: -3}), text.XLeft, text.YTop}, {at.Add(vg.Point{X: -2, Y: 3}), text.XRight, text.YBottom}, {at.Add(vg.Point{X: 0, Y: -3}), text.XRight, text.YTop}}
	for _, d := range []vg.Length{2.5, 5} {
		for k := 15; k >= 6; k-- {
			out = append(out, around(line[min(n-1, k*n/16)], d)[:8]...)
		}
	}
	return out
}
