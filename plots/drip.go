package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/drip"
	"keelfall/solver/race"
)

// Drips returns the figures of a drip that a result has the data for: drip time against
// wavelength, amplitude against time, growth against wavelength and time, and drip time
// against the initial undulation. width is ColumnWidth where 0.
func Drips(res *race.Result, width vg.Length) ([]Figure, error) {
	if res == nil || res.Problem == nil || res.Drip == nil {
		return nil, nil
	}
	var out []Figure
	if anyFinite(res.Drip.Curve.Time) {
		f, err := Spectrum(nil, res.Drip, SettingOf(res.Problem), width)
		if err != nil {
			return nil, err
		}
		out = append(out, f)
	}
	more, err := dripFigures(res, width)
	return append(out, more...), err
}

// dripFigures are those of Drips without the drip time against wavelength.
func dripFigures(res *race.Result, width vg.Length) ([]Figure, error) {
	var out []Figure
	for _, draw := range []func(*race.Result, vg.Length) (*Figure, error){dripAmplitudes, dripMap, dripStarts} {
		f, err := draw(res, width)
		if err != nil {
			return nil, err
		}
		if f != nil {
			out = append(out, *f)
		}
	}
	return out, nil
}

// undulated is one wavelength's undulation against time, in km and Myr.
type undulated struct {
	first, last        float64 // wavelength at the start and at the end
	drip               float64 // +Inf where it is not known to drip
	time, base, growth []float64
}

// undulations returns the traces that say something, by increasing wavelength.
func undulations(d *drip.Result) ([]undulated, error) {
	var out []undulated
	for i, t := range d.Traces {
		if err := sameLength("amplitude and time", len(t.Base), len(t.Time)); err != nil {
			return nil, err
		}
		if err := sameLength("wavelength and time", len(t.Wavelength), len(t.Time)); err != nil {
			return nil, err
		}
		if len(t.Time) < 3 {
			continue
		}
		u := undulated{drip: math.Inf(1), first: t.Wavelength[0] / km, last: t.Wavelength[len(t.Wavelength)-1] / km}
		if len(d.Curve.Time) == len(d.Traces) {
			u.drip = d.Curve.Time[i] / myr
		}
		for j, at := range t.Time {
			if n := len(u.time); n > 0 && !(at/myr > u.time[n-1]) { // what happens at once
				u.time, u.base = u.time[:n-1], u.base[:n-1]
			}
			u.time, u.base = append(u.time, at/myr), append(u.base, t.Base[j]/km)
		}
		if err := finite(fmt.Sprintf("amplitude of wavelength %d", i+1), append(append([]float64{u.first}, u.time...), u.base...)...); err != nil {
			return nil, err
		}
		if !(u.first > 0) || len(u.time) < 3 {
			continue
		}
		log := make([]float64, len(u.base))
		for j, b := range u.base {
			log[j] = math.Log(math.Max(b, 1e-12))
		}
		u.growth = slopes(u.time, log)
		out = append(out, u)
	}
	return out, nil
}

// dripSetting is what the figures of a drip share, in km and Myr.
type dripSetting struct {
	arcLimit
	window, tip, time, wavelength float64 // of the first drip; time is +Inf without one
}

func dripSettingOf(res *race.Result) (dripSetting, error) {
	p, d := res.Problem, res.Drip
	s := dripSetting{arcLimit: SettingOf(p).limit(), window: p.Drip.Window / myr, time: d.Time / myr, wavelength: d.InitialWavelength / km,
		tip: p.Drip.Criterion * p.Column.RootThickness() / km}
	if math.IsNaN(s.time) {
		return s, fmt.Errorf("plots: the drip time is not a number")
	}
	return s, finite("window and criterion", s.window, s.tip, s.wavelength, s.arc)
}

// last is the end of a time axis: with the window where it is not far beyond the drip.
func (s dripSetting) last() float64 {
	switch {
	case math.IsInf(s.time, 1) || s.time <= 0:
		return s.window
	case s.window > 0 && s.window < 2.5*s.time:
		return math.Min(math.Max(s.window, 1.15*s.time), 2*s.window)
	}
	return 1.6 * s.time
}

// tag writes one of the wordings at the first of spots that is clear of texts, on a white
// ground, for panels that are filled with colour.
func (p *panel) tag(spots []spot, wordings ...string) bool {
	for _, txt := range wordings {
		sp, n := p.best(txt, p.box, spots)
		if n < 0 {
			continue
		}
		st := textStyle{x: sp.x, y: sp.y}
		p.rect(p.within(grown(textBox(sp.at, txt, st), 1.4)), white)
		p.text(sp.at, txt, st)
		return true
	}
	return false
}

// besideLine are the spots beside a vertical line at x.
func besideLine(p *panel, x float64, d vg.Length) []spot {
	var out []spot
	for _, share := range []vg.Length{0.95, 0.85, 0.75, 0.05, 0.15, 0.25, 0.5} {
		y := p.box.Min.Y + share*(p.box.Max.Y-p.box.Min.Y)
		align := text.YTop
		if share < 0.5 {
			align = text.YBottom
		}
		out = append(out, spot{vg.Point{X: p.atX(x) - d, Y: y}, text.XRight, align}, spot{vg.Point{X: p.atX(x) + d, Y: y}, text.XLeft, align})
	}
	return out
}
