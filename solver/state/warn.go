package state

import (
	"fmt"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
)

// warn lists what the state rests on: cautions of each law, once, with the rocks that
// use it, and the depths where a viscosity limit carries more than half.
func (s *State) warn() {
	c := s.Column
	var texts []string
	rocks := map[string][]string{}
	note := func(name string, laws *rheology.Creep, r *column.Rock, deepest Point) {
		for _, t := range laws.Cautions(r.Conditions(deepest.T, deepest.P)) {
			if rocks[t] == nil {
				texts = append(texts, t)
			}
			rocks[t] = append(rocks[t], name)
		}
	}
	for i := range c.Layers {
		if laws := c.Layers[i].Viscosity.Creep; laws != nil {
			ps := s.Layers[i].Points
			note(c.Layers[i].Name, laws, &c.Layers[i].Rock, ps[len(ps)-1])
		}
	}
	if c.Base.Boundary == column.HalfSpace && c.Base.Viscosity.Creep != nil {
		note("the half-space", c.Base.Viscosity.Creep, &c.Base.Rock, s.Base)
	}
	for _, t := range texts {
		s.Warnings = append(s.Warnings, fmt.Sprintf("%s (in %s)", t, strings.Join(rocks[t], ", ")))
	}
	for i := range c.Layers {
		s.limited(c.Layers[i].Name, s.Layers[i].Points, "highest", c.Limits.Highest, func(p Point) bool { return p.Capped })
		s.limited(c.Layers[i].Name, s.Layers[i].Points, "lowest", c.Limits.Lowest, func(p Point) bool { return p.Floored })
	}
	s.limited("the half-space", []Point{s.Base}, "highest", c.Limits.Highest, func(p Point) bool { return p.Capped })
	s.limited("the half-space", []Point{s.Base}, "lowest", c.Limits.Lowest, func(p Point) bool { return p.Floored })
}

// limited warns of each range of depths in which a limit bites.
func (s *State) limited(name string, ps []Point, which string, limit float64, bites func(Point) bool) {
	for i := 0; i < len(ps); i++ {
		if !bites(ps[i]) {
			continue
		}
		j := i
		for j+1 < len(ps) && bites(ps[j+1]) {
			j++
		}
		s.Warnings = append(s.Warnings, fmt.Sprintf("%s: the %s viscosity, %.3g Pa s, decides from %.1f to %.1f km, not the creep law",
			name, which, limit, ps[i].Depth/1e3, ps[j].Depth/1e3))
		i = j
	}
}
