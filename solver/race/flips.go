package race

import (
	"context"
	"fmt"
	"math"
	"slices"
)

// mostLayers is the number of layers up to which a run looks for what would change
// its verdict: every candidate is a drip time of its own.
const mostLayers = 60

// search is one quantity whose nearest change of the verdict is looked for. x is its
// distance from the value in use.
type search struct {
	flip   Flip                     // what is known before: keys, label, unit, value in use
	most   float64                  // largest |x|
	value  func(x float64) float64  // the quantity at x
	keys   func(x float64) []Change // what to set in the experiment for it
	change func(q *Problem, x float64)
}

// flips finds, for the numbers that matter most, the value nearest to the one in use
// at which the verdict changes, all else equal.
func (r *Result) flips(ctx context.Context, say func(string)) error {
	p, v := r.Problem, &r.Verdict
	if n := len(p.Column.Layers); n > mostLayers {
		r.Warnings = append(r.Warnings, fmt.Sprintf("what would change the verdict was not looked for: %d layers, and it is done up to %d", n, mostLayers))
		return ctx.Err()
	}
	near := r.Drip.Wavelength
	if near == 0 {
		near = r.Spectrum.Fastest.Wavelength
	}
	for _, s := range r.searches() {
		say("what would change the verdict: " + s.flip.Label)
		outcome := func(x float64) string {
			q := *p
			q.Column.Layers = slices.Clone(p.Column.Layers)
			q.Zones = slices.Clone(p.Zones)
			s.change(&q, x)
			return q.outcome(ctx, near, v.Outcome)
		}
		f := s.flip
		f.To, f.Keys = f.From, s.keys(0)
		if x, to := nearest(outcome, v.Outcome, s.most); to != "" {
			f.To, f.Found, f.Distance, f.Outcome, f.Keys = s.value(x), true, math.Abs(x), to, s.keys(x)
			if f.HasContrast {
				f.ContrastTo = f.ContrastFrom + perDensity*x
			}
			if f.Label == rootViscosity {
				v.MarginLog10Viscosity, v.MarginViscosityOutcome = x/math.Ln10, to
			}
		}
		v.Flips = append(v.Flips, f)
	}
	slices.SortStableFunc(v.Flips, func(a, b Flip) int {
		switch {
		case a.Found && (!b.Found || a.Distance < b.Distance):
			return -1
		case b.Found && (!a.Found || b.Distance < a.Distance):
			return 1
		}
		return 0
	})
	return ctx.Err()
}

// outcome returns the verdict's outcome of p; now, where p is not a column that can
// be run: no change there.
func (p *Problem) outcome(ctx context.Context, near float64, now string) string {
	s, err := Prepare(p)
	if err != nil {
		return now
	}
	t, err := p.dripTime(ctx, s, near)
	if err != nil {
		return now
	}
	x, err := Excise(p, s)
	if err != nil {
		return now
	}
	return judge(t, x, p.Share(), p.Drip.Window).outcome
}
