package excision

import (
	"context"
	"fmt"
	"math"
)

// moments is how many intervals of the window Run's histories have.
const moments = 100

// Run follows a plan's zones through a window in s and returns when they have taken a
// share, above 0 to 1, of the root's mass. What comes later than the window, CutThroughTime,
// ArcMeanTime and LocalBeyond, is looked for up to twice the window.
//
// Given rates in a column that stays as it is have the closed form of Solve, which takes
// microseconds; both agree to 1e-9 (TestAgreesWithSolve). The share taken counts rock that
// zones took, not what stretching moved aside; the arc mean is thinned by stretching too.
//
// Errors: those of Begin and Advance, ErrNoRoot, a share or window out of range.
func Run(ctx context.Context, p Plan, share, window float64) (*Result, error) {
	ev, err := Begin(p)
	switch {
	case err != nil:
		return nil, err
	case ev.mass == 0:
		return nil, ErrNoRoot
	case !(share > 0 && share <= 1):
		return nil, fmt.Errorf("excision: share %g; must be above 0 and at most 1", share)
	case !(window > 0) || math.IsInf(window, 0):
		return nil, fmt.Errorf("excision: window %g s; must be positive", window)
	}
	never := math.Inf(1)
	r := &run{Result: &Result{Outcome: "no zones", Time: never, Share: share, CutThroughTime: never, ArcMeanTime: never, LocalBeyond: never, PlateFails: never}, ev: ev, window: window}
	if err := ev.Advance(ctx, 0); err != nil {
		return nil, err
	}
	r.prepare()
	if err := r.note(); err != nil {
		return nil, err
	}
	for i := 1; i <= 2*moments; i++ {
		if i > moments && r.done() {
			break
		}
		if err := r.to(ctx, window*float64(i)/moments, i <= moments); err != nil {
			return nil, err
		}
		if i == moments && math.IsInf(r.LocalBeyond, 1) {
			r.take(ev.sums())
		}
	}
	r.finish()
	return r.Result, nil
}

// run is a Run on its way.
type run struct {
	*Result
	ev     *Evolution
	window float64
}

// done says whether nothing is left to wait for after the window.
func (r *run) done() bool {
	if len(r.ev.zones) == 0 {
		return true
	}
	return !math.IsInf(r.LocalBeyond, 1) && !math.IsInf(r.CutThroughTime, 1) && (r.ev.plan.ArcWidth == 0 || !math.IsInf(r.ArcMeanTime, 1))
}

// prepare makes the histories.
func (r *run) prepare() {
	for i := range r.ev.zones {
		z := &r.ev.zones[i]
		h := ZoneHistory{Name: z.Name}
		for _, n := range z.Cuts {
			h.Strips = append(h.Strips, Strip{Layer: n})
		}
		r.Zones = append(r.Zones, h)
	}
	for _, l := range r.ev.layers {
		r.Layers = append(r.Layers, LayerHistory{Name: l.name, Root: l.root})
	}
}

// to moves on to a time and notes it.
func (r *run) to(ctx context.Context, t float64, note bool) error {
	ev := r.ev
	for ev.Time() < t {
		if err := r.step(ctx, t); err != nil {
			return err
		}
	}
	if r.CutThroughTime = ev.cutAt; !math.IsInf(ev.cutAt, 1) {
		r.CutThroughSlip, r.CutThroughHeave = ev.cut.slip, ev.cut.heave
	}
	if note {
		return r.note()
	}
	return nil
}

// step takes one of the evolution's own steps, within which nothing changes much.
func (r *run) step(ctx context.Context, to float64) error {
	ev := r.ev
	a, arcA := ev.Shares()
	before, err := ev.step(ctx, to, true)
	if err != nil {
		return err
	}
	t := ev.Time()
	b, arcB := ev.Shares()
	near := r.Share * (1 - 1e-12)
	if math.IsInf(r.LocalBeyond, 1) && b >= near {
		at, err := reaches(ctx, before, t, a, b, r.Share, func(e *Evolution) float64 { s, _ := e.Shares(); return s })
		if err != nil {
			return err
		}
		r.LocalBeyond = at.Time()
		if at.Time() <= r.window {
			r.take(at.sums())
		}
	}
	if math.IsInf(r.ArcMeanTime, 1) && ev.plan.ArcWidth > 0 && arcB >= near {
		at, err := reaches(ctx, before, t, arcA, arcB, r.Share, func(e *Evolution) float64 { _, s := e.Shares(); return s })
		if err != nil {
			return err
		}
		r.ArcMeanTime = at.Time()
	}
	return nil
}

// reaches returns the column at the first time up to end at which a share that rises is
// want; it is a there and b at the end (Illinois method on copies).
func reaches(ctx context.Context, from *Evolution, end, a, b, want float64, share func(*Evolution) float64) (*Evolution, error) {
	ta, tb := from.Time(), end
	fa, fb := a-want, b-want
	at := from
	if fa >= 0 {
		return at, nil
	}
	for range 60 {
		t := end
		if fb > 0 {
			t = tb - fb*(tb-ta)/(fb-fa)
		}
		at = from.Copy()
		if err := at.Advance(ctx, min(max(t, from.Time()), end)); err != nil {
			return nil, err
		}
		f := share(at) - want
		if math.Abs(f) <= 1e-11*want || math.Abs(tb-ta) <= 1e-12*end {
			break
		}
		if f < 0 != (fb < 0) {
			ta, fa = tb, fb
		} else {
			fa /= 2
		}
		tb, fb = t, f
	}
	return at, nil
}

