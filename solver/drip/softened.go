package drip

import (
	"context"
	"errors"
	"fmt"
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/state"
)

// SelfSoftened is a drip whose own strain rate softens its rock, in a column that nothing
// strains and that does not change.
type SelfSoftened struct {
	Slow       float64 // s: the closure's own time, a slow bound where one n holds everywhere
	Best       float64 // s: Slow with the closure's known shortfall and the finite amplitude put right
	BestLow    float64 // s, by what the correction for finite amplitude may be wrong
	BestHigh   float64
	Exponent   float64 // n weighted with dissipation, averaged over the time
	Correction Correction
	// Strained says that a background strains the column: the correction is then
	// interpolated between what is known of a background alone, of equal strain rates and
	// of none. Correction is that at the drip.
	Strained bool
	Failed   int // wavelengths whose viscosities did not settle, and which are left out
}

// Newtonian says whether a rock's viscosity does not depend on strain rate at all: nothing
// softens it, exactly.
func Newtonian(r *column.Rock) bool {
	c := r.Viscosity.Creep
	if c == nil {
		return r.Viscosity.Exponent == 1
	}
	linear := r.Friction == nil && r.Piezometer == nil && len(c.Mixtures) == 0
	for i := range c.Laws {
		linear = linear && c.Laws[i].N == 1 && c.Laws[i].Peierls == rheology.Peierls{}
	}
	return linear
}

// newtonian says so of a whole column.
func newtonian(s *state.State) bool {
	c := s.Column
	all := c.Base.Boundary != column.HalfSpace || Newtonian(&c.Base.Rock)
	for i := range c.Layers {
		all = all && Newtonian(&c.Layers[i].Rock)
	}
	return all
}

// softMargin is how many times longer than the quickest so far an undulation is followed:
// what takes longer cannot win, nor lie within the 10 % of the spacing.
const softMargin = 1.3

// softened is r, or what the closure makes of it where it is asked for.
func (p *problem) softened(ctx context.Context, s *state.State, set Settings, o Options, r *Result) (*Result, error) {
	if set.Softening != "self" || newtonian(s) {
		return r, nil
	}
	return r, p.soften(ctx, s, set, o, r)
}

// soften replaces the linear answer of r by that of the closure.
func (p *problem) soften(ctx context.Context, s *state.State, set Settings, o Options, r *Result) error {
	f, err := NewSoft(s, Background{})
	if err != nil {
		return err
	}
	run := softSearch{soft: f, set: set, stop: set.Criterion * p.thickness, depth: p.thickness, horizon: o.horizon()}
	from, to := p.points[0].Wavelength, p.points[len(p.points)-1].Wavelength
	limit := math.Inf(1)
	if o.Limit > 0 {
		limit = o.Limit
	}
	from, to = set.within(from, math.Min(to, math.Max(limit, from)))
	best, err := run.search(ctx, from, to, 6)
	if err != nil {
		return err
	}
	r.Soft = &SelfSoftened{Slow: math.Inf(1), Best: math.Inf(1), BestLow: math.Inf(1), BestHigh: math.Inf(1), Failed: run.failed}
	r.Time, r.TimeLow, r.TimeHigh = math.Inf(1), math.Inf(1), math.Inf(1)
	r.Mode, r.StrainRate, r.StrainRateEnd, r.Rate = nil, 0, 0, 0 // of viscosities at one strain rate
	r.Excluded, r.Unrestricted = "", Fastest{Time: math.Inf(1)}
	r.Curve, r.History, r.Traces, r.First = Curve{}, Amplitude{}, nil, Trace{}
	for _, d := range run.list {
		r.Curve.Wavelength = append(r.Curve.Wavelength, d.Wavelength)
		r.Curve.Time = append(r.Curve.Time, run.best(d)) // other amplitudes are not followed
	}
	if math.IsInf(best.Time, 1) {
		r.Outcome, r.Reason = "window", "does not drip in 1e5 Myr by its own softening, though the root is "+Weigh(-s.Jumps[p.base])
		if run.ended != "" {
			r.Reason = "does not drip: at " + run.ended
		}
		if contrast := -s.Jumps[p.base]; contrast <= 0 {
			r.Outcome, r.Reason = never(contrast, r.Unrestricted, o)
		}
		return nil
	}
	c := run.correction(best)
	r.Soft.Slow, r.Soft.Exponent, r.Soft.Correction = best.Time, best.Exponent, c
	r.Soft.Best, r.Soft.BestLow, r.Soft.BestHigh = best.Best*c.Finite, best.Best*c.FiniteLow, best.Best*c.FiniteHigh
	r.Time, r.Wavelength, r.InitialWavelength = r.Soft.Best, best.Wavelength, best.Wavelength
	for i, a := range []float64{3, 1.0 / 3} {
		t := 0.0 // three times the undulation may be the drip itself
		if from := a * set.AmplitudeAt(best.Wavelength); from < run.stop {
			d, err := f.Time(2*math.Pi/best.Wavelength, from, run.stop, Horizon)
			if err != nil {
				return err
			}
			t = d.Best * Corrections(d.Exponent, 2*math.Pi/best.Wavelength*p.thickness, from/p.thickness).Finite
		}
		if i == 0 {
			r.TimeLow = t
		} else {
			r.TimeHigh = t
		}
	}
	r.Outcome, r.Reason = "drips", "the root is "+Weigh(-s.Jumps[p.base])
	if r.Time > set.Window {
		r.Outcome, r.Reason = "window", "it would drip, but only after the window has closed"
	}
	r.History = Amplitude{Base: best.Base}
	for _, t := range best.At { // so that it ends at the best estimate
		r.History.Time = append(r.History.Time, t*r.Soft.Best/r.Soft.Slow)
	}
	r.Traces, r.First = run.traces(r.Soft.Best/r.Soft.Slow), run.trace(best, r.Soft.Best/r.Soft.Slow)
	r.SpacingFrom, r.SpacingTo = best.Wavelength, best.Wavelength
	for _, d := range run.list {
		if run.best(d) <= 1.1*r.Time {
			r.SpacingFrom, r.SpacingTo = math.Min(r.SpacingFrom, d.Wavelength), math.Max(r.SpacingTo, d.Wavelength)
		}
	}
	return nil
}

