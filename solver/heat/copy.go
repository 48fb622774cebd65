package heat

import (
	"maps"
	"slices"
)

// Copy returns the evolution as it is now, to go its own way: what one does the other
// does not feel, and driven alike both come to the same bits. Its cost is that of the
// cells, some 50 kB for 300.
func (ev *Evolution) Copy() *Evolution {
	c := *ev
	c.strata, c.cells, c.spare = slices.Clone(ev.strata), slices.Clone(ev.cells), nil
	c.growing, c.fluxes = slices.Clone(ev.growing), slices.Clone(ev.fluxes)
	c.sources, c.streams = slices.Clone(ev.sources), slices.Clone(ev.streams)
	c.taken, c.flown = maps.Clone(ev.taken), maps.Clone(ev.flown)
	c.tracks = slices.Clone(ev.tracks)
	for i := range c.tracks {
		t := &c.tracks[i]
		t.Time, t.Depth, t.T, t.P = slices.Clone(t.Time), slices.Clone(t.Depth), slices.Clone(t.T), slices.Clone(t.P)
	}
	c.record = nil // it belongs to who asked for it
	c.warnings = slices.Clone(ev.warnings)
	for _, x := range []*[]float64{&c.w.half, &c.w.bend, &c.w.lo, &c.w.di, &c.w.up, &c.w.rhs, &c.w.beta, &c.w.given, &c.w.guess, &c.w.lin, &c.w.slope, &c.w.rise} {
		*x = slices.Clone(*x)
	}
	for _, s := range []*stage{&c.one, &c.two} {
		for _, x := range []*[]float64{&s.T, &s.P, &s.M, &s.R, &s.E, &s.F} {
			*x = slices.Clone(*x)
		}
	}
	c.f0, c.start = slices.Clone(ev.f0), slices.Clone(ev.start)
	c.marks, c.curve, c.thick = nil, nil, nil
	return &c
}
