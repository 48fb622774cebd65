package heat

import (
	"errors"
	"fmt"
	"math"
)

// gamma is the diagonal coefficient of the two-stage method: with 1 − 1/√2 it is of
// second order and L-stable (Alexander 1977, SIAM J. Numer. Anal. 14; from memory, the
// order and the damping are tested).
const gamma = 1 - math.Sqrt2/2

// lte is the error constant: R(z) − exp(z) = lte z³ + …, 3γ² − 2γ³ − 1/6 (derived).
const lte = 3*gamma*gamma - 2*gamma*gamma*gamma - 1.0/6

// stage is the column at one time inside a step. Energies and rates are per area of
// the rock at the start of the step.
type stage struct {
	area  float64   // of the rock, relative to the start of the step
	T, P  []float64 // K, Pa
	M     []float64 // mass, kg/m²
	R, E  []float64 // the energy it starts from and has, J/m²
	F     []float64 // (E − R)/(γh): what comes into a cell, W/m²
	terms terms     // of the balance, W per present m²
}

// terms are the rates of the energy balance, W/m².
type terms struct {
	surface, conducted, produced, given, compression, below, added, taken, sizes float64
}

// work holds the linear system of a stage and what it was made of.
type work struct {
	half         []float64 // thermal resistance of half a cell, m² K/W
	bend         []float64 // what the heat made in a cell adds to its mean T towards a face, K
	lo, di, up   []float64 // the matrix; after elimination di holds 1/pivot, up the multipliers
	rhs          []float64
	beta, given  []float64 // α dP/dt m/ρ, W/m²/K; sources, W/m²
	guess        []float64
	lin, slope   []float64 // enthalpy and ∂e/∂T at the guess
	rise         []float64 // dP/dt, Pa/s
	top, foot    edge
	sourced, run bool
}

// errIterations says that a stage has no solution near its guess: the step is too long.
var errIterations = errors.New("no convergence")

// outside is where a stage left the physics.
type outside struct {
	layer           string
	T, conductivity float64
}

func (o outside) Error() string {
	return fmt.Sprintf("heat: %s: at %.4g K the conductivity is %.4g W/m/K; both must be above 0", o.layer, o.T, o.conductivity)
}

func (s *stage) size(n int) {
	for _, x := range []*[]float64{&s.T, &s.P, &s.M, &s.R, &s.E, &s.F} {
		*x = sized(*x, n)
	}
}

func (w *work) size(n int) {
	for _, x := range []*[]float64{&w.half, &w.bend, &w.lo, &w.di, &w.up, &w.rhs, &w.beta, &w.given, &w.guess, &w.lin, &w.slope, &w.rise} {
		*x = sized(*x, n)
	}
}

// sized returns x with length n, made anew only to grow.
func sized(x []float64, n int) []float64 {
	if cap(x) < n {
		return make([]float64, n, n+n/2)
	}
	return x[:n]
}

// properties fills the half-resistances, and where the rock moves through pressure the
// adiabatic coefficients, at the temperatures T.
func (ev *Evolution) properties(s *stage, T []float64) bool {
	w := &ev.w
	for j := range ev.strata {
		st := &ev.strata[j]
		reference, perPascal, perKelvin := st.k.Reference, st.k.PerPascal, st.k.PerKelvin
		for i := st.lo; i < st.hi; i++ {
			c := &ev.cells[i]
			rho := c.solid.at(T[i], s.P[i])
			if st.melt != nil {
				rho = st.bulk(rho, T[i], s.P[i])
			}
			k := reference * (1 + perPascal*s.P[i])
			k2 := 2 * k * s.area * rho
			r := s.M[i] * (1 + perKelvin*(T[i]-st.k.At)) / k2
			if !(r > 0) || !(T[i] > 0) {
				ev.domain = outside{st.name, T[i], k / (1 + perKelvin*(T[i]-st.k.At))}
				return false
			}
			w.half[i] = r
			w.bend[i] = c.H * s.M[i] * r / (3 * s.area)
			if w.run {
				solid := c.solid.at(T[i], s.P[i])
				w.beta[i] = -s.M[i] * c.solid.perKelvin / (solid * solid) * w.rise[i]
			}
		}
	}
	return true
}

