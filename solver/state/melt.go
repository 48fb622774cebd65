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
	s.ranges(ps, molten(column.MeltLimit), func(from, to float64) string {
		return fmt.Sprintf("%s: from %.1f to %.1f km "+beyond, name, from, to, column.MeltLimit)
	})
	if m.Density == 0 {
		s.ranges(ps, molten(0), func(from, to float64) string {
			return fmt.Sprintf("%s: the melt from %.1f to %.1f km has no density and leaves the rock's as it is", name, from, to)
		})
	}
}

// ranges warns once of each range of depths in km in which something holds.
func (s *State) ranges(ps []Point, holds func(Point) bool, say func(from, to float64) string) {
	for i := 0; i < len(ps); i++ {
		if !holds(ps[i]) {
			continue
		}
		j := i
		for j+1 < len(ps) && holds(ps[j+1]) {
			j++
		}
		s.Warnings = append(s.Warnings, say(ps[i].Depth/1e3, ps[j].Depth/1e3))
		i = j
	}
}
