// Package drip follows undulations of the root's base until they drip.
//
// In this version the column is frozen: temperature, viscosity and thickness stay as
// they are at the start, rock is Newtonian at its reference viscosity, and the linear
// theory is carried to a full drip. An undulation of amplitude a₀ on the base of the
// lowest root layer, all other interfaces flat, obeys dξ/dt = A(k) ξ with the matrix
// of package growth; it has dripped when it has descended by criterion × root
// thickness. Every wavelength is followed; the first to drip is the answer.
//
// Linear theory extrapolated to a full drip is about 10 % slow for Newtonian rock
// (ratio 0.89 to 0.93 against two-dimensional solutions, derived), and a power-law
// root softens itself, which is not in this version.
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

// Settings say what counts as a drip.
type Settings struct {
	Amplitude float64 // a₀ on the base of the lowest root layer, m, > 0
	Criterion float64 // drip when the tip has descended by Criterion × root thickness
	Window    float64 // s, > 0
	Removes   float64 // share of the root's mass one drip takes
	Spectrum  string  // "white": a₀ the same at all wavelengths
	Softening string  // "none" in this version
}

// Options of a drip computation.
type Options struct {
	From, To float64 // wavelengths, m; 0: chosen as for a spectrum
	Limit    float64 // m: longer wavelengths are computed but not the answer; 0: no limit
	LimitIs  string  // what the limit is, in words: "the arc's width, 160 km"
	Near     float64 // m: for Time, a wavelength to look around; 0: the whole range
	Workers  int     // 0: as many as there are cores
}

// Curve is the drip time at every wavelength.
type Curve struct {
	Wavelength []float64 // m
	Time       []float64 // s; +Inf where it never drips
	Low, High  []float64 // s, for the amplitude × 3 and ÷ 3
}

// Result is the answer to: when does the root drip?
type Result struct {
	Outcome           string  // "drips", "window" (it would, but later) or "buoyant" (it never does)
	Time              float64 // s; +Inf where never
	Wavelength        float64 // m, of the first drip
	InitialWavelength float64 // m
	TimeLow, TimeHigh float64 // s, for the amplitude × 3 and ÷ 3, each at its own best wavelength
	SpacingFrom       float64 // m: wavelengths whose drips would follow within 10 % of the time
	SpacingTo         float64
	Rate              float64 // 1/s, leading growth rate at the drip's wavelength
	StrainRate        float64 // 1/s, largest second invariant in the root at the start (amplitude a₀)
	StrainRateEnd     float64 // 1/s, the same at the drip
	Unrestricted      Fastest // the same without the limit on wavelength
	Curve             Curve
	History           Amplitude // of the first drip
	Excluded          string    // wavelengths that were computed and not used, in words
	Reason            string
	Warnings          []string
	Mode              *growth.Mode // leading mode at the drip's wavelength; nil where nothing drips
}

// Fastest is a drip time and its wavelength.
type Fastest struct{ Time, Wavelength float64 }

// Amplitude is one wavelength's amplitude against time.
type Amplitude struct {
	Time []float64 // s
	Base []float64 // |displacement| of the root's base, m
}

// ErrNoRoot says that no layer is marked as root.
var ErrNoRoot = errors.New("drip: no layer is marked as root")

// newProblem checks the settings and lays out the root of s.
func newProblem(s *state.State, set Settings, workers int) (*problem, error) {
	first, last, ok := s.Column.RootSpan()
	if !ok {
		return nil, ErrNoRoot
	}
	var thickness float64
	for i := first; i <= last; i++ {
		thickness += s.Column.Layers[i].Thickness
	}
	switch {
	case !(set.Amplitude > 0) || math.IsInf(set.Amplitude, 0):
		return nil, fmt.Errorf("drip: amplitude %g m; must be positive", set.Amplitude)
	case !(set.Criterion > 0):
		return nil, fmt.Errorf("drip: criterion %g; must be positive", set.Criterion)
	case !(set.Window > 0):
		return nil, fmt.Errorf("drip: window %g s; must be positive", set.Window)
	case set.Amplitude >= set.Criterion*thickness:
		return nil, fmt.Errorf("drip: an amplitude of %.4g m already is the drip: %g × the root's %.4g m", set.Amplitude, set.Criterion, thickness)
	}
	p := &problem{set: set, ratio: set.Criterion * thickness / set.Amplitude, first: first, last: last,
		base: last + 1, thickness: thickness, horizon: 1000 * set.Window, workers: workers}
	var err error
	p.solver, err = growth.NewSolver(Model(s), 0)
	return p, err
}

