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

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// Settings say what counts as a drip.
type Settings struct {
	Amplitude float64 // a₀ on the base of the lowest root layer, m, > 0
	Criterion float64 // drip when the tip has descended by Criterion × root thickness
	Window    float64 // s, > 0
	Removes   float64 // share of the root's mass one drip takes
	Spectrum  string  // what Rough is called: "white" where it is the zero value
	Rough     Roughness
	Thermal   string // perturbations of temperature, as in Strained; "": none
	Softening string // "none": viscosities of one strain rate; "self": the drip's own softens the rock
}

// Options of a drip computation.
type Options struct {
	From, To float64 // wavelengths, m; 0: chosen as for a spectrum
	Limit    float64 // m: longer wavelengths are computed but not the answer; 0: no limit
	LimitIs  string  // what the limit is, in words: "the arc's width, 160 km"
	Near     float64 // m: for Time, a wavelength to look around; 0: the whole range
	Workers  int     // 0: as many as there are cores
	Until    float64 // s: for SoftenedTime, a later drip need not be told from none; 0: Horizon
}

// horizon is how far the closure is followed: its own time is at most 1.4 times the best
// estimate (Corrections).
func (o *Options) horizon() float64 {
	if o.Until > 0 {
		return math.Min(Horizon, 1.5*o.Until)
	}
	return Horizon
}

// Curve is the drip time at every wavelength.
type Curve struct {
	Wavelength []float64 // m
	Time       []float64 // s; +Inf where it never drips
	Low, High  []float64 // s, for the amplitude × 3 and ÷ 3
}

// Result is the answer to: when does the root drip?
type Result struct {
	Outcome           string  // "drips", "window" (not before it ends, if at all) or "buoyant" (the root is not denser than what lies below, and does not drip)
	Time              float64 // s; +Inf where never
	Wavelength        float64 // m, of the first drip, when it drips
	InitialWavelength float64 // m, the same at the start
	TimeLow, TimeHigh float64 // s, for the amplitude × 3 and ÷ 3, each at its own best wavelength
	SpacingFrom       float64 // m: wavelengths whose drips would follow within 10 % of the time
	SpacingTo         float64
	Rate              float64   // 1/s, leading growth rate at the drip's wavelength
	StrainRate        float64   // 1/s, largest second invariant in the root at the start (amplitude a₀)
	StrainRateEnd     float64   // 1/s, the same at the drip
	Unrestricted      Fastest   // the same without the limit on wavelength
	Curve             Curve     // without perturbations of temperature, as are Traces
	History           Amplitude // of the first drip
	Traces            []Trace   // of all wavelengths of Curve, in its order
	First             Trace     // of the first drip, with its strain rates and stresses
	Excluded          string    // wavelengths that were computed and not used, in words
	Reason            string
	Warnings          []string
	Drips             []Event       // one after the other, in a column that changes; nil in a frozen one
	Soft              *SelfSoftened // where the drip softens its own rock; else nil
	Thermal           *Thermal      // what perturbations of temperature change; nil: they are none, or nothing drips without them
	Mode              *growth.Mode  // leading mode at the drip's wavelength; nil where nothing drips
}

// Fastest is a drip time and its wavelength.
type Fastest struct{ Time, Wavelength float64 }

// Amplitude is one wavelength's amplitude against time.
type Amplitude struct {
	Time []float64 // s
	Base []float64 // |displacement| of the root's base, m
}

// Horizon is how far ahead in s a drip is looked for, whatever the window: 1e5 Myr,
// beyond which no root is asked about.
const Horizon = 1e5 * 1e6 * 365.25 * 86400

// AsDense is the density contrast in kg/m³ below which, in size, two rocks are said
// to be as dense as each other: half the last digit printed.
const AsDense = 0.5

// ErrNoRoot says that no layer is marked as root.
var ErrNoRoot = errors.New("drip: no layer is marked as root")

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
	from, to = set.within(from, to)
	if err := p.curve(ctx, from, math.Max(to, 1.01*from), 10); err != nil {
		return nil, err
	}
	r.Curve = p.curveOf()
	limit := math.Inf(1)
	if o.Limit > 0 {
		limit = o.Limit
	}
	best, err := p.best(1, limit, fine)
	if err != nil {
		return nil, err
	}
	if r.Unrestricted, err = p.best(1, math.Inf(1), fine); err != nil {
		return nil, err
	}
	contrast := -s.Jumps[p.base]
	if math.IsInf(best.Time, 1) {
		r.Outcome, r.Reason = never(contrast, r.Unrestricted, o)
		r.Traces = p.traces(math.Inf(1))
		return p.softened(ctx, s, set, o, r)
	}
	r.Time, r.Wavelength, r.InitialWavelength = best.Time, best.Wavelength, best.Wavelength
	for i, a := range []float64{3, 1.0 / 3} {
		b, err := p.best(a, limit, fine)
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
	r.Reason = "the root is " + Weigh(contrast)
	if contrast <= 0 {
		r.Reason += ", and denser rock above carries its base down"
	}
	if r.Time > set.Window {
		r.Outcome = "window"
		r.Reason = "it would drip, but only after the window has closed"
	}
	if o.Limit > 0 && r.Unrestricted.Time < 0.99*r.Time {
		r.Excluded = fmt.Sprintf("wavelengths beyond %s, were computed and not used; the first of them to drip is %.4g km", o.LimitIs, r.Unrestricted.Wavelength/1e3)
	}
	r.SpacingFrom, r.SpacingTo = p.spacing(r.Time, r.Wavelength, limit)
	r.Traces = p.traces(r.Time)
	u, err := p.warm(ctx, s, limit, r, set.Softening != "self" || newtonian(s))
	if err != nil {
		return nil, err
	}
	if math.IsInf(r.Time, 1) {
		return r, nil
	}
	if err := p.finish(r, u); err != nil {
		return nil, err
	}
	if w := rateCaution(s, r); w != "" && set.Softening != "self" {
		r.Warnings = append(r.Warnings, w)
	}
	return p.softened(ctx, s, set, o, r)
}

// never says that nothing drips, and why.
func never(contrast float64, free Fastest, o Options) (outcome, reason string) {
	switch {
	case contrast <= 0:
		word := ""
		if contrast < -AsDense {
			word = "buoyant, "
		}
		return "buoyant", "never drips: the root is " + word + Weigh(contrast)
	case !math.IsInf(free.Time, 1):
		return "window", fmt.Sprintf("no wavelength within %s, drips, though one of %.4g km would", o.LimitIs, free.Wavelength/1e3)
	}
	return "window", "does not drip in 1e5 Myr, though the root is " + Weigh(contrast)
}

// Weigh says in words how much denser, in kg/m³, a root is than what lies below it.
func Weigh(contrast float64) string {
	switch {
	case contrast > AsDense:
		return fmt.Sprintf("%.0f kg/m³ denser than what lies below it", contrast)
	case contrast < -AsDense:
		return fmt.Sprintf("%.0f kg/m³ lighter than what lies below it", -contrast)
	}
	return "as dense as what lies below it"
}
