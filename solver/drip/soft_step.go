package drip

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// flowing is dξ/dt = A ξ over all interfaces, at the viscosities that one ξ makes.
type flowing struct {
	a              *mat.Dense // 1/s, e_z included
	exponent       float64    // n of the dissipation
	over           float64    // the undulation's strain rate over the background's; +Inf without one
	strain, stress float64    // of the undulation at the root's base, 1/s and Pa
}

// medium is what an undulation goes through.
type medium interface {
	flow(t float64, y []float64) (flowing, error)
	unsettled(t float64)                // the last flow did not settle: guess anew
	stop(t float64) float64             // m: |ξ| of the base at which it has dripped
	depth(t float64) float64            // m, of the column
	end(ahead float64) (float64, error) // of the time without jumps, s, where it is known or before ahead; else +Inf
	share(n float64) float64            // of the time, for Descent.Best
}

// why an undulation was followed no further.
type why int

const (
	onward why = iota
	dripped
	late   // not by the limit
	landed // at the end of the time without jumps
	faded
	overturned
)

// softRun is one undulation on its way. It goes in steps not of time but of
// τ = ∫ ρ dt, ρ = |dξ/dt|/|ξ|, in which nothing blows up; into an end, in one of time.
type softRun struct {
	in              medium
	base            int
	y               []float64 // displacements now, m
	t               float64   // s since it began
	limit           float64   // s
	fades           bool      // it is given up once it has died away
	d               Descent
	tolerance       float64
	slowest         float64 // ρ is at least that, 1/s
	pace            float64 // s: where not 0, dt/dτ of every system
	h               float64 // next step, of τ
	begun           float64 // s
	best, exponents float64
	tries           int
}

func newSoftRun(in medium, base int, tolerance, limit float64) *softRun {
	return &softRun{in: in, base: base, tolerance: tolerance, limit: limit, slowest: 0.01 / limit, fades: true,
		d: Descent{Time: math.Inf(1), Best: math.Inf(1)}}
}

// system is dξ/dτ = A ξ at one ξ and time.
type system struct {
	a     *mat.Dense
	pace  float64 // dt/dτ = 1/ρ, s
	slope float64 // d ln|ξ_base|/dτ
	flow  flowing
}

// system returns the system at displacements y and time t.
func (r *softRun) system(t float64, y []float64) (system, error) {
	f, err := r.in.flow(t, y)
	if err != nil {
		return system{}, err
	}
	n := len(y)
	rate := make([]float64, n)
	mat.NewVecDense(n, rate).MulVec(f.a, mat.NewVecDense(n, y))
	rho := math.Max(r.slowest, math.Sqrt(dot(rate, rate)/dot(y, y)))
	if r.pace != 0 {
		rho = 1 / r.pace
	}
	var m mat.Dense
	m.Scale(1/rho, f.a)
	return system{&m, 1 / rho, rate[r.base] / y[r.base] / rho, f}, nil
}

// note records where it is.
func (r *softRun) note(t, base float64, f flowing) {
	d := &r.d
	d.At, d.Base = append(d.At, t), append(d.Base, base)
	d.Strain, d.Stress = append(d.Strain, f.strain), append(d.Stress, f.stress)
}

// step takes one step of τ from where it is, at the system s1, and returns where it leads,
// the time it takes, and the distance to where the exponential midpoint rule would lead,
// relative and in τ.
func (r *softRun) step(s1 system, h float64) (next []float64, dt, miss float64, err error) {
	far, y := math.Inf(1), r.y
	y2 := flowed(y, h, part{0.5, s1.a})
	if !bounded(y2) {
		return nil, 0, far, nil
	}
	s2, err := r.system(r.t+h/2*s1.pace, y2)
	if err != nil {
		return nil, 0, 0, err
	}
	y3 := flowed(y, h, part{0.5, s2.a})
	if !bounded(y3) {
		return nil, 0, far, nil
	}
	s3, err := r.system(r.t+h/2*s2.pace, y3)
	if err != nil {
		return nil, 0, 0, err
	}
	y4 := flowed(y2, h, part{1, s3.a}, part{-0.5, s1.a})
	if !bounded(y4) {
		return nil, 0, far, nil
	}
	s4, err := r.system(r.t+h*s3.pace, y4)
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

// part is a multiple of a matrix.
type part struct {
	c float64
	a *mat.Dense
}
