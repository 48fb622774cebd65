package heat

import (
	"fmt"
	"math"
)

// stream is rock that crosses a face of the column, during one step.
type stream struct {
	cell   int
	top    bool
	flux   string  // the layer of the Flux it is; "" for others
	below  bool    // rock of the base at the column's foot
	mass   float64 // kg/m²/s of present area; > 0 comes
	T      float64 // of rock that comes, K; 0: the temperature of the face
	latent float64 // of the face's rock, J/kg
	H, X   float64 // of rock that comes
	x      float64
	came   float64 // mass that crossed in the step, kg per m² at its start
	brings float64 // what it brings at the present temperatures, W/m²
}

// Step sizes: the error grows with the third power of the step.
const (
	safety   = 0.9
	shrink   = 0.2
	grow     = 4.0
	steady   = 1.1 // a step is not changed for less than this
	mostLost = 0.5 // of a cell's mass that one step may take
	maxReact = 0.05
	sliver   = 1e-3 // m: the thickness with which a layer is born, and below which it is gone
)

// attempt computes one step of length h into ev.two, and the error in K.
func (ev *Evolution) attempt(h float64) (float64, error) {
	n, w := len(ev.cells), &ev.w
	ev.one.size(n)
	ev.two.size(n)
	w.size(n)
	ev.start = sized(ev.start, n)
	if !ev.fresh {
		if err := ev.rates(); err != nil {
			return 0, err
		}
	}
	copy(ev.start, ev.f0)
	for k := range ev.streams {
		f := &ev.streams[k]
		T := f.T
		if T == 0 {
			own, other, j, fixed := ev.face(f.cell, f.top, ev.t)
			if T = own*ev.cells[f.cell].T + fixed; j >= 0 {
				T += other * ev.cells[j].T
			}
		}
		e, _ := ev.strata[ev.cells[f.cell].layer].enthalpy(T, ev.cells[f.cell].P)
		ev.start[f.cell] += f.mass * e
	}
	gh := gamma * h
	a1, a2 := math.Exp(ev.rate*gh), math.Exp(ev.rate*h)
	one, two := &ev.one, &ev.two
	one.area, two.area = a1, a2
	for i := range n {
		c := &ev.cells[i]
		one.M[i], two.M[i] = c.m, c.m
		one.R[i] = c.m * c.e
		s := &ev.strata[c.layer]
		_, slope := s.enthalpy(c.T, c.P)
		// A guess, and no more: half way where the rate would carry it far.
		d := gh * ev.f0[i] / (c.m * slope)
		if !ev.smooth {
			d = 0
		}
		w.guess[i] = c.T + min(max(d, -maxGuess), maxGuess)
	}
	for k := range ev.streams {
		f := &ev.streams[k]
		one.M[f.cell] += gh * a1 * f.mass
		f.came = h * ((1-gamma)*a1 + gamma*a2) * f.mass
		two.M[f.cell] += f.came
	}
	ev.pressures(one)
	if err := ev.solve(one, ev.t+gh, gh); err != nil {
		return 0, err
	}
	for i := range n {
		two.R[i] = one.R[i] + h*(1-gamma)*one.F[i]
		T0 := ev.cells[i].T
		w.guess[i] = T0 + min(max((one.T[i]-T0)/gamma, -maxGuess), maxGuess)
	}
	ev.pressures(two)
	if err := ev.solve(two, ev.t+h, gh); err != nil {
		return 0, err
	}
	// lte h³ F'' through the second difference of the rates, twice damped: of a rate λ
	// with z = λh the method's error is R(z) − exp(z), lte z³ for small z and 4.8/z for
	// large; the estimate is lte z³ and 3.2/z.
	const f0, f1, f2 = 2 * lte / gamma, -2 * lte / (gamma * (1 - gamma)), 2 * lte / (1 - gamma)
	for i := range n {
		w.rhs[i] = h * (f0*ev.start[i] + f1*one.F[i] + f2*two.F[i])
	}
	again(w.lo, w.di, w.up, w.rhs, w.guess)
	for i := range n {
		w.rhs[i] = two.M[i] * w.slope[i] * w.guess[i]
	}
	again(w.lo, w.di, w.up, w.rhs, w.guess)
	var worst float64
	for i := range n {
		worst = max(worst, math.Abs(w.guess[i]))
	}
	if math.IsNaN(worst) {
		return 0, errIterations
	}
	return worst, nil
}

const maxGuess = 20.0 // K

// pressures fills a stage's pressures from its masses and, with ev.w.run, keeps dP/dt.
func (ev *Evolution) pressures(s *stage) {
	n, w := len(ev.cells), &ev.w
	if !w.run {
		for i := range n {
			s.P[i] = ev.cells[i].P
		}
		return
	}
	var above float64
	g := ev.gravity / s.area
	for i := range n {
		s.P[i] = g * (above + s.M[i]/2)
		w.rise[i] = -ev.rate * s.P[i]
		above += s.M[i]
	}
	for k := range ev.streams {
		f := &ev.streams[k]
		if f.top { // at the base, the rock that is there feels nothing
			w.rise[f.cell] += ev.gravity * f.mass
		}
		for i := f.cell + 1; i < n; i++ {
			w.rise[i] += ev.gravity * f.mass
		}
	}
}

