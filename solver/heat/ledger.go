package heat

import "math"

// ledger books a step. Its terms are integrated in time with the method's own weights,
// so that the balance closes to round-off; what is left when area grows has gone
// sideways.
func (ev *Evolution) ledger(h float64) {
	a, b := &ev.one.terms, &ev.two.terms
	h1, h2 := h*(1-gamma), h*gamma
	e := &ev.energy
	e.Surface += h1*a.surface + h2*b.surface
	e.Conducted += h1*a.conducted + h2*b.conducted
	e.Produced += h1*a.produced + h2*b.produced
	e.Given += h1*a.given + h2*b.given
	e.Compression += h1*a.compression + h2*b.compression
	e.FromBelow += h1*a.below + h2*b.below
	e.Added += h1*a.added + h2*b.added
	e.Taken += h1*a.taken + h2*b.taken
	e.Moved += h1*a.sizes + h2*b.sizes
	n1 := a.net()
	a1, a2 := ev.one.area, ev.two.area
	if ev.rate != 0 {
		// What is here after the step per area of its start, and per present area.
		start := ev.content()
		sideways := start*(1-1/a2) + h1*n1*(1-a1/a2)
		e.Sideways += sideways
		e.Moved += abs(sideways)
	}
	ev.bookMass(h1, h2)
}

// net is what all terms together bring, W per present m².
func (b *terms) net() float64 {
	return b.conducted + b.produced + b.given + b.compression + b.below + b.added - b.surface - b.taken
}

func (ev *Evolution) bookMass(h1, h2 float64) {
	m := &ev.massBook
	var mass float64
	if ev.rate != 0 {
		for i := range ev.cells {
			mass += ev.cells[i].m
		}
	}
	a1, a2 := ev.one.area, ev.two.area
	sideways := mass * (1 - 1/a2)
	for k := range ev.streams {
		f := &ev.streams[k]
		d := (h1 + h2) * f.mass
		sideways += h1 * f.mass * (1 - a1/a2)
		m.Moved += abs(d)
		switch {
		case f.below:
			m.FromBelow += d
		case d > 0:
			m.Added += d
		default:
			m.Taken -= d
		}
	}
	m.Sideways += sideways
	m.Moved += abs(sideways)
}

// content is the enthalpy of the column, J/m².
func (ev *Evolution) content() float64 {
	var sum float64
	for i := range ev.cells {
		sum += ev.cells[i].m * ev.cells[i].e
	}
	return sum
}

// gain books rock that comes or goes (m < 0) at once.
func (ev *Evolution) gain(m, e float64, below bool) {
	q := m * e
	ev.energy.Moved += abs(q)
	ev.massBook.Moved += abs(m)
	switch {
	case below:
		ev.energy.FromBelow += q
		ev.massBook.FromBelow += m
	case m > 0:
		ev.energy.Added += q
		ev.massBook.Added += m
	default:
		ev.energy.Taken -= q
		ev.massBook.Taken -= m
	}
}

// Energy returns every term of the balance since the start.
func (ev *Evolution) Energy() Energy {
	e := ev.energy
	e.Stored = ev.content() - ev.content0
	e.Missing = e.Stored - (e.Conducted + e.Produced + e.Given + e.Compression + e.FromBelow + e.Added) + e.Surface + e.Sideways + e.Taken
	return e
}

// Mass returns the balance of mass since the start.
func (ev *Evolution) Mass() Mass {
	m := ev.massBook
	for i := range ev.cells {
		m.Stored += ev.cells[i].m
	}
	m.Stored -= ev.mass0
	m.Missing = m.Stored - m.FromBelow - m.Added + m.Taken + m.Sideways
	return m
}

func abs(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}

// account computes the terms of the balance from a stage's temperatures, with the
// properties at hand.
func (ev *Evolution) account(s *stage, t float64) {
	w, n := &ev.w, len(ev.cells)
	b := terms{produced: s.terms.produced}
	b.surface, b.conducted = ev.through(s.T, t)
	if w.run {
		for i := range n {
			b.compression += w.beta[i] * s.T[i]
		}
		b.compression /= s.area
	}
	if w.sourced {
		for _, q := range w.given {
			b.given += q
		}
	}
	for k := range ev.streams {
		f := &ev.streams[k]
		st := &ev.strata[ev.cells[f.cell].layer]
		var e float64
		if f.T > 0 {
			e, _ = st.enthalpy(f.T, s.P[f.cell])
		} else {
			e = st.c*ev.faceT(f.cell, f.top, t, s.T) + f.latent
		}
		f.brings = e * f.mass
		switch e = f.brings; {
		case f.below:
			b.below += e
		case f.mass > 0:
			b.added += e
		default:
			b.taken -= e
		}
	}
	b.sizes = math.Abs(b.surface) + math.Abs(b.conducted) + math.Abs(b.produced) + math.Abs(b.compression) +
		math.Abs(b.given) + math.Abs(b.below) + b.added + b.taken
	s.terms = b
}
