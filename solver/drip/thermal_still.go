package drip

import (
	"context"
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"keelfall/solver/growth"
	"keelfall/solver/state"
)

// warmStep is the share of the drip time without T' that is one step; warmEnd is up to how
// many times that a drip with T' is looked for. T' is not followed where a drip without it
// comes only after warmWindows windows, as the verdict cannot hang on it, nor at
// wavelengths below the column's depth over warmShort, whose T' takes hundreds of states.
const (
	warmStep    = 1.0 / 64
	warmEnd     = 20
	warmWindows = 10
	warmShort   = 20
)

// followsHeat says whether T' is followed for a drip without it at this time and wavelength.
func (p *problem) followsHeat(s *state.State, f Fastest) bool {
	return f.Time <= warmWindows*p.set.Window && f.Wavelength*warmShort >= s.Column.Depth() && p.set.mayWarm(s)
}

// warmProblem is a root in a column that does not change, its temperature perturbed.
type warmProblem struct {
	*problem
	solver *growth.Solver
	expect float64 // s: the drip time without T'
}

func newWarm(p *problem, s *state.State, expect float64) (*warmProblem, error) {
	solver, err := growth.NewSolver(Strained(s, Background{}, p.set.Thermal), 0)
	return &warmProblem{p, solver, expect}, err
}

// undulation prepares one of a wavelength in m.
func (q *warmProblem) undulation(wavelength float64) (undulation, error) {
	if q.set.Thermal == "frozen" {
		return q.frozen(q.solver, wavelength)
	}
	return q.follow(wavelength)
}

// times returns when an undulation of a wavelength in m drips from each of amplitudes.
func (q *warmProblem) times(wavelength float64) (t [3]float64, err error) {
	u, err := q.undulation(wavelength)
	if err != nil {
		return t, err
	}
	for i, m := range amplitudes {
		t[i] = math.Inf(1)
		if a := m * q.set.Start(wavelength, q.stop/m); a != 0 {
			log := func(t float64) float64 { return logSize(u.Base(t)) }
			t[i] = firstAbove(log, math.Log(q.stop/a), warmStep*q.expect, warmEnd*q.expect)
		}
	}
	return t, nil
}

// firstAbove is the first time up to end at which f reaches a value, looked for in steps.
func firstAbove(f func(t float64) float64, value, step, end float64) float64 {
	if value <= 0 {
		return 0
	}
	lo, low := 0.0, -value
	for i := 1; float64(i)*step <= end; i++ {
		hi := float64(i) * step
		high := f(hi) - value
		if high < 0 || math.IsNaN(high) {
			lo, low = hi, high
			continue
		}
		for n := 0; n < 60 && hi-lo > 1e-11*hi; n++ { // secants, and bisection where they stall
			t := lo + (hi-lo)*low/(low-high)
			if n%3 == 2 || !(t > lo && t < hi) {
				t = (lo + hi) / 2
			}
			if v := f(t) - value; v >= 0 {
				hi, high = t, v
			} else {
				lo, low = t, v
			}
		}
		return hi
	}
	return math.Inf(1)
}

// warmFrozen is an undulation whose T' is followed: steps of the whole system's
// exponential, kept as they are asked for, and one more to a time between two.
type warmFrozen struct {
	sys         *growth.System
	base        int
	step, most  float64
	whole, part stepper
	at          [][]float64 // after each step, times e^logs
	logs        []float64
}

func (q *warmProblem) follow(wavelength float64) (*warmFrozen, error) {
	sys, err := q.solver.System(wavelength)
	if err != nil {
		return nil, err
	}
	u := &warmFrozen{sys: sys, base: sys.Interface[q.base], step: warmStep * q.expect}
	if u.base < 0 {
		return nil, errors.New("drip: the root's base cannot move: it lies on a wall")
	}
	if u.most, err = fastestOf(sys.A, sys.N); err != nil {
		return nil, err
	}
	y := make([]float64, sys.N)
	y[u.base] = 1
	u.at, u.logs = [][]float64{y}, []float64{0}
	u.whole.set(sys.A, sys.N, u.step, u.most)
	return u, nil
}

// States returns the displacements in m and the coefficients of T' in K.
func (u *warmFrozen) States(t float64) []float64 {
	i := int(t / u.step * (1 + 1e-14))
	for len(u.at) <= i {
		last := len(u.at) - 1
		next := make([]float64, u.sys.N)
		log := u.whole.apply(next, u.at[last])
		u.at, u.logs = append(u.at, next), append(u.logs, u.logs[last]+log)
	}
	y, log := slices.Clone(u.at[i]), u.logs[i]
	if rest := t - float64(i)*u.step; rest > 1e-13*t {
		u.part.set(u.sys.A, u.sys.N, rest, u.most)
		log += u.part.apply(y, y)
	}
	for j := range y {
		y[j] *= math.Exp(log)
	}
	return y
}

// Base returns the displacement of the root's base in m.
func (u *warmFrozen) Base(t float64) float64 { return u.States(t)[u.base] }

// fastestOf is the largest growth rate of A, 1/s; 0 where nothing grows.
func fastestOf(a []float64, n int) (float64, error) {
	var e mat.Eigen
	if !e.Factorize(mat.NewDense(n, n, slices.Clone(a)), mat.EigenNone) {
		return 0, errors.New("drip: the evolution matrix has no eigenvalues")
	}
	var most float64
	for _, v := range e.Values(nil) {
		most = math.Max(most, real(v))
	}
	return most, nil
}

// answered is an undulation and the solver of the column that it is in.
type answered struct {
	undulation
	solver *growth.Solver
}

// warm gives r, whose times are those of linear theory without T', what T' makes of them;
// where included they become those with it. It returns the undulation of the answer.
func (p *problem) warm(ctx context.Context, s *state.State, limit float64, r *Result, included bool) (answered, error) {
	plain := func() (answered, error) {
		f, err := p.frozen(p.solver, r.Wavelength)
		return answered{f, p.solver}, err
	}
	if !p.followsHeat(s, Fastest{r.Time, r.Wavelength}) {
		return plain()
	}
	q, err := newWarm(p, s, r.Time)
	if err != nil {
		return answered{}, err
	}
	t, best, err := warmBest(func(w float64) ([3]float64, error) {
		if err := ctx.Err(); err != nil {
			return [3]float64{}, err
		}
		return q.times(w)
	}, r.Wavelength, limit)
	if err != nil {
		return answered{}, err
	}
	r.Thermal = &Thermal{Mode: p.set.Thermal, Without: r.Time, With: t[1], Included: included}
	if !included {
		return plain()
	}
	r.warmed(t, best, best, p.set.Window)
	if math.IsInf(r.Time, 1) {
		return answered{}, nil
	}
	u, err := q.undulation(best)
	return answered{u, q.solver}, err
}

// warmTime is the time of a drip without T' with it, at the same wavelength.
func (p *problem) warmTime(s *state.State, f Fastest) (float64, error) {
	if !p.followsHeat(s, f) {
		return f.Time, nil
	}
	q, err := newWarm(p, s, f.Time)
	if err != nil {
		return 0, err
	}
	t, err := q.times(f.Wavelength)
	return t[1], err
}
