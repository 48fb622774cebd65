package drip

import (
	"context"
	"fmt"
	"math"
)

// trace is an undulation through time; with rates, those of its flow too.
func (w *softWave) trace(rates bool) Trace {
	var t Trace
	for i, at := range w.At {
		t.add(at, w.lengths[i], w.Base[i])
	}
	if rates {
		t.StrainRate, t.Stress, t.Background = w.Strain, w.Stress, w.straying
	}
	return t
}

// answer fills all that is said of the first drip.
func (q *softThrough) answer(ctx context.Context, win softWave, r *Result) error {
	first := q.course.first()
	contrast := -first.s.Jumps[first.lay.rootBase]
	if math.IsInf(win.Time, 1) {
		r.TimeLow, r.TimeHigh = win.Time, win.Time
		r.Outcome, r.Reason = q.never(contrast, r.Unrestricted)
		return nil
	}
	if win.Time < r.Unrestricted.Time {
		r.Unrestricted = Fastest{win.Time, win.last}
	}
	r.Outcome, r.Reason = "drips", "the root is "+Weigh(contrast)
	if contrast <= 0 {
		r.Reason += " at the start, and becomes denser or is carried down by denser rock above"
	}
	if win.Time > q.set.Window {
		r.Outcome, r.Reason = "window", "it would drip, but only after the window has closed"
	}
	if q.o.Limit > 0 && r.Unrestricted.Time < 0.99*win.Time {
		r.Excluded = fmt.Sprintf("wavelengths beyond %s, were computed and not used; the first of them to drip is %.4g km", q.o.LimitIs, r.Unrestricted.Wavelength/1e3)
	}
	r.Time, r.Wavelength, r.InitialWavelength = win.Time, win.last, win.Wavelength
	r.SpacingFrom, r.SpacingTo = win.last, win.last
	for i := range q.list {
		if w := &q.list[i]; w.Time-first.t <= 1.1*(win.Time-first.t) && q.fits(w) {
			r.SpacingFrom, r.SpacingTo = math.Min(r.SpacingFrom, w.last), math.Max(r.SpacingTo, w.last)
		}
	}
	r.First = win.trace(true)
	r.History = Amplitude{r.First.Time, r.First.Base}
	if err := q.bracket(ctx, win, r.Soft); err != nil {
		return err
	}
	var err error
	if r.TimeLow, err = q.scaled(ctx, win, 3); err != nil {
		return err
	}
	r.TimeHigh, err = q.scaled(ctx, win, 1.0/3)
	return err
}

// bracket fills the bounds of the first drip's wavelength.
func (q *softThrough) bracket(ctx context.Context, win softWave, s *SelfSoftened) error {
	first := q.course.first()
	s.Best, s.Exponent = win.Time, win.Exponent
	s.Strained = first.back.ExtensionRate != 0
	for i, to := range []*float64{&s.Slow, &s.BestLow, &s.BestHigh} {
		w, err := q.follow(ctx, win.Wavelength, [3]boost{slow, early, tardy}[i], q.until)
		if err != nil {
			return err
		}
		*to = w.Time
	}
	at := q.course.around(win.Time)
	s.Correction = strainedCorrections(win.Exponent, 2*math.Pi/win.last*at.root, q.set.AmplitudeAt(win.Wavelength)/first.root, win.over)
	return nil
}

// scaled is the first drip's time for the first amplitude times m, at its own best
// wavelength, looked for around the first drip's.
func (q *softThrough) scaled(ctx context.Context, win softWave, m float64) (float64, error) {
	if q.scale = m; m*q.set.AmplitudeAt(win.Wavelength) >= q.set.Criterion*q.course.first().root {
		q.scale = 1
		return q.course.first().t, nil
	}
	list := q.list
	w, err := q.search(ctx, win.Wavelength/1.5, win.Wavelength*1.5, 1, 5e-2)
	q.list, q.scale = list, 1
	return w.Time, err
}

// never says that nothing drips, and why.
func (q *softThrough) never(contrast float64, free Fastest) (outcome, reason string) {
	denser := contrast > 0
	for _, s := range q.course.stretches {
		for _, n := range s.nodes {
			denser = denser || n.lay.rootBase >= 0 && -n.s.Jumps[n.lay.rootBase] > 0
		}
	}
	switch {
	case q.course.last().lay.rootBase < 0:
		return "window", "the root was gone before it could drip"
	case !math.IsInf(free.Time, 1):
		return "window", fmt.Sprintf("no wavelength within %s, drips, though one of %.4g km would", q.o.LimitIs, free.Wavelength/1e3)
	case !denser:
		return "buoyant", "does not drip: the root is " + Weigh(contrast) + ", and never becomes denser"
	case q.ended != "":
		return "window", "does not drip: at " + q.ended
	}
	return "window", "does not drip within twice the window by its own softening, though the root is or becomes denser than what lies below it"
}

// drips takes the first drip out of the root and follows what is left, to the window's
// end or until the root is no thicker than an undulation needs.
func (q *softThrough) drips(ctx context.Context, next softWave, r *Result) error {
	for {
		if len(r.Drips) == mostDrips {
			r.Warnings = append(r.Warnings, fmt.Sprintf("more than %d drips before the window ends: the first %d are listed", mostDrips, mostDrips))
			return nil
		}
		if next.Time > q.set.Window {
			return nil
		}
		n, err := q.course.at(ctx, next.Time)
		if err != nil {
			return err
		}
		if n.lay.rootBase < 0 {
			return nil
		}
		e := Event{Time: next.Time, Wavelength: next.last, Initial: next.Wavelength}
		last := n.lay.rootBase - 1
		_, e.Depth = n.s.Span(last)
		e.BaseTemperature, _ = n.s.TemperatureAt(last, e.Depth)
		if q.set.Removes >= 1 { // nothing is left to follow
			e.Lost = n.root
			r.Drips = append(r.Drips, e)
			return nil
		}
		if e.Lost, err = q.take(n.node); err != nil {
			return err
		}
		r.Drips = append(r.Drips, e)
		if next.Time >= q.set.Window*(1-1e-6) {
			return nil
		}
		q.until = q.set.Window
		if q.course, err = newSoftCourse(q.plan, q.tape, q.set, q.until); err != nil {
			return nil // nothing that could drip is left
		}
		q.course.spacing = 2 * softSpacing
		near := next.last * q.course.first().root / n.root
		if next, err = q.search(ctx, near/2, near*2, 2, 4e-2); err != nil {
			return err
		}
		if math.IsInf(next.Time, 1) {
			return nil
		}
	}
}
