package drip

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Descent is how an undulation of the root's base grows under self-softening.
type Descent struct {
	Wavelength float64 // m
	// Time is that of the closure, s, when |ξ| of the base reached what was asked; +Inf
	// where not before the horizon. Slow; Shortfall says by how much.
	Time float64
	// Best is the best estimate, s: every stretch of Time multiplied by the closure's
	// shortfall at the tip (Correction.Centre) for its n, at this kh. With a background
	// it is Time: the closure is exact at its start, and how short it falls later is
	// known only at its worst (Shortfall).
	Best     float64
	Exponent float64   // n weighted with dissipation, averaged over Time
	At, Base []float64 // s, |ξ| of the root's base in m, at the steps taken
	Steps    int
	// Ended says why there is no Time though time went on: another interface has overturned
	// first. Empty otherwise.
	Ended string
	// Dropped says that it was given up because it takes longer than allowed, see Descents.
	Dropped bool
}

// Time is found by a commutator-free method of order 4 for dξ/dτ = A(ξ) ξ. With A exact in
// each exponential, a surface that relaxes 1e7 times faster than the root grows costs no
// steps. Source: Celledoni, Marthinsen & Owren 2003, Future Gener. Comput. Syst. 19,
// 341 (from memory; against finer steps and closed forms it is tested).
const (
	softError = 3e-3 // of a step, of its second-order companion
	firstStep = 0.3  // over the largest rate
	gone      = 1e-9 // of the amplitude at the start: it has died away
	mostSoft  = 4000 // steps
	mostTries = 12   // steps that may be taken again because flow and viscosities did not settle
	fastSpan  = 1e11 // a step over the shortest time in A, at most: squarings lose no more than 1e-5
)

// Time follows an undulation of amplitude (m) on the base of the lowest root layer, all
// else flat, at wavenumber k (rad/m) in this column as it is, until |ξ| of the base is
// stop (m), the horizon (s) has passed or all displacements have died away, to 1e-9.
// The column does not change, so with a background it is for tests and short times.
// ln |ξ| at a time, and the time, are good to 1e-4 where the root's own wavelengths are
// concerned; at the longest, where a free surface and the base almost balance, to 1 %.
func (f *Soft) Time(k, amplitude, stop, horizon float64) (Descent, error) {
	_, last, ok := f.state.Column.RootSpan()
	if !ok {
		return Descent{}, ErrNoRoot
	}
	if !(amplitude > 0) || !(stop > amplitude) || math.IsInf(stop, 0) || !(horizon > 0) {
		return Descent{}, fmt.Errorf("drip: from an amplitude of %g m to %g m in %g s", amplitude, stop, horizon)
	}
	b, err := f.band(k)
	if err != nil {
		return Descent{}, err
	}
	b.forget()
	r := &softRun{soft: f, k: k, base: last + 1, xi: make([]float64, len(f.model.Layers)+1),
		kh: k * f.state.Column.RootThickness()}
	if b.flow.Interface[r.base] < 0 {
		return Descent{}, errors.New("drip: the root's base cannot move: it lies on a wall")
	}
	r.xi[r.base] = amplitude
	return r.follow(stop, horizon)
}

// softRun is one undulation on its way. It goes in steps not of time but of
// τ = ∫ ρ dt, ρ = |dξ/dt|/|ξ|, in which nothing blows up.
type softRun struct {
	soft    *Soft
	k, kh   float64
	base    int
	slowest float64 // ρ is at least that, 1/s
	xi      []float64
}

// system is dξ/dτ = A ξ at one ξ.
type system struct {
	a        *mat.Dense
	pace     float64 // dt/dτ = 1/ρ, s
	slope    float64 // d ln|ξ_base|/dτ
	exponent float64 // of the dissipation
}

// matrix returns the system at displacements y.
func (r *softRun) matrix(y []float64) (system, error) {
	b, a, err := r.soft.system(r.k, y)
	if err != nil {
		return system{}, err
	}
	n := len(y)
	m := mat.NewDense(n, n, nil)
	states := 0
	for _, i := range b.flow.Interface {
		if i >= 0 {
			states++
		}
	}
	for i, p := range b.flow.Interface {
		for j, q := range b.flow.Interface {
			if p >= 0 && q >= 0 {
				m.Set(i, j, a[p*states+q])
			}
		}
	}
	rate := make([]float64, n)
	mat.NewVecDense(n, rate).MulVec(m, mat.NewVecDense(n, y))
	rho := math.Max(r.slowest, math.Sqrt(dot(rate, rate)/dot(y, y)))
	m.Scale(1/rho, m)
	return system{m, 1 / rho, rate[r.base] / y[r.base] / rho, math.Max(1, b.n)}, nil
}