// rates computes what comes into each cell at the present temperatures, W/m², but for
// what streams of rock bring.
func (ev *Evolution) rates() error {
	n, w, s := len(ev.cells), &ev.w, &ev.two
	ev.f0 = sized(ev.f0, n)
	s.area = 1
	for i := range n {
		c := &ev.cells[i]
		s.M[i], s.R[i], w.guess[i], s.T[i] = c.m, 0, c.T, c.T
	}
	ev.pressures(s)
	if !ev.properties(s, w.guess) {
		return ev.domain
	}
	ev.edges(s, s.T, ev.t)
	if ev.heater != nil {
		ev.heater(ev.t, w.given)
	}
	// From face to face: the linear system would lose it in round-off.
	above, last := ev.through(s.T, ev.t) // above leaves at the cell's top
	for i := range n {
		below := last
		switch {
		case i == 0 && n > 1:
			below = w.top.from(s.T[0], s.T[1], ev.surfaceAt(ev.t))
		case i == n-2 && !ev.base.HasHeatFlow:
			below = -w.foot.from(s.T[n-1], s.T[n-2], ev.base.Temperature)
		case i+1 < n:
			below = (s.T[i+1] + w.bend[i+1] - s.T[i] - w.bend[i]) / (w.half[i] + w.half[i+1])
		}
		f := below - above + s.M[i]*ev.cells[i].H
		if w.run {
			f += w.beta[i] * s.T[i]
		}
		if w.sourced {
			f += w.given[i]
		}
		ev.f0[i], above = f, below
	}
	ev.fresh = true
	return nil
}

// step advances by at most h, and sets ev.h to what the next one may be.
func (ev *Evolution) step(limit float64) error {
	for {
		if ev.err != nil {
			return ev.err
		}
		if err := ev.prepare(limit); err != nil {
			return err
		}
		h := min(ev.h, limit)
		if limit < 1.5*h && limit > h { // two halves rather than a sliver at the end
			h = limit / 2
		}
		ev.setStreams(h)
		worst, err := ev.attempt(h)
		if err != nil && err != errIterations {
			return fmt.Errorf("%w, at %s", err, inMyr(ev.t))
		}
		if err != nil {
			worst = inf
		}
		factor := safety * math.Cbrt(ev.tolerance/worst)
		if worst > ev.tolerance {
			ev.rejected++
			ev.h = h * min(max(factor, shrink/2), safety)
			if ev.h < max(1e-14*ev.t, 1e-2) {
				if err != nil && ev.domain.layer != "" {
					return fmt.Errorf("%w (after %s)", ev.domain, inMyr(ev.t))
				}
				return fmt.Errorf("heat: at %s the time step falls to %.3g s; the error is still %.3g K", inMyr(ev.t), ev.h, worst)
			}
			continue
		}
		ev.accept(h)
		factor = min(max(factor, shrink), grow)
		if x := ev.reacted; x > 0 {
			factor = min(factor, maxReact/x)
		}
		if h >= ev.h || factor < 1 {
			if factor > steady || factor < 1 {
				ev.h = h * factor
			}
		} else {
			ev.h = max(ev.h, h*factor)
		}
		return ev.err
	}
}

// accept takes ev.two as the column.
func (ev *Evolution) accept(h float64) {
	two := &ev.two
	ev.ledger(h)
	ev.follow(h)
	area := math.Exp(ev.spread)
	for k := range ev.streams {
		f := &ev.streams[k]
		if f.top {
			ev.strata[ev.cells[f.cell].layer].worn -= f.came
		}
		if f.flux != "" {
			ev.flown[f.flux] += f.came * area
		}
		if f.mass > 0 {
			c := &ev.cells[f.cell]
			share := f.came / (c.m + f.came)
			c.H += share * (f.H - c.H)
			c.X += share * (f.X - c.X)
			c.x += share * (f.x - c.x)
		}
	}
	for j := range ev.strata {
		ev.strata[j].worn /= two.area
	}
	ev.t += h
	ev.spread += h * ev.rate
	ev.steps++
	ev.react(h)
	var above float64
	for i := range ev.cells {
		c := &ev.cells[i]
		c.e = two.E[i] / two.M[i]
		c.m = two.M[i] / two.area
		c.P = ev.gravity * (above + c.m/2)
		above += c.m
		c.T = c.e / ev.strata[c.layer].c
		ev.settle(c)
		ev.f0[i] = two.F[i] / two.area
	}
	for k := range ev.streams {
		f := &ev.streams[k]
		ev.f0[f.cell] -= f.brings
	}
	ev.smooth = true
	ev.adapt()
	ev.chart()
	if ev.record != nil {
		ev.record()
	}
}

// surfaceAt is the surface temperature, K.
func (ev *Evolution) surfaceAt(t float64) float64 {
	if ev.driven != nil {
		return ev.driven(t)
	}
	return ev.surfaceT
}
