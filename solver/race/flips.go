package race

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"keelfall/solver/excision"
	"keelfall/solver/state"
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
	zones  bool // it changes zones alone: in a column that stands still, not when the root drips
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
	list := r.searches()
	found := make([]Flip, len(list))
	workers := p.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	var next atomic.Int64
	var lock sync.Mutex
	var all sync.WaitGroup
	for range min(workers, len(list)) { // every search has a slot of its own
		all.Go(func() {
			for i := int(next.Add(1)) - 1; i < len(list); i = int(next.Add(1)) - 1 {
				lock.Lock()
				say("what would change the verdict: " + list[i].flip.Label)
				lock.Unlock()
				found[i] = r.flip(ctx, &list[i], near)
			}
		})
	}
	all.Wait()
	for i, f := range found {
		v.Flips = append(v.Flips, f)
		if f.Found && list[i].flip.Label == rootViscosity {
			v.MarginLog10Viscosity, v.MarginViscosityOutcome = f.at/math.Ln10, f.Outcome
		}
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

// flip looks for the nearest change of the verdict along one search, on one core.
func (r *Result) flip(ctx context.Context, s *search, near float64) Flip {
	p, now := r.Problem, r.Verdict.Outcome
	at := func(x float64, drip func(*Problem, *state.State) (float64, error)) trial {
		q := *p
		q.Workers = 1
		q.Column.Layers = slices.Clone(p.Column.Layers)
		q.Zones = slices.Clone(p.Zones)
		s.change(&q, x)
		return q.outcome(ctx, now, func(st *state.State) (float64, error) {
			if s.zones && !p.Moving() {
				return r.Drip.Time, nil
			}
			return drip(&q, st)
		})
	}
	look := func(x float64) trial {
		return at(x, func(q *Problem, st *state.State) (float64, error) {
			return q.dripTime(ctx, st, near, 3*q.Drip.Window) // further, the time of a drip guides no search
		})
	}
	whole := func(x float64) string {
		return at(x, func(q *Problem, st *state.State) (float64, error) {
			d, err := Drip(ctx, q, st)
			if err != nil {
				return 0, err
			}
			return d.Time, nil
		}).outcome
	}
	f := s.flip
	f.To, f.Keys = f.From, s.keys(0)
	if x, to := nearest(look, trial{now, math.Log(r.Drip.Time / until(r.Excision, p.Drip.Window))}, s.most); to != "" {
		if !p.Moving() { // the quick time may miss the whole answer's by a little
			x, to = confirmed(whole, x, now, to)
		}
		f.To, f.Found, f.Distance, f.Outcome, f.Keys, f.at = s.value(x), true, math.Abs(x), to, s.keys(x), x
		if f.HasContrast {
			f.ContrastTo = f.ContrastFrom + perDensity*x
		}
	}
	return f
}

// confirmed moves a change found at x outwards until the whole computation has another
// outcome than now as well: by nearestWidth at first, then twice as far each time.
func confirmed(whole func(x float64) string, x float64, now, to string) (float64, string) {
	for step := nearestWidth; step < 0.2; step *= 2 {
		if there := whole(x); there != now {
			return x, there
		}
		x += math.Copysign(step, x)
	}
	return x, to
}

// until is when something other than a drip decides, s.
func until(x *excision.Result, window float64) float64 { return math.Min(window, x.Time) }

// outcome returns the verdict's outcome of p; now, where p is not a column that can
// be run: no change there.
func (p *Problem) outcome(ctx context.Context, now string, drip func(*state.State) (float64, error)) trial {
	none := trial{now, math.Inf(1)}
	s, err := Prepare(p)
	if err != nil {
		return none
	}
	t, err := drip(s)
	if err != nil {
		return none
	}
	x, err := Excise(p, s)
	if err != nil {
		return none
	}
	return trial{judge(t, x, p.Share(), p.Drip.Window).outcome, math.Log(t / until(x, p.Drip.Window))}
}