// solve finds the stage's temperatures, from the guess in ev.w.guess, at time t with γh
// in gh: M e(T) = R + γh F(T).
func (ev *Evolution) solve(s *stage, t, gh float64) error {
	w, n := &ev.w, len(ev.cells)
	for range maxIterations {
		if !ev.properties(s, w.guess) {
			return errIterations
		}
		ev.edges(s, w.guess, t)
		if ev.heater != nil {
			ev.heater(t, w.given)
		}
		ev.assemble(s, t, gh)
		thomas(w.lo, w.di, w.up, w.rhs, s.T)
		var worst, moved, split float64
		for i := range n {
			st := &ev.strata[ev.cells[i].layer]
			d := s.T[i] - w.guess[i]
			worst = max(worst, math.Abs(d))
			moved = max(moved, math.Abs(s.T[i]-ev.cells[i].T))
			e := w.lin[i] + w.slope[i]*d
			s.E[i] = s.M[i] * e
			T := s.T[i]
			if st.latent != 0 {
				T = st.temperature(e, s.P[i])
				split = max(split, math.Abs(T-s.T[i]))
			}
			w.guess[i] = T
		}
		if math.IsNaN(worst) {
			return errIterations
		}
		if ev.nonlinear*worst*(worst+moved) < lagged*ev.tolerance && split < lagged*ev.tolerance {
			ev.account(s, t)
			for i := range n {
				s.F[i] = (s.E[i] - s.R[i]) / gh
			}
			return nil
		}
	}
	return errIterations
}

const (
	maxIterations = 12
	lagged        = 0.1 // of the tolerance: what taking properties at the guess may cost
)

// assemble fills the linear system for the half-resistances that are there.
func (ev *Evolution) assemble(s *stage, t, gh float64) {
	w, n := &ev.w, len(ev.cells)
	ga := gh * s.area
	var above, lifted, produced float64 // above: conductance to the cell above; lifted: that times its bend
	for j := range ev.strata {
		st := &ev.strata[j]
		for i := st.lo; i < st.hi; i++ {
			T := w.guess[i]
			e, slope := st.c*T, st.c
			if st.latent != 0 {
				e, slope = st.enthalpy(T, s.P[i])
			}
			w.lin[i], w.slope[i] = e, slope
			var below float64
			if i+1 < n {
				below = ga / (w.half[i] + w.half[i+1])
			}
			bent := below * w.bend[min(i+1, n-1)]
			w.lo[i], w.up[i] = -above, -below
			w.di[i] = s.M[i]*slope + above + below
			heat := s.M[i] * ev.cells[i].H
			produced += heat
			w.rhs[i] = s.R[i] + gh*heat - s.M[i]*(e-slope*T) + bent - (above+below)*w.bend[i] + lifted
			if w.run {
				w.di[i] -= gh * w.beta[i]
			}
			above, lifted = below, below*w.bend[i]
		}
	}
	s.terms.produced = produced / s.area
	if w.sourced {
		for i, q := range w.given {
			w.rhs[i] += ga * q
		}
	}
	ev.conducts(t, ga)
	for k := range ev.streams {
		ev.carry(&ev.streams[k], s, t, ga)
	}
}

// carry enters a stream of rock into the linear system.
func (ev *Evolution) carry(f *stream, s *stage, t, ga float64) {
	w, i := &ev.w, f.cell
	st := &ev.strata[ev.cells[i].layer]
	if f.T > 0 {
		e, _ := st.enthalpy(f.T, s.P[i])
		w.rhs[i] += ga * f.mass * e
		return
	}
	own, other, j, fixed := ev.face(i, f.top, t)
	T := own*w.guess[i] + fixed
	if j >= 0 {
		T += other * w.guess[j]
	}
	e, _ := st.enthalpy(T, s.P[i])
	f.latent = e - st.c*T // at the guess
	w.rhs[i] += ga * f.mass * (st.c*fixed + f.latent)
	w.di[i] -= ga * f.mass * st.c * own
	switch {
	case j > i:
		w.up[i] -= ga * f.mass * st.c * other
	case j >= 0:
		w.lo[i] -= ga * f.mass * st.c * other
	}
}

// face gives the temperature of a cell's top or bottom as own T_i + other T_j + fixed;
// j is -1 where there is no cell beyond.
func (ev *Evolution) face(i int, top bool, t float64) (own, other float64, j int, fixed float64) {
	w, n := &ev.w, len(ev.cells)
	switch {
	case top && i == 0:
		return 0, 0, -1, ev.surfaceAt(t)
	case !top && i == n-1 && ev.base.HasHeatFlow:
		return 1, 0, -1, ev.base.HeatFlow * w.half[i]
	case !top && i == n-1:
		return 0, 0, -1, ev.base.Temperature
	case top:
		j = i - 1
	default:
		j = i + 1
	}
	sum := w.half[i] + w.half[j]
	return w.half[j] / sum, w.half[i] / sum, j, 0
}

// faceT is the temperature of a cell's top or bottom for the cells' temperatures T.
func (ev *Evolution) faceT(i int, top bool, t float64, T []float64) float64 {
	own, other, j, fixed := ev.face(i, top, t)
	v := own*T[i] + fixed
	if j >= 0 {
		v += other * T[j]
	}
	return v
}
