package heat

import (
	"fmt"
	"slices"
)

// thinned takes out layers that stretching has made thinner than a tenth of a sliver, where
// rock of the base comes in for them, and keeps the coarsest cell to what the column has
// become.
func (ev *Evolution) thinned() error {
	if ev.rate > 0 && ev.open {
		for j := len(ev.strata) - 1; j >= 0 && len(ev.strata) > 1; j-- {
			s := &ev.strata[j]
			if s.below || ev.grows(s.name) || ev.thicknessOf(s) >= sliver/10 {
				continue
			}
			for s.hi-s.lo > 1 {
				ev.join(s.lo)
			}
			ev.takeOut(s.lo, "stretched to nothing", false)
			ev.press(false)
		}
	}
	if ev.rate != 0 { // no step so long that the column is another one after it
		ev.h = min(ev.h, 1/abs(ev.rate))
	}
	return ev.bounded()
}

// bounded refuses a column of no thickness or without end.
func (ev *Evolution) bounded() error {
	all, _ := ev.depths()
	switch {
	case !(all <= deepest):
		return fmt.Errorf("heat: at %s the column is %.4g km deep; at most %.4g km can be followed", inMyr(ev.t), all/1e3, deepest/1e3)
	case !ev.open && all < thinnest:
		return fmt.Errorf("heat: at %s the column is %.3g m thick; nothing thinner than %g m can be followed", inMyr(ev.t), all, thinnest)
	}
	ev.dmax = 2 * max(ev.depth0, all/4) / float64(ev.points)
	return ev.err
}

// thicknessOf a stratum now, m.
func (ev *Evolution) thicknessOf(s *stratum) float64 {
	var d float64
	for i := s.lo; i < s.hi; i++ {
		d += ev.thickness(&ev.cells[i])
	}
	return d
}

// grows says whether rock comes to a layer.
func (ev *Evolution) grows(layer string) bool {
	comes := func(f Flux) bool { return f.Layer == layer && f.Rate > 0 }
	return slices.ContainsFunc(ev.growing, comes) || slices.ContainsFunc(ev.fluxes, comes)
}
