package heat

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/interp"

	"keelfall/rheology"
)

// Closure is what a clock reads on a path: closure temperature and age after Dodson
// 1973 (Contrib. Mineral. Petrol. 40, 259). Where Found is false the numbers are 0
// and Reason says why, in words.
type Closure struct {
	Found       bool
	Time        float64 // model time of closure, s: the age is counted from there
	Temperature float64 // closure temperature T_c, K
	CoolingRate float64 // −dT/dt at Time, K/s, > 0
	Diffused    float64 // A ∫ D dt/a² from Time on: 1 for cooling with 1/T linear in time
	Reason      string
	Caution     string // where the path is far from what Dodson's solution is for
}

// dodsonA is the A of Dodson 1973 for the bulk age of each geometry. In closed form
// ln A = γ + Σ c ln α², over the modes c exp(−α² D t/a²) of the mean concentration
// (solver/checks): 54.96, 26.98 and 8.66.
var dodsonA = map[string]float64{"sphere": 55, "cylinder": 27, "sheet": 8.7}

const (
	perInterval = 8    // looks for a passage between two points of a path
	insensible  = 0.01 // of A ∫ D dt/a²: what diffuses less than this opens no clock
	unlikely    = 2.0  // factor between Diffused and 1 beyond which there is a caution
	fewEFolds   = 10.0 // E/RT below which Dodson's solution is no longer a good one
)

// ClosureTemperature returns Dodson's T_c in K at a cooling rate in K/s:
//
//	E/(R T_c) = ln(A τ D₀/a²)    τ = R T_c²/(E |dT/dt|)
//
// with A = 55 for a sphere, 27 for a cylinder, 8.7 for a sheet of half-thickness a.
// At a rate that is not above 0 nothing ever closes and it is 0.
func (c Clock) ClosureTemperature(rate float64) float64 {
	if !(rate > 0) {
		return 0
	}
	// With x = E/(R T_c) = exp(u) the equation is x + 2 ln x = ln(A D₀ E/(a² R rate)).
	k := math.Log(dodsonA[c.Geometry]) + math.Log(c.Diffusivity) - 2*math.Log(c.Radius) +
		math.Log(c.ActivationEnergy/rheology.GasConstant) - math.Log(rate)
	u := math.Log(math.Max(k, 1))
	for range 50 { // convex and rising: Newton's steps come down from above
		x := math.Exp(u)
		step := (x + 2*u - k) / (x + 2)
		u -= step
		if math.Abs(step) < 1e-15 {
			break
		}
	}
	return c.ActivationEnergy / rheology.GasConstant * math.Exp(-u)
}

// perTime is A D/a² at T, 1/s.
func (c Clock) perTime(T float64) float64 {
	return dodsonA[c.Geometry] * c.Diffusivity / (c.Radius * c.Radius) * math.Exp(-c.ActivationEnergy/(rheology.GasConstant*T))
}

// Close returns where on a path the clock closes: the time the temperature T in K last
// falls below the closure temperature of the cooling rate there; t is the model time in
// s, increasing. Between the points T is the monotone cubic through them.
//
// Dodson's solution is for a system that begins open and cools with 1/T linear in time.
// Where the path departs from that, more or less diffuses after closure than in his
// solution: Diffused says how much, and a factor of two makes a Caution. A passage
// after which less than a hundredth as much diffuses (a small bump on a cold path)
// does not count. A path that is never hot enough, or still open at its end, is not
// an error: Found is false, with the Reason.
//
// Errors: a clock or a path that is none (values that are not positive and finite,
// times that do not increase, fewer than two points, an unknown geometry).
func (c Clock) Close(t, T []float64) (Closure, error) {
	p, err := c.follow(t, T)
	if err != nil {
		return Closure{}, fmt.Errorf("heat: clock %s: %w", c.Name, err)
	}
	end := len(p.t) - 1
	down, up := -1, 0 // the last passage that counts; where the clock was last opened
	for i := end - 1; i >= 0 && down < 0; i-- {
		if p.open[i] && !p.open[i+1] && p.later[i] >= insensible {
			down = i
		}
	}
	if p.open[end] {
		for up = end; up > 0 && p.open[up-1]; up-- {
		}
		if p.within[up] >= insensible {
			return Closure{Reason: p.stillOpen(c)}, nil
		}
	}
	if down < 0 {
		return Closure{Reason: p.neverOpen(c)}, nil
	}
	return p.closure(c, down), nil
}

