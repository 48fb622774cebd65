package drip

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"sync"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// problem is one root whose drip times are asked.
type problem struct {
	solver      *growth.Solver
	set         Settings
	first, last int     // root layers
	base        int     // interface below the lowest root layer
	thickness   float64 // of the root, m
	stop        float64 // m: descent that counts as a drip
	workers     int
	points      []*Frozen // by increasing wavelength
}

func (p *problem) frozen(s *growth.Solver, wavelength float64) (*Frozen, error) {
	sys, err := s.System(wavelength)
	if err != nil {
		return nil, err
	}
	return NewFrozen(sys, p.base)
}

// curve follows wavelengths between from and to on all cores; worker w owns its
// slots, so the result does not depend on how many there are.
func (p *problem) curve(ctx context.Context, from, to float64, perOctave int) error {
	n := int(math.Ceil(float64(perOctave)*math.Log2(to/from))) + 1
	n = max(n, 2)
	p.points = make([]*Frozen, n)
	workers := p.workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			for i := w; i < n && errs[w] == nil; i += workers {
				if errs[w] = ctx.Err(); errs[w] != nil {
					return
				}
				p.points[i], errs[w] = p.frozen(p.solver, from*math.Pow(to/from, float64(i)/float64(n-1)))
			}
		})
	}
	wg.Wait()
	return errors.Join(errs...)
}

// time returns when wavelength f drips from m times its amplitude; +Inf without one.
func (p *problem) time(f *Frozen, m float64) float64 {
	a := m * p.set.Start(f.Wavelength, p.stop/m)
	if a == 0 {
		return math.Inf(1)
	}
	return f.Time(p.stop/a, Horizon)
}

func (p *problem) curveOf() Curve {
	var c Curve
	for _, f := range p.points {
		c.Wavelength = append(c.Wavelength, f.Wavelength)
		c.Time = append(c.Time, p.time(f, 1))
		c.Low = append(c.Low, p.time(f, 3))
		c.High = append(c.High, p.time(f, 1.0/3))
	}
	return c
}

// newProblem checks the settings and lays out the root of s.
func newProblem(s *state.State, set Settings, workers int) (*problem, error) {
	first, last, ok := s.Column.RootSpan()
	if !ok {
		return nil, ErrNoRoot
	}
	thickness := s.Column.RootThickness()
	if err := set.check(thickness); err != nil {
		return nil, err
	}
	p := &problem{set: set, stop: set.Criterion * thickness, first: first, last: last,
		base: last + 1, thickness: thickness, workers: workers}
	var err error
	p.solver, err = growth.NewSolver(Model(s), 0)
	return p, err
}

// check refuses settings that mean nothing for a root so thick, m.
func (set *Settings) check(thickness float64) error {
	if err := set.Rough.check(); err != nil {
		return err
	}
	a := set.Least()
	switch {
	case !(a > 0) || math.IsInf(a, 0):
		return fmt.Errorf("drip: amplitude %g m; must be positive", a)
	case !(set.Criterion > 0):
		return fmt.Errorf("drip: criterion %g; must be positive", set.Criterion)
	case !(set.Window > 0):
		return fmt.Errorf("drip: window %g s; must be positive", set.Window)
	case set.Dripped(set.Criterion * thickness):
		return fmt.Errorf("drip: an amplitude of %.4g m already is the drip: %g × the root's %.4g m", a, set.Criterion, thickness)
	}
	return nil
}

// spacing returns the range of wavelengths around the first drip's whose own drips
// come within 10 % of its time, interpolated in ln λ.
func (p *problem) spacing(t, wavelength, limit float64) (from, to float64) {
	var list []Fastest
	for _, f := range p.points {
		list = append(list, Fastest{p.time(f, 1), f.Wavelength})
	}
	return around(list, t, wavelength, limit)
}

// around is spacing in a list by increasing wavelength.
func around(list []Fastest, t, wavelength, limit float64) (from, to float64) {
	target := 1.1 * t
	from, to = wavelength, wavelength
	last := Fastest{t, wavelength}
	for i := len(list) - 1; i >= 0; i-- {
		f := list[i]
		if f.Wavelength >= wavelength {
			continue
		}
		if f.Time > target {
			from = between(last.Wavelength, last.Time, f.Wavelength, f.Time, target)
			break
		}
		from, last = f.Wavelength, f
	}
	last = Fastest{t, wavelength}
	for _, f := range list {
		if f.Wavelength <= wavelength {
			continue
		}
		if f.Wavelength > limit {
			to = math.Max(to, math.Min(limit, f.Wavelength))
			break
		}
		if f.Time > target {
			to = between(last.Wavelength, last.Time, f.Wavelength, f.Time, target)
			break
		}
		to, last = f.Wavelength, f
	}
	return from, to
}

func between(w0, t0, w1, t1, t float64) float64 {
	if math.IsInf(t1, 1) || t1 == t0 {
		return w0
	}
	return w0 * math.Pow(w1/w0, (t-t0)/(t1-t0))
}

// undulation is one that is followed in a column that does not change.
type undulation interface {
	Base(t float64) float64     // displacement of the root's base at t in s, for a unit undulation at the start
	States(t float64) []float64 // of growth.System then, as far as they drive the flow
}

// finish adds the history, the leading mode and the strain rates of the first drip, which
// is w.
func (p *problem) finish(r *Result, w answered) (err error) {
	f := w.undulation
	if r.Mode, err = w.solver.Mode(r.Wavelength); err != nil {
		return err
	}
	r.Rate = r.Mode.Growth
	a := p.set.AmplitudeAt(r.Wavelength)
	const n = 200
	for i := 0; i <= n; i++ {
		t := r.Time * float64(i) / n
		r.History.Time = append(r.History.Time, t)
		r.History.Base = append(r.History.Base, a*math.Abs(f.Base(t)))
	}
	if r.First, err = p.firstTrace(w, a, r); err != nil {
		return err
	}
	if d := math.Abs(r.Mode.Displacement[p.base]); d > 0 {
		for i := p.first; i <= p.last; i++ {
			perMetre := r.Mode.StrainRate[i] / d
			r.StrainRate = math.Max(r.StrainRate, perMetre*a)
			r.StrainRateEnd = math.Max(r.StrainRateEnd, perMetre*p.set.Criterion*p.thickness)
		}
	}
	return nil
}
