package state

import (
	"fmt"

	"keelfall/column"
)

// melt warns of what melt rests on in the rock of that name with the state ps.
func (s *State) melt(name string, r *column.Rock, ps []Point) {
	m := r.Melt
	if m == nil {
		return
	}
	molten := func(more float64) func(Point) bool {
		return func(p Point) bool { phi, _ := m.At(p.T, p.P); return phi > more }
	}
	const beyond = "the melt fraction is above %g, and beyond about a quarter of melt a rock no longer is one with melt in it (common practice)"
	s.ranges(ps, molten(column.MeltLimit), func(where string) string {
		return fmt.Sprintf("%s: %s "+beyond, name, where, column.MeltLimit)
	})
	if m.Weakening > 0 {
		s.ranges(ps, molten(weakeningLimit), func(where string) string {
			return fmt.Sprintf("%s: %s the melt fraction is above %g, up to which the weakening was fitted (Hirth & Kohlstedt 2003, from memory)", name, where, weakeningLimit)
		})
	}
	if m.Density == 0 {
		s.ranges(ps, molten(0), func(where string) string {
			return fmt.Sprintf("%s: the melt %s has no density and leaves the rock's as it is", name, where)
		})
	}
}

// weakeningLimit is the melt fraction up to which exp(αφ) was fitted, for olivine: 10 to
// 12 %. Source: Hirth & Kohlstedt 2003, from memory (high).
const weakeningLimit = 0.12

// breaks warns where a rock without friction would bear a differential stress 2τ above
// the lithostatic pressure: rock breaks before that (common practice, no source).
func (s *State) breaks(name string, r *column.Rock, ps []Point) {
	if r.Viscosity.Creep == nil || r.Friction != nil {
		return
	}
	most := 0.0
	for _, p := range ps {
		if 2*p.Stress > p.P {
			most = max(most, 2*p.Stress)
		}
	}
	s.ranges(ps, func(p Point) bool { return 2*p.Stress > p.P && p.P > 0 }, func(where string) string {
		return fmt.Sprintf("%s: %s creep alone would bear a differential stress above the pressure there (up to %.2g GPa); rock breaks before that: friction would say where", name, where, most/1e9)
	})
}

// ranges warns once of each range of depths in which something holds; say is told where,
// "from 20.0 to 24.1 km".
func (s *State) ranges(ps []Point, holds func(Point) bool, say func(where string) string) {
	for i := 0; i < len(ps); i++ {
		if !holds(ps[i]) {
			continue
		}
		j := i
		for j+1 < len(ps) && holds(ps[j+1]) {
			j++
		}
		where := fmt.Sprintf("from %.1f to %.1f km", ps[i].Depth/1e3, ps[j].Depth/1e3)
		switch {
		case len(ps) == 1: // the half-space
			where = fmt.Sprintf("below %.1f km", ps[i].Depth/1e3)
		case i == j:
			where = fmt.Sprintf("at %.1f km", ps[i].Depth/1e3)
		}
		s.Warnings = append(s.Warnings, say(where))
		i = j
	}
}
