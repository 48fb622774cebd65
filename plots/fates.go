package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"

	"keelfall/solver/drip"
	"keelfall/solver/excision"
	"keelfall/solver/race"
)

// Fates draws what becomes of the root against time: its thickness where shear zones
// cut it out (in the user's column and over the arc), and below it the undulation's
// amplitude up to the drip; the window's end, drip and excision in words. Either part
// may be missing; an error where both are. width is ColumnWidth where 0.
func Fates(res *race.Result, width vg.Length) (Figure, error) {
	width, err := pageWidth(width)
	if err != nil {
		return Figure{}, err
	}
	if res == nil || res.Problem == nil {
		return Figure{}, fmt.Errorf("plots: there is no result to draw")
	}
	f := fatesFigure{window: res.Problem.Drip.Window / myr, age: math.NaN()}
	if res.Problem.HasTimeZero {
		f.age = res.Problem.TimeZero / myr
	}
	if first, last, ok := res.Problem.Column.RootSpan(); ok {
		for _, l := range res.Problem.Column.Layers[first : last+1] {
			f.tip += l.Thickness / km * res.Problem.Drip.Criterion
		}
	}
	if err := finite("window and criterion", f.window, f.tip); err != nil {
		return Figure{}, err
	}
	if err := f.takeExcision(res.Excision); err != nil {
		return Figure{}, err
	}
	if err := f.takeDrip(res.Drip); err != nil {
		return Figure{}, err
	}
	height := 72 * vg.Millimeter
	switch {
	case f.excision == nil && f.drip == nil:
		return Figure{}, fmt.Errorf("plots: neither excision nor a drip has a history to draw")
	case f.excision != nil && f.drip != nil:
		height = 118 * vg.Millimeter
	}
	f.headline = headline(&res.Verdict, f.window)
	f.x = linear(0, f.lastTime())
	f.silence = silence(res.Drip)
	return Figure{Name: "fates", Caption: f.caption(res.Verdict.Sentence), Width: width, Height: height, draw: f.draw}, nil
}

// fatesFigure is in km and Myr.
type fatesFigure struct {
	x           scale
	window, age float64 // age of time zero, Ma; NaN where not given
	tip         float64 // descent that counts as a drip
	headline    string
	silence     string // why there is no drip to draw; empty where there is one
	excision    *excision.Result
	time        []float64
	column, arc []float64 // root thickness
	drip        *drip.Result
	dripTime    []float64
	amplitude   []float64
}

func (f *fatesFigure) takeExcision(e *excision.Result) error {
	if e == nil || e.Outcome == "no zones" || len(e.History.Time) == 0 {
		return nil
	}
	h := e.History
	f.time, f.column, f.arc = divided(h.Time, myr), divided(h.RootThickness, km), divided(h.ArcMean, km)
	if len(f.arc) == 0 {
		f.arc = nil
	} else if err := sameLength("arc mean and time", len(f.arc), len(f.time)); err != nil {
		return err
	}
	for _, err := range []error{sameLength("root thickness and time", len(f.column), len(f.time)),
		finite("time", f.time...), finite("root thickness", f.column...), finite("arc mean", f.arc...)} {
		if err != nil {
			return err
		}
	}
	if math.IsNaN(e.Time) {
		return fmt.Errorf("plots: the excision time is not a number")
	}
	f.excision = e
	return nil
}

func (f *fatesFigure) takeDrip(d *drip.Result) error {
	if d == nil || d.Outcome == "buoyant" || len(d.History.Time) == 0 {
		return nil
	}
	f.dripTime, f.amplitude = divided(d.History.Time, myr), divided(d.History.Base, km)
	for _, err := range []error{sameLength("amplitude and time", len(f.amplitude), len(f.dripTime)),
		finite("time", f.dripTime...), finite("amplitude", f.amplitude...)} {
		if err != nil {
			return err
		}
	}
	if _, hi, _ := bounds(f.amplitude); hi <= 0 {
		return nil
	}
	if math.IsNaN(d.Time) {
		return fmt.Errorf("plots: the drip time is not a number")
	}
	f.drip = d
	return nil
}

// lastTime is the end of the time axis: a little after the window and what happens soon
// after it.
func (f *fatesFigure) lastTime() float64 {
	last := f.window
	if last == 0 {
		_, last, _ = bounds(f.time, f.dripTime)
	}
	limit := 1.6 * last
	if limit == 0 {
		return 1
	}
	see := func(t float64) {
		if t/myr <= limit {
			last = math.Max(last, t/myr)
		}
	}
	if f.excision != nil {
		see(excisionTime(f.excision))
	}
	if f.drip != nil {
		see(f.drip.Time)
		see(f.drip.TimeHigh)
	}
	return 1.06 * last
}

func (f fatesFigure) hasBand() bool {
	return f.drip != nil && f.drip.TimeLow > 0 && f.drip.TimeHigh > f.drip.TimeLow && !math.IsInf(f.drip.TimeLow, 1)
}

// draw stacks the panels on one time axis; ages run along the top.
func (f fatesFigure) draw(s *sheet) {
	var parts []part
	if f.excision != nil {
		parts = append(parts, f.thickness())
	}
	if f.drip != nil {
		parts = append(parts, f.amplitudes())
	}
	top, head := s.Max.Y-4, func(vg.Length) {}
	if f.headline != "" {
		const left, right = 40, 6 // the axes begin at about left
		txt := wrap(f.headline, letterSize, s.Max.X-s.Min.X-left-right, 2)
		_, up, _ := extent(txt, letterSize)
		head = func(start vg.Length) {
			s.text(vg.Point{X: min(start, s.Min.X+left), Y: s.Max.Y - 4}, txt, textStyle{size: letterSize, y: text.YTop})
		}
		top -= up + 6
	}
	if !math.IsNaN(f.age) {
		top -= xAxisHeight(1)
		parts[0].top = func(p *panel) (string, []tick) { return "Age (Ma)", ageTicks(p, f.age) }
	}
	for i := range parts {
		parts[i].front = func(p *panel) {
			if f.window > 0 {
				p.vline(f.window, stroke(vermillion, medium, dashed))
			}
			if f.drips() {
				p.vline(f.drip.Time/myr, stroke(blue, medium, solid))
			}
		}
	}
	head(s.stack(parts, f.x, s.Min.Y+xAxisHeight(1)+2, top, "Time (Myr)", func(p *panel) []tick { return linearTicks(p.x, p.xFits) }))
}