// closure finds the passage between two neighbouring looks.
func (p *track) closure(c Clock, i int) Closure {
	lo, hi := p.t[i], p.t[i+1]
	for range 200 {
		mid := lo + (hi-lo)/2
		if mid <= lo || mid >= hi {
			break
		}
		if p.isOpen(c, mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	T, rate := p.at(hi)
	out := Closure{Found: true, Time: hi, Temperature: T, CoolingRate: rate}
	out.Diffused = p.later[i+1] + logMean(c.perTime(T), c.perTime(p.T[i+1]))*(p.t[i+1]-hi)
	switch x := c.ActivationEnergy / (rheology.GasConstant * T); {
	case x < fewEFolds:
		out.Caution = fmt.Sprintf("E/(R T) is %.3g at closure; Dodson's solution needs it well above 1", x)
	case out.Diffused > unlikely || out.Diffused < 1/unlikely:
		out.Caution = fmt.Sprintf("after closure %s on cooling with 1/T linear in time, which Dodson's solution is for; the age is rough%s", diffuses(out.Diffused), p.byDiffusion())
	}
	return out
}

// byDiffusion says where as much diffuses later as after a closure of Dodson's.
func (p *track) byDiffusion() string {
	for i := len(p.later) - 1; i >= 0; i-- {
		if p.later[i] >= 1 {
			return fmt.Sprintf(" (it is as much from %.3g Myr on)", p.t[i]/myr)
		}
	}
	return ""
}

// track is a path looked at closely.
type track struct {
	curve         interp.FritschButland
	t, T          []float64
	open          []bool    // hotter than the closure temperature of the cooling rate there
	within, later []float64 // A ∫ D dt/a² to the end of the path; and with the same cooling going on after it
}

func (c Clock) follow(t, T []float64) (*track, error) {
	if _, ok := dodsonA[c.Geometry]; !ok {
		return nil, fmt.Errorf("geometry %q; known are sphere, cylinder, sheet", c.Geometry)
	}
	for _, x := range []float64{c.ActivationEnergy, c.Diffusivity, c.Radius} {
		if !(x > 0) || math.IsInf(x, 1) {
			return nil, fmt.Errorf("activation energy %g J/mol, diffusivity %g m²/s, radius %g m; all must be > 0", c.ActivationEnergy, c.Diffusivity, c.Radius)
		}
	}
	if len(t) != len(T) || len(t) < 2 {
		return nil, fmt.Errorf("a path of %d times and %d temperatures; needs two points or more", len(t), len(T))
	}
	for i := range t {
		if !(T[i] > 0) || math.IsInf(T[i], 1) || math.IsNaN(t[i]) || math.IsInf(t[i], 0) || i > 0 && !(t[i] > t[i-1]) {
			return nil, fmt.Errorf("point %d of its path: %g K at %g s; temperatures are above 0 and times increase", i+1, T[i], t[i])
		}
	}
	p := &track{}
	if err := p.curve.Fit(t, T); err != nil {
		return nil, err
	}
	for i := 1; i < len(t); i++ {
		for j := range perInterval {
			p.t = append(p.t, t[i-1]+(t[i]-t[i-1])*float64(j)/perInterval)
		}
	}
	p.t = append(p.t, t[len(t)-1])
	n := len(p.t)
	p.T, p.open, p.within, p.later = make([]float64, n), make([]bool, n), make([]float64, n), make([]float64, n)
	for i, at := range p.t {
		p.T[i], _ = p.at(at)
		p.open[i] = p.isOpen(c, at)
	}
	if T, rate := p.at(p.t[n-1]); rate > 0 {
		p.later[n-1] = c.perTime(T) * rheology.GasConstant * T * T / (c.ActivationEnergy * rate)
	}
	for i := n - 2; i >= 0; i-- {
		d := logMean(c.perTime(p.T[i]), c.perTime(p.T[i+1])) * (p.t[i+1] - p.t[i])
		p.within[i], p.later[i] = p.within[i+1]+d, p.later[i+1]+d
	}
	return p, nil
}

// at returns the temperature and the cooling rate.
func (p *track) at(t float64) (T, rate float64) {
	return p.curve.Predict(t), -p.curve.PredictDerivative(t)
}

func (p *track) isOpen(c Clock, t float64) bool {
	T, rate := p.at(t)
	return T > c.ClosureTemperature(rate)
}

// logMean is the mean of what grows exponentially from a to b.
func logMean(a, b float64) float64 {
	if d := b - a; math.Abs(d) > 1e-6*a && a > 0 && b > 0 {
		return d / math.Log(b/a)
	}
	return (a + b) / 2
}

const (
	zeroCelsius = 273.15                   // K
	myr         = 1e6 * 365.25 * 24 * 3600 // s
)

// uncooled is the fall of temperature in K over a whole path below which it does not
// cool: the error of a history's steps, which makes a steady one's rate.
const uncooled = 1.0

// place says where a path is at its point i, and where the clock closes at the rate there.
func (p *track) place(c Clock, i int, then string) string {
	T, rate := p.at(p.t[i])
	if rate*(p.t[len(p.t)-1]-p.t[0]) < uncooled {
		return fmt.Sprintf("at %.0f °C and not cooling", T-zeroCelsius)
	}
	return fmt.Sprintf("at %.0f °C%sat the %.3g K/Myr there it closes at %.0f °C", T-zeroCelsius, then, rate*myr, c.ClosureTemperature(rate)-zeroCelsius)
}

func (p *track) stillOpen(c Clock) string {
	return "still open at the end of its path, " + p.place(c, len(p.t)-1, "; ")
}

func (p *track) neverOpen(c Clock) string {
	if !p.open[0] {
		return "closed before the path begins: there it is " + p.place(c, 0, ", and ")
	}
	var hottest float64
	for _, T := range p.T {
		hottest = math.Max(hottest, T)
	}
	return fmt.Sprintf("never hot enough to be open: at most %.0f °C, and on the whole path %s after a closure; it closed before the path begins", hottest-zeroCelsius, diffuses(p.later[0]))
}

// diffuses says how many times as much diffuses as on what is named next.
func diffuses(x float64) string {
	switch {
	case x < 1e-3:
		return "almost nothing diffuses of what does"
	case x < 1:
		return fmt.Sprintf("only %.2g times as much diffuses as", x)
	case x < 1e4:
		return fmt.Sprintf("%.2g times as much diffuses as", x)
	}
	return "many thousand times as much diffuses as"
}
