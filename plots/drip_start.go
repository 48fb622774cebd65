package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/race"
)

// startsFigure is drip time against the initial undulation, in m and Myr.
type startsFigure struct {
	dripSetting
	x, y            scale
	amplitude, at   []float64
	used, low, high float64 // the undulation in use; drip times of three times and a third of it
}

// dripStarts draws the drip time against the undulation it began with; nil where that was
// not computed.
func dripStarts(res *race.Result, width vg.Length) (*Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return nil, err
	}
	set, err := dripSettingOf(res)
	if err != nil {
		return nil, err
	}
	f := startsFigure{dripSetting: set, used: res.Problem.Drip.AmplitudeAt(res.Drip.InitialWavelength), low: res.Drip.TimeLow / myr, high: res.Drip.TimeHigh / myr}
	for _, u := range res.Study.Undulations {
		if !(u.Amplitude > 0) || math.IsNaN(u.Time) || u.Time < 0 {
			return nil, fmt.Errorf("plots: a drip at %g s from an undulation of %g m cannot be drawn", u.Time, u.Amplitude)
		}
		if u.Time > 0 && !math.IsInf(u.Time, 1) {
			f.amplitude, f.at = append(f.amplitude, u.Amplitude), append(f.at, u.Time/myr)
		}
	}
	if len(f.at) < 2 {
		return nil, nil
	}
	lo, hi, _ := bounds(f.amplitude)
	f.x = logarithmic(lo/1.1, math.Max(hi, 1e3*f.tip)*1.05)
	lo, hi, _ = bounds(f.at)
	lo = math.Max(lo, hi*1e-5)
	if f.window > lo/100 && f.window < hi*100 {
		lo, hi = math.Min(lo, f.window), math.Max(hi, f.window)
	}
	if most := 10 * math.Max(f.window, f.time); most > 0 && !math.IsInf(most, 1) {
		hi = math.Min(hi, most)
	}
	if lo = math.Max(lo, hi*1e-4); !math.IsInf(f.high, 1) {
		hi = math.Max(hi, f.high)
	}
	f.y = logarithmic(lo/1.3, hi*1.6)
	return &Figure{Name: "drip-start", Caption: f.caption(), Width: width, Height: 68 * vg.Millimeter, draw: f.draw}, nil
}

func (f startsFigure) caption() string {
	s := fmt.Sprintf("Drip time against the undulation of the root's base at the start, at the quickest wavelength of each. Dot: the undulation in use, %s m; rings: three times and a third of it.", plain(number(f.used, 3)))
	if f.window > 0 {
		s += fmt.Sprintf(" Dashed: the window, %s Myr.", plain(number(f.window, 3)))
	}
	if f.tip > 0 {
		s += fmt.Sprintf(" At %s km the undulation would be the drip itself.", plain(number(f.tip, 3)))
	}
	return s
}

func (f startsFigure) draw(s *sheet) {
	s.stack([]part{{left: "Drip time (Myr)",
		scale: func(p *panel) (left, right []tick) {
			p.y = f.y
			return logTicks(p.y, true, p.yFits), nil
		},
		curves: func(p *panel) {
			if f.window > 0 {
				p.hline(f.window, stroke(vermillion, medium, dashed))
			}
			if f.tip > 0 {
				p.vline(1e3*f.tip, stroke(darkGrey, thin, dotted))
			}
			x, y := f.amplitude, f.at
			if len(x) < 60 { // few points of what is smooth in logarithms
				lx, ly := smooth(logs(x), logs(y))
				x, y = exps(lx), exps(ly)
			}
			p.line("drip time", x, y, stroke(black, thick, solid))
		},
		labels: f.labels}},
		f.x, s.Min.Y+xAxisHeight(1)+2, s.Max.Y-6, "Undulation at the start (m)", func(p *panel) []tick { return logTicks(p.x, true, p.xFits) })
}

func (f startsFigure) labels(p *panel) {
	mark := func(a, t float64, words string, full bool) {
		if !(t > 0) || math.IsInf(t, 1) || !p.x.has(a) || !p.y.has(t) {
			return
		}
		at := p.pt(a, t)
		if full {
			p.dot(at, 2, vermillion)
		} else {
			p.ring(at, 2.2, 0.9, vermillion)
		}
		p.place(black, p.box, around(at, 5), words)
	}
	mark(f.used, f.time, number(f.used, 3)+" m: "+number(f.time, 3)+" Myr", true)
	mark(3*f.used, f.low, "× 3: "+number(f.low, 3)+" Myr", false)
	mark(f.used/3, f.high, "÷ 3: "+number(f.high, 3)+" Myr", false)
	if f.window > 0 && p.y.has(f.window) {
		y := p.atY(f.window)
		var spots []spot
		for i := range 8 {
			x := p.box.Min.X + 3 + vg.Length(i)*(p.box.Max.X-p.box.Min.X)/10
			spots = append(spots, spot{vg.Point{X: x, Y: y - 3}, text.XLeft, text.YTop}, spot{vg.Point{X: x, Y: y + 3}, text.XLeft, text.YBottom})
		}
		p.place(vermillion, p.box, spots, "window, "+number(f.window, 3)+" Myr", "window")
	}
	if f.tip > 0 && p.x.has(1e3*f.tip) {
		p.place(darkGrey, p.box, besideLine(p, 1e3*f.tip, 2.5), "a drip already", "a drip\nalready")
	}
}

func logs(v []float64) []float64 {
	out := make([]float64, len(v))
	for i, x := range v {
		out[i] = math.Log(x)
	}
	return out
}

func exps(v []float64) []float64 {
	out := make([]float64, len(v))
	for i, x := range v {
		out[i] = math.Exp(x)
	}
	return out
}