// SoftenedTime returns only the best estimate of the drip time in s, +Inf where nothing
// drips: Solve's with Softening "self", good to about a tenth of a per cent. o.Near is a
// wavelength in m to look around.
func SoftenedTime(ctx context.Context, s *state.State, set Settings, o Options) (float64, error) {
	p, err := newProblem(s, set, o.Workers)
	if err != nil {
		return 0, err
	}
	f, err := NewSoft(s, Background{})
	if err != nil {
		return 0, err
	}
	run := softSearch{soft: f, set: set, stop: set.Criterion * p.thickness, depth: p.thickness, horizon: o.horizon()}
	from, to := p.solver.Range()
	if o.From > 0 {
		from = o.From
	}
	if o.To > 0 {
		to = math.Max(o.To, 1.01*from)
	}
	if o.Limit > 0 {
		to = math.Min(to, math.Max(o.Limit, from))
	}
	from, to = set.within(from, to)
	if o.Near > 0 {
		return run.around(ctx, o.Near, from, to)
	}
	best, err := run.search(ctx, from, to, 4)
	if err != nil {
		return 0, err
	}
	return run.best(best), nil
}

// softSearch looks for the quickest wavelength.
type softSearch struct {
	soft        *Soft
	set         Settings
	stop, depth float64 // m: where it has dripped; thickness of the root
	list        []Descent
	failed      int
	ended       string
	horizon     float64 // s: of the closure's own time
}

// correction is that of a descent.
func (q *softSearch) correction(d Descent) Correction {
	return Corrections(d.Exponent, 2*math.Pi/d.Wavelength*q.depth, q.set.AmplitudeAt(d.Wavelength)/q.depth)
}

// best is the best estimate of a descent's time, s.
func (q *softSearch) best(d Descent) float64 {
	if math.IsInf(d.Time, 1) {
		return d.Time
	}
	return d.Best * q.correction(d).Finite
}

// search follows wavelengths between from and to and refines the quickest to 1 %.
func (q *softSearch) search(ctx context.Context, from, to float64, perOctave int) (Descent, error) {
	n := max(3, int(math.Ceil(float64(perOctave)*math.Log2(to/from)))+1)
	q.list = make([]Descent, n)
	quickest, at := math.Inf(1), -1
	// the middle goes first: what is slow beside it is soon given up
	for j := range n {
		i := (n/2 + (j+1)/2*(1-2*(j%2)) + n) % n
		d, err := q.follow(ctx, from*math.Pow(to/from, float64(i)/float64(n-1)), quickest)
		if err != nil {
			return d, err
		}
		q.list[i] = d
		if d.Time < quickest {
			quickest, at = d.Time, i
		}
	}
	if at < 0 {
		if q.failed == n {
			return Descent{}, errors.New("drip: the viscosities of a root that softens itself settle at no wavelength")
		}
		return Descent{Time: math.Inf(1), Best: math.Inf(1)}, nil
	}
	found := q.list[at]
	a, b := q.list[max(at-1, 0)].Wavelength, q.list[min(at+1, n-1)].Wavelength
	_, _ = minimum(func(x float64) float64 {
		d, err := q.follow(ctx, math.Exp(x), quickest)
		if err == nil && d.Time < found.Time {
			found = d
		}
		return d.Time
	}, math.Log(a), math.Log(b), 1e-2)
	return found, ctx.Err()
}

// follow follows one wavelength; what does not settle is left out and counted.
func (q *softSearch) follow(ctx context.Context, wavelength, quickest float64) (Descent, error) {
	limit := math.Min(q.horizon, softMargin*quickest)
	from := q.set.Start(wavelength, q.stop)
	if from == 0 { // no undulation
		return Descent{Wavelength: wavelength, Time: math.Inf(1), Best: math.Inf(1)}, ctx.Err()
	}
	d, err := q.soft.Time(2*math.Pi/wavelength, from, q.stop, limit)
	if err := ctx.Err(); err != nil {
		return d, err
	}
	d.Wavelength = wavelength
	d.Dropped = limit < q.horizon && math.IsInf(d.Time, 1)
	if err != nil {
		q.failed++
		d.Time, d.Best = math.Inf(1), math.Inf(1)
	}
	if d.Ended != "" {
		q.ended = fmt.Sprintf("%.3g km: %s", wavelength/1e3, d.Ended)
	}
	return d, nil
}
