package state

import (
	"fmt"
	"strings"

	"keelfall/column"
	"keelfall/rheology"
)

// warn lists what the state rests on: cautions of each law and density, once, with the
// rocks that use it, and the depths where a viscosity limit or friction decides.
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
	caution := func(d column.Density, name string) {
		if k, ok := d.(interface{ Cautions() []string }); ok {
			for _, t := range k.Cautions() {
				if rocks[t] == nil {
					texts = append(texts, t)
				}
				rocks[t] = append(rocks[t], name)
			}
		}
	}
	for i := range c.Layers {
		if laws := c.Layers[i].CreepWith(c.Limits); laws != nil {
			ps := s.Layers[i].Points
			note(c.Layers[i].Name, laws, &c.Layers[i].Rock, ps[len(ps)-1])
		}
	}
	if c.Base.Boundary == column.HalfSpace && c.Base.Viscosity.Creep != nil {
		note("the half-space", c.Base.CreepWith(c.Limits), &c.Base.Rock, s.Base)
	}
	for i := range c.Layers {
		caution(c.Layers[i].Density, c.Layers[i].Name)
	}
	if b := c.Base.Boundary; b == column.HalfSpace || b == column.Inviscid {
		caution(c.Base.Density, "the base")
	}
	for _, t := range texts {
		s.Warnings = append(s.Warnings, fmt.Sprintf("%s (in %s)", t, strings.Join(rocks[t], ", ")))
	}
	for i := range c.Layers {
		s.limits(c.Layers[i].Name, s.Layers[i].Points)
	}
	s.limits("the half-space", []Point{s.Base})
}

// limits warns of what decides in place of creep.
func (s *State) limits(name string, ps []Point) {
	l := s.Column.Limits
	s.limited(name, ps, "friction", func(p Point) bool { return p.Yielding && !p.Floored })
	s.limited(name, ps, fmt.Sprintf("the highest viscosity, %.3g Pa s,", l.Highest), func(p Point) bool { return p.Capped })
	s.limited(name, ps, fmt.Sprintf("the lowest viscosity, %.3g Pa s,", l.Lowest), func(p Point) bool { return p.Floored })
}

// limited warns of each range of depths in which a limit bites.
func (s *State) limited(name string, ps []Point, which string, bites func(Point) bool) {
	for i := 0; i < len(ps); i++ {
		if !bites(ps[i]) {
			continue
		}
		j := i
		for j+1 < len(ps) && bites(ps[j+1]) {
			j++
		}
		s.Warnings = append(s.Warnings, fmt.Sprintf("%s: %s decides from %.1f to %.1f km, not the creep law",
			name, which, ps[i].Depth/1e3, ps[j].Depth/1e3))
		i = j
	}
}