// Time returns only the drip time in s of the root of s, +Inf where it never drips:
// a quicker Solve for searches. With o.Near it follows wavelengths within a factor
// of four of that.
func Time(ctx context.Context, s *state.State, set Settings, o Options) (float64, error) {
	p, err := newProblem(s, set, o.Workers)
	if err != nil {
		return 0, err
	}
	from, to := p.solver.Range()
	perOctave := 10
	if o.Near > 0 {
		from, to, perOctave = o.Near/4, o.Near*4, 5
	}
	if o.From > 0 {
		from = math.Max(from, o.From)
	}
	if o.To > 0 {
		to = math.Min(to, o.To)
	}
	if err := p.curve(ctx, from, math.Max(to, 1.01*from), perOctave); err != nil {
		return 0, err
	}
	limit := math.Inf(1)
	if o.Limit > 0 {
		limit = o.Limit
	}
	best, err := p.best(set.Amplitude, limit, 2e-3) // a time is good to about the square of that
	return best.Time, err
}

// Solve returns when the root of s drips.
func Solve(ctx context.Context, s *state.State, set Settings, o Options) (*Result, error) {
	p, err := newProblem(s, set, o.Workers)
	if err != nil {
		return nil, err
	}
	const fine = 1e-5
	r := &Result{Outcome: "buoyant", Time: math.Inf(1), TimeLow: math.Inf(1), TimeHigh: math.Inf(1),
		Unrestricted: Fastest{Time: math.Inf(1)}}
	from, to := p.solver.Range()
	if o.From > 0 {
		from = o.From
	}
	if o.To > 0 {
		to = o.To
	}
	if err := p.curve(ctx, from, math.Max(to, 1.01*from), 10); err != nil {
		return nil, err
	}
	r.Curve = p.curveOf()
	limit := math.Inf(1)
	if o.Limit > 0 {
		limit = o.Limit
	}
	best, err := p.best(set.Amplitude, limit, fine)
	if err != nil {
		return nil, err
	}
	if r.Unrestricted, err = p.best(set.Amplitude, math.Inf(1), fine); err != nil {
		return nil, err
	}
	contrast := s.Jumps[p.base]
	if math.IsInf(best.Time, 1) {
		r.Reason = why(contrast, r.Unrestricted, o)
		return r, nil
	}
	r.Time, r.Wavelength, r.InitialWavelength = best.Time, best.Wavelength, best.Wavelength
	for i, a := range []float64{3, 1.0 / 3} {
		b, err := p.best(set.Amplitude*a, limit, fine)
		if err != nil {
			return nil, err
		}
		if i == 0 {
			r.TimeLow = b.Time
		} else {
			r.TimeHigh = b.Time
		}
	}
	r.Outcome = "drips"
	r.Reason = fmt.Sprintf("the root is %.0f kg/m³ denser than what lies below it", -contrast)
	if r.Time > set.Window {
		r.Outcome = "window"
		r.Reason = "it would drip, but only after the window has closed"
	}
	if o.Limit > 0 && r.Unrestricted.Time < 0.99*r.Time {
		r.Excluded = fmt.Sprintf("wavelengths beyond %s were computed and not used; the fastest of them is %.0f km", o.LimitIs, r.Unrestricted.Wavelength/1e3)
	}
	r.SpacingFrom, r.SpacingTo = p.spacing(r.Time, r.Wavelength, limit)
	return r, p.finish(r)
}

// why says in words why nothing drips.
func why(contrast float64, free Fastest, o Options) string {
	switch {
	case contrast >= 0:
		return fmt.Sprintf("never drips: the root is buoyant on what lies below it, contrast %+.0f kg/m³", -contrast)
	case !math.IsInf(free.Time, 1):
		return fmt.Sprintf("no wavelength within %s drips", o.LimitIs)
	}
	return "never drips: no wavelength takes the root's base down by the criterion"
}

