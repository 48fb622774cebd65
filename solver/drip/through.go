package drip

import (
	"context"
	"fmt"
	"math"
)

// Event is one drip of a root that changes with time.
type Event struct {
	Time            float64 // s
	Wavelength      float64 // m, at the drip
	Initial         float64 // m, when its undulation began
	Lost            float64 // thickness that goes, m
	Depth           float64 // of the root's base just before, m
	BaseTemperature float64 // there, K; 0 without temperature
}

// through is a root followed through time.
type through struct {
	plan   Plan
	set    Settings
	o      Options
	tape   *tape
	course *course
	grid   *group
	traced bool // the grid's followers keep traces
}

// Through returns when the root of a column that changes with time drips, and again
// after that, to the end of the window. Where nothing drips in it, the first drip is looked
// for up to twice the window: Time and the curve's times are +Inf where none comes. An undulation of the first
// amplitude begins at time 0 on the root's base, all other interfaces flat, and anew
// after every drip; a drip takes set.Removes of the root's mass then, from its base.
//
// The displacements obey dξ/dt = A(k, t) ξ with A of the column at t and k moving with
// the stretch. They are carried by exp(h A₁/2) exp(h A₀/2) over pairs of steps, held
// against one of twice the length, whose difference sets the steps and gives Richardson's
// fourth order. Options.Limit is held against the wavelength at the drip. Curve and
// spacing have the wavelengths at the start.
func Through(ctx context.Context, p Plan, set Settings, o Options) (*Result, error) {
	if set.Softening == "self" {
		return throughSoft(ctx, p, set, o)
	}
	d, err := newThrough(ctx, p, set, o)
	if err != nil {
		return nil, err
	}
	r := &Result{Outcome: "window", Time: math.Inf(1), TimeLow: math.Inf(1), TimeHigh: math.Inf(1), Unrestricted: Fastest{Time: math.Inf(1)}}
	from, to := d.span()
	d.traced = true
	if err := d.follow(ctx, from, to, 10, -1); err != nil {
		return nil, err
	}
	d.traced = false
	if err := d.beyond(ctx); err != nil {
		return nil, err
	}
	for _, f := range d.grid.list {
		r.Traces = append(r.Traces, d.traceOf(f))
		r.Curve.Wavelength = append(r.Curve.Wavelength, f.first)
		r.Curve.Low = append(r.Curve.Low, f.times[0])
		r.Curve.Time = append(r.Curve.Time, f.times[1])
		r.Curve.High = append(r.Curve.High, f.times[2])
	}
	if err := d.answer(ctx, r); err != nil {
		return nil, err
	}
	if err := d.warm(ctx, r); err != nil {
		return nil, err
	}
	if math.IsInf(r.Time, 1) {
		return r, nil
	}
	return r, d.drips(ctx, r)
}

// beyond goes on to twice the window where nothing within the limit has dripped in it.
func (d *through) beyond(ctx context.Context) error {
	for _, f := range d.grid.list {
		if t := f.times[1]; !math.IsInf(t, 1) && f.first*d.stretched(t) <= d.limit() {
			return nil
		}
	}
	d.grid.stopAt = 1
	return d.to(ctx, 2*d.set.Window)
}

// ThroughTime returns only the first drip's time in s, +Inf where none comes in twice the
// window: a quicker Through for searches. With o.Near only wavelengths within a
// factor of two of that are looked at.
func ThroughTime(ctx context.Context, p Plan, set Settings, o Options) (float64, error) {
	if set.Softening == "self" {
		return throughSoftTime(ctx, p, set, o)
	}
	d, err := newThrough(ctx, p, set, o)
	if err != nil {
		return 0, err
	}
	from, to := d.span()
	if o.Near > 0 {
		near := math.Max(from, math.Min(to, o.Near))
		from, to = math.Max(from, near/2), math.Min(to, near*2)
	}
	if err := d.follow(ctx, from, math.Max(to, 1.01*from), 4, 1); err != nil {
		return 0, err
	}
	if err := d.beyond(ctx); err != nil {
		return 0, err
	}
	best, err := d.best(ctx, 1, d.limit(), 2e-2)
	return best.Time, err
}

func newThrough(ctx context.Context, p Plan, set Settings, o Options) (*through, error) {
	t, err := newTape(p.Begin)
	if err != nil {
		return nil, err
	}
	d := &through{plan: p, set: set, o: o, tape: t}
	if !(set.Window > 0) {
		return nil, fmt.Errorf("drip: window %g s; must be positive", set.Window)
	}
	return d, d.restart()
}

// restart begins a course where the tape is.
func (d *through) restart() error {
	var err error
	if d.course, err = newCourse(d.plan, d.tape, d.set.Window); err != nil {
		return err
	}
	if d.course.first.lay.rootBase < 0 {
		return ErrNoRoot
	}
	return d.set.check(d.course.first.root)
}

// span is the range of wavelengths asked for, or that of a spectrum.
func (d *through) span() (from, to float64) {
	from, to = d.course.first.form.Range()
	if d.o.From > 0 {
		from = d.o.From
	}
	if d.o.To > 0 {
		to = d.o.To
	}
	from, to = d.set.within(from, to)
	return from, math.Max(to, 1.01*from)
}

func (d *through) limit() float64 {
	if d.o.Limit > 0 {
		return d.o.Limit
	}
	return math.Inf(1)
}

// follow extends the course to the window's end with a grid of wavelengths; with
// stopAt 0 to 2 it ends when one within the limit drips from that amplitude.
func (d *through) follow(ctx context.Context, from, to float64, perOctave, stopAt int) error {
	n := max(2, int(math.Ceil(float64(perOctave)*math.Log2(to/from)))+1)
	list := make([]float64, n)
	for i := range list {
		list[i] = from * math.Pow(to/from, float64(i)/float64(n-1))
	}
	var err error
	if d.grid, err = newGroup(d.course, d.set, list, d.o.Workers); err != nil {
		return err
	}
	d.grid.stopAt, d.grid.limit = stopAt, d.limit()
	for _, f := range d.grid.list {
		if d.traced && f.size > 0 {
			f.trace, f.every = &Trace{}, traceSpan*d.course.span
			f.note(d.grid, d.course.first, 0)
		}
	}
	return d.to(ctx, d.set.Window)
}

// to extends the course until the grid is done or a time in s is reached.
func (d *through) to(ctx context.Context, end float64) error {
	for d.course.last().t < end*(1-1e-12) && d.course.last().lay.rootBase >= 0 && !d.grid.finished() {
		if err := d.course.extend(ctx, d.grid, end); err == errRootGone {
			break
		} else if err != nil {
			return err
		}
	}
	return nil
}