func (r *softRun) follow(stop, horizon float64) (Descent, error) {
	d := Descent{Wavelength: 2 * math.Pi / r.k, Time: math.Inf(1), Best: math.Inf(1)}
	r.slowest = 0.01 / horizon
	y := r.xi
	s, err := r.matrix(y)
	if err != nil {
		return d, err
	}
	var t, best, exponents float64
	var tries int
	d.At, d.Base = append(d.At, 0), append(d.Base, math.Abs(y[r.base]))
	step := firstStep / mat.Norm(s.a, math.Inf(1))
	for d.Steps = 1; d.Steps <= mostSoft; d.Steps++ {
		if fast := mat.Norm(s.a, math.Inf(1)); !(step*fast < fastSpan) {
			step = fastSpan / fast
		}
		next, dt, miss, err := r.step(s, y, step)
		if err != nil {
			if tries++; tries > mostTries {
				return d, err
			}
			r.soft.again(r.k)
			step /= 4
			continue
		}
		if !(miss <= r.soft.stepError) {
			step *= math.Max(0.2, 0.8*math.Cbrt(r.soft.stepError/miss))
			continue
		}
		after, err := r.matrix(next)
		if err != nil {
			return d, err
		}
		ratio := 1.0
		if r.soft.background.second == 0 {
			ratio = Corrections(after.exponent, r.kh, 0).Centre
		}
		if math.Abs(next[r.base]) >= stop && next[r.base]*y[r.base] > 0 {
			x := reach(math.Log(math.Abs(y[r.base])), math.Log(math.Abs(next[r.base])), math.Log(stop), step*s.slope, step*after.slope)
			dt, _ = hermite(x, 0, dt, step*s.pace, step*after.pace)
			if t+dt > horizon {
				return d, nil
			}
			d.Time, d.Best = t+dt, best+dt*ratio
			d.Exponent = (exponents + dt*after.exponent) / d.Time
			d.At, d.Base = append(d.At, d.Time), append(d.Base, stop)
			return d, nil
		}
		if t += dt; t >= horizon || math.Sqrt(dot(next, next)) < gone*d.Base[0] {
			return d, nil
		}
		if d.Ended = r.overturned(next); d.Ended != "" {
			return d, nil
		}
		best, exponents = best+dt*ratio, exponents+dt*after.exponent
		d.At, d.Base = append(d.At, t), append(d.Base, math.Abs(next[r.base]))
		s, y = after, next
		step *= math.Min(6, 0.8*math.Cbrt(r.soft.stepError/math.Max(miss, 1e-9)))
	}
	return d, fmt.Errorf("drip: wavelength %g m: %d steps reach %g s and an amplitude of %g m, not %g m", d.Wavelength, mostSoft, t, math.Abs(y[r.base]), stop)
}

// overturned says in words which interface has moved by more than the column is deep,
// where linear theory has long ended.
func (r *softRun) overturned(y []float64) string {
	c := r.soft.state.Column
	var z float64
	for i, v := range y {
		if math.Abs(v) > c.Depth() {
			return fmt.Sprintf("the interface at %.3g km has moved by more than the column's depth before the root's base has dripped", z/1e3)
		}
		if i < len(c.Layers) {
			z += c.Layers[i].Thickness
		}
	}
	return ""
}

// step takes one step of τ from y, where the system is s1, and returns where it leads,
// the time it takes, and the distance to where the exponential midpoint rule would lead,
// relative and in τ.
func (r *softRun) step(s1 system, y []float64, h float64) (next []float64, dt, miss float64, err error) {
	far := math.Inf(1)
	y2 := flowed(y, h, part{0.5, s1.a})
	if !bounded(y2) {
		return nil, 0, far, nil
	}
	s2, err := r.matrix(y2)
	if err != nil {
		return nil, 0, 0, err
	}
	y3 := flowed(y, h, part{0.5, s2.a})
	if !bounded(y3) {
		return nil, 0, far, nil
	}
	s3, err := r.matrix(y3)
	if err != nil {
		return nil, 0, 0, err
	}
	y4 := flowed(y2, h, part{1, s3.a}, part{-0.5, s1.a})
	if !bounded(y4) {
		return nil, 0, far, nil
	}
	s4, err := r.matrix(y4)
	if err != nil {
		return nil, 0, 0, err
	}
	half := flowed(y, h, part{3. / 12, s1.a}, part{2. / 12, s2.a}, part{2. / 12, s3.a}, part{-1. / 12, s4.a})
	next = flowed(half, h, part{-1. / 12, s1.a}, part{2. / 12, s2.a}, part{2. / 12, s3.a}, part{3. / 12, s4.a})
	if !bounded(next) {
		return nil, 0, far, nil
	}
	dt = h / 6 * (s1.pace + 2*s2.pace + 2*s3.pace + s4.pace)
	var size float64
	for i, v := range flowed(y, h, part{1, s3.a}) {
		size = math.Max(size, math.Abs(next[i]))
		miss = math.Max(miss, math.Abs(next[i]-v))
	}
	miss /= size
	return next, dt, math.Max(miss, h*math.Abs(1-h*s3.pace/dt)), nil
}

// bounded says whether displacements are ones that a column could have: a step that was
// far too long can lead anywhere.
func bounded(y []float64) bool {
	for _, v := range y {
		if !(math.Abs(v) < 1e9) {
			return false
		}
	}
	return true
}

// flowed returns exp(h Σ c A) y.
func flowed(y []float64, h float64, parts ...part) []float64 {
	n := len(y)
	var sum, e mat.Dense
	for i, p := range parts {
		if i == 0 {
			sum.Scale(h*p.c, p.a)
			continue
		}
		var t mat.Dense
		t.Scale(h*p.c, p.a)
		sum.Add(&sum, &t)
	}
	e.Exp(&sum)
	out := make([]float64, n)
	mat.NewVecDense(n, out).MulVec(&e, mat.NewVecDense(n, y))
	return out
}

// reach returns the share of a step at which the cubic through a and b with slopes p
// and q is at v between a and b.
func reach(a, b, v, p, q float64) float64 {
	lo, hi := 0.0, 1.0
	for range 60 {
		mid := (lo + hi) / 2
		if y, _ := hermite(mid, a, b, p, q); y < v {
			lo = mid
		} else {
			hi = mid
		}
	}
	return hi
}

// part is a multiple of a matrix.
type part struct {
	c float64
	a *mat.Dense
}
