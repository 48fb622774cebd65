package heat

import (
	"fmt"
	"math"
	"slices"
)

// Remove takes a share, above 0 to 1, of a layer's mass away at once, from its base.
// Under a half-space or an inviscid base, rock of the base takes its place, along the
// adiabat from the column's foot; of a root layer, below the root. Over a rigid or
// free-slip base the column is shorter afterwards. A share thinner than a millimetre stays.
//
// Errors: a layer that is not there, a share out of range.
func (ev *Evolution) Remove(layer string, share float64) error {
	if err := ev.remove(layer, share); err != nil {
		return fmt.Errorf("heat: remove from %s: %w", layer, err)
	}
	if err := ev.restart(); err != nil {
		return err
	}
	ev.chart()
	if ev.record != nil {
		ev.record()
	}
	return nil
}

func (ev *Evolution) remove(layer string, share float64) error {
	j, ok := ev.find(layer)
	if !ok {
		return fmt.Errorf("the layer is not there")
	}
	if !(share > 0 && share <= 1) {
		return fmt.Errorf("share %g, must be above 0 and at most 1", share)
	}
	s := &ev.strata[j]
	if len(ev.strata) == 1 && share == 1 && !ev.open {
		return fmt.Errorf("nothing would be left of the column")
	}
	last := &ev.cells[len(ev.cells)-1]
	foot := last.P + ev.gravity*last.m/2
	mass := ev.massOf(j)
	if share < 1 && share*ev.thicknessOf(s) < sliver {
		return ev.err // nothing to speak of
	}
	ev.cut(j, mass*(1-share))
	left, gone, went, cutAt := mass*share, 0.0, 0.0, s.hi
	if share == 1 {
		left = inf
	}
	for i := s.hi - 1; i >= s.lo && left > 0; i-- {
		c := &ev.cells[i]
		m := c.m
		if m > left*(1+1e-12) {
			m = left
		} else {
			cutAt = i
		}
		gone += m / ev.rho(c)
		went += m
		ev.gain(-m, c.e, false)
		c.m -= m
		c.P -= ev.gravity * m / 2 // what stays is where it was
		left -= m
	}
	root := s.root
	ev.cells = slices.Delete(ev.cells, cutAt, s.hi)
	at := j + 1
	if s.lo == cutAt {
		ev.drop(j)
		at = j
	} else {
		ev.index()
	}
	for root && at < len(ev.strata) && ev.strata[at].root {
		at++
	}
	if ev.open && gone >= sliver { // less comes in at the foot
		ev.fill(at, gone, foot-ev.gravity*went)
	}
	ev.press(true)
	return ev.level()
}

// fill puts rock of the base, thickness thick, in front of stratum at; without it the
// foot of the column is at the pressure foot.
func (ev *Evolution) fill(at int, thickness, foot float64) {
	s := newStratum(ev.footName(), ev.base.Rock, false, thickness)
	s.below = true
	n := int(math.Max(leastEach, math.Ceil(2*thickness/ev.dmax)))
	cells := make([]cell, n)
	var weight float64
	for range 4 { // the adiabat starts from the foot, whose pressure they make
		var P float64
		if at > 0 {
			c := &ev.cells[ev.strata[at-1].hi-1]
			P = c.P + ev.gravity*c.m/2
		}
		under := foot + weight
		weight = 0
		for i := range cells {
			cells[i] = ev.rock(&s, thickness/float64(n), ev.adiabat(under, P), P, ev.gravity, 1)[0]
			c := &cells[i]
			c.T = ev.adiabat(under, c.P)
			c.e, _ = s.enthalpy(c.T, c.P)
			c.x = 0
			P += ev.gravity * c.m
			weight += ev.gravity * c.m
		}
	}
	ev.add(at, s, cells, true)
	if at+1 < len(ev.strata) && ev.strata[at+1].below {
		ev.unite(at)
	}
	if at > 0 && ev.strata[at-1].below {
		ev.unite(at - 1)
	}
}

// unite makes strata j and j+1, both rock of the base, one.
func (ev *Evolution) unite(j int) {
	ev.strata = slices.Delete(ev.strata, j+1, j+2)
	for i := range ev.cells {
		if ev.cells[i].layer > j {
			ev.cells[i].layer--
		}
	}
	for i := range ev.tracks {
		if ev.tracks[i].layer > j {
			ev.tracks[i].layer--
		}
	}
	ev.index()
}

func (ev *Evolution) footName() string {
	for {
		ev.feet++
		name := "asthenosphere"
		if ev.feet > 1 {
			name = fmt.Sprintf("asthenosphere %d", ev.feet)
		}
		if _, there := ev.find(name); !there && !ev.taken[name] {
			return name
		}
	}
}

// level takes rock of the base away from the foot where a jump has pushed it below the
// thermal base. What is too short fills in the steps that follow.
func (ev *Evolution) level() error {
	if !ev.open {
		return ev.err
	}
	for {
		last := len(ev.strata) - 1
		all, _ := ev.depths()
		over := all - ev.depth0
		if over <= 0 || !ev.strata[last].below {
			return ev.err
		}
		c := &ev.cells[len(ev.cells)-1]
		d := ev.thickness(c)
		if over < d-sliver {
			m := over / d * c.m
			ev.gain(-m, c.e, true)
			c.m -= m
			c.P -= ev.gravity * m / 2
			ev.press(true)
			ev.index()
			return ev.err
		}
		ev.gain(-c.m, c.e, true)
		ev.cells = ev.cells[:len(ev.cells)-1]
		if s := &ev.strata[last]; s.hi-s.lo == 1 {
			ev.end(last, "pushed out at the column's foot")
			ev.drop(last)
		} else {
			ev.index()
		}
	}
}