// problem is one root whose drip times are asked.
type problem struct {
	solver      *growth.Solver
	set         Settings
	first, last int     // root layers
	base        int     // interface below the lowest root layer
	thickness   float64 // of the root, m
	ratio       float64 // criterion × thickness / amplitude
	horizon     float64 // s, how far ahead a drip is looked for
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

// time returns when wavelength f drips from an amplitude a.
func (p *problem) time(f *Frozen, a float64) float64 {
	return f.Time(p.ratio*p.set.Amplitude/a, p.horizon)
}

func (p *problem) curveOf() Curve {
	var c Curve
	for _, f := range p.points {
		c.Wavelength = append(c.Wavelength, f.Wavelength)
		c.Time = append(c.Time, p.time(f, p.set.Amplitude))
		c.Low = append(c.Low, p.time(f, 3*p.set.Amplitude))
		c.High = append(c.High, p.time(f, p.set.Amplitude/3))
	}
	return c
}

// best returns the first drip from an amplitude a among wavelengths up to limit,
// refined by golden sections to a relative width of its wavelength.
func (p *problem) best(a, limit, width float64) (Fastest, error) {
	best, at := Fastest{Time: math.Inf(1)}, -1
	for i, f := range p.points {
		if f.Wavelength > limit {
			break
		}
		if t := p.time(f, a); t < best.Time {
			best, at = Fastest{t, f.Wavelength}, i
		}
	}
	lo, hi := p.points[0].Wavelength, limit
	if at >= 0 {
		lo = p.points[max(at-1, 0)].Wavelength
		hi = math.Min(limit, p.points[min(at+1, len(p.points)-1)].Wavelength)
	} else if hi = math.Min(hi, p.points[len(p.points)-1].Wavelength); limit < lo {
		lo = limit // the arc is narrower than the range: its own width is the one candidate
	}
	var fail error
	eval := func(x float64) float64 {
		f, err := p.frozen(p.solver, math.Exp(x))
		if err != nil {
			fail = err
			return math.Inf(1)
		}
		return p.time(f, a)
	}
	x0, x3 := math.Log(lo), math.Log(hi)
	if t := eval(x3); t < best.Time { // the limit itself, between two points
		best = Fastest{t, hi}
	}
	if at < 0 {
		return best, fail
	}
	const ratio = 0.6180339887498949
	x1, x2 := x3-ratio*(x3-x0), x0+ratio*(x3-x0)
	f1, f2 := eval(x1), eval(x2)
	for x3-x0 > width && fail == nil {
		if f1 < f2 {
			x3, x2, f2 = x2, x1, f1
			x1 = x3 - ratio*(x3-x0)
			f1 = eval(x1)
		} else {
			x0, x1, f1 = x1, x2, f2
			x2 = x0 + ratio*(x3-x0)
			f2 = eval(x2)
		}
	}
	for _, c := range []Fastest{{f1, math.Exp(x1)}, {f2, math.Exp(x2)}} {
		if c.Time < best.Time {
			best = c
		}
	}
	return best, fail
}

// spacing returns the range of wavelengths around the first drip's whose own drips
// come within 10 % of its time, interpolated in ln λ.
func (p *problem) spacing(t, wavelength, limit float64) (from, to float64) {
	target := 1.1 * t
	from, to = wavelength, wavelength
	lastW, lastT := wavelength, t
	for i := len(p.points) - 1; i >= 0; i-- {
		f := p.points[i]
		if f.Wavelength >= wavelength {
			continue
		}
		ti := p.time(f, p.set.Amplitude)
		if ti > target {
			from = between(lastW, lastT, f.Wavelength, ti, target)
			break
		}
		from, lastW, lastT = f.Wavelength, f.Wavelength, ti
	}
	lastW, lastT = wavelength, t
	for _, f := range p.points {
		if f.Wavelength <= wavelength {
			continue
		}
		if f.Wavelength > limit {
			to = math.Max(to, math.Min(limit, f.Wavelength))
			break
		}
		ti := p.time(f, p.set.Amplitude)
		if ti > target {
			to = between(lastW, lastT, f.Wavelength, ti, target)
			break
		}
		to, lastW, lastT = f.Wavelength, f.Wavelength, ti
	}
	return from, to
}

func between(w0, t0, w1, t1, t float64) float64 {
	if math.IsInf(t1, 1) || t1 == t0 {
		return w0
	}
	return w0 * math.Pow(w1/w0, (t-t0)/(t1-t0))
}

// finish adds the history, the leading mode and the strain rates of the first drip.
func (p *problem) finish(r *Result) error {
	f, err := p.frozen(p.solver, r.Wavelength)
	if err != nil {
		return err
	}
	r.Rate = f.Fastest()
	const n = 200
	for i := 0; i <= n; i++ {
		t := r.Time * float64(i) / n
		r.History.Time = append(r.History.Time, t)
		r.History.Base = append(r.History.Base, p.set.Amplitude*math.Abs(f.Base(t)))
	}
	if r.Mode, err = p.solver.Mode(r.Wavelength); err != nil {
		return err
	}
	if d := math.Abs(r.Mode.Displacement[p.base]); d > 0 {
		for i := p.first; i <= p.last; i++ {
			perMetre := r.Mode.StrainRate[i] / d
			r.StrainRate = math.Max(r.StrainRate, perMetre*p.set.Amplitude)
			r.StrainRateEnd = math.Max(r.StrainRateEnd, perMetre*p.set.Criterion*p.thickness)
		}
	}
	return nil
}