// take makes what the zones have done the answer's.
func (r *run) take(s sums) {
	r.Slip, r.Heave, r.Throw, r.PressureGap = s.slip, s.heave, s.throw, s.gap
}

// note adds the present to the histories.
func (r *run) note() error {
	ev, h := r.ev, &r.History
	s := ev.sums()
	local, arc := ev.Shares()
	h.Time = append(h.Time, ev.Time())
	h.RootThickness = append(h.RootThickness, ev.heat.Root().Thickness)
	h.Slip, h.Heave, h.Throw = append(h.Slip, s.slip), append(h.Heave, s.heave), append(h.Throw, s.throw)
	h.RootMassShare = append(h.RootMassShare, local)
	wide := ev.plan.ArcWidth > 0
	if wide {
		h.ArcMean, h.ArcMeanShare = append(h.ArcMean, ev.arcMean()), append(h.ArcMeanShare, arc)
	}
	for k := range r.Layers {
		l := &r.Layers[k]
		now, _ := ev.heat.Layer(l.Name)
		l.Thickness = append(l.Thickness, now.Thickness)
		if wide {
			l.ArcMean = append(l.ArcMean, ev.uncut(k)*(1-ev.gone(k)))
		}
	}
	for i := range r.Zones {
		if err := r.zone(&r.Zones[i], &ev.zones[i]); err != nil {
			return err
		}
	}
	return nil
}

// zone adds the present to a zone's history.
func (r *run) zone(h *ZoneHistory, z *acting) error {
	ev := r.ev
	h.Slip, h.Heave, h.Throw = append(h.Slip, z.slip), append(h.Heave, z.heave), append(h.Throw, z.throw)
	h.OmissionStratigraphic = append(h.OmissionStratigraphic, z.stratigraphic)
	h.OmissionVertical = append(h.OmissionVertical, z.vertical)
	h.PressureGap, h.Rate = append(h.PressureGap, z.gap), append(h.Rate, z.rate)
	var left float64
	for j, n := range z.Cuts {
		l, _ := ev.heat.Layer(n)
		left += l.Thickness
		h.Strips[j].Width = append(h.Strips[j].Width, z.strip(ev.uncut(ev.layerAt(n))))
	}
	h.Remaining = append(h.Remaining, left)
	h.UsedUp, h.Runaway, h.Holds = z.usedUp, z.runaway, z.holding
	if z.Drive != ForceBalance {
		return nil
	}
	var strength, tau, q, T float64
	if ev.acts(z) {
		var err error
		if strength, err = ev.StrengthOf(z.Name, StandardSlip); err != nil {
			return err
		}
		at, ok := ev.heat.Layer(ev.crosses(&z.Zone))
		if T = at.BaseT; !ok {
			T = ev.start.Surface.Temperature
		}
		tau = math.Exp(z.shear.now)
		q = tau * z.rate / z.Zone.Heave()
	}
	h.Force, h.Strength = append(h.Force, z.force), append(h.Strength, strength)
	h.Stress, h.Heating, h.T = append(h.Stress, tau), append(h.Heating, q), append(h.T, T)
	return nil
}

// finish says what came of it.
func (r *run) finish() {
	ev := r.ev
	if len(ev.zones) == 0 {
		return
	}
	r.Outcome, r.PlateFails = "window", ev.broken
	if r.LocalBeyond <= r.window {
		r.Outcome, r.Time = "excised", r.LocalBeyond
	}
	for i := range ev.zones {
		z, h := &ev.zones[i], &r.Zones[i]
		switch {
		case !math.IsInf(h.Runaway, 1):
			r.warn("zone %s runs away at %.4g Myr: it would slip faster than %.3g m/yr, at which it is held", z.Name, h.Runaway/myr, FastestSlip*365.25*86400)
		case !math.IsInf(h.Holds, 1) && z.slip == 0:
			r.warn("zone %s does not slip: at 3 m in 1000 Myr it would bear %.4g N/m already, and the driving force is %.4g N/m", z.Name, z.least, z.held)
		}
		if w := ev.plan.ArcWidth; w > 0 && z.heave > w*(1+1e-9) {
			r.warn("zone %s heaves %.4g km, more than the arc's width of %.4g km", z.Name, z.heave/1e3, w/1e3)
		}
	}
	if w := ev.plan.ArcWidth; w > 0 {
		if r.ExtensionDemanded = r.Heave / w; r.ExtensionDemanded > 1 {
			r.warn("the zones' heave of %.0f km is %.0f %% extension of an arc %.3g km wide", r.Heave/1e3, 100*r.ExtensionDemanded, w/1e3)
		}
	}
	r.Warnings = append(r.Warnings, ev.warnings...)
}

func (r *run) warn(format string, a ...any) {
	r.Warnings = append(r.Warnings, fmt.Sprintf(format, a...))
}
